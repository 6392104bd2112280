"""A job file as bytes, as data, and where each of its keys stands.

``tomllib`` says what the file means; tree-sitter says on which line every key and every item of an
array stands, which ``tomllib`` does not tell.
"""

from __future__ import annotations

import hashlib
import re
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.job.errors import CalcpackError

if TYPE_CHECKING:
    from tree_sitter import Node

LARGEST = 2_000_000  # bytes of a job file or a table
DEEPEST = 24  # arrays and tables one in the other

MOST_DOTS = 100  # in a line

KeyPath = tuple[str | int, ...]


@dataclass(frozen=True)
class FileBytes:
    """A file as read: its name as the user says it, its bytes and their SHA-256."""

    name: str
    content: bytes

    @property
    def sha256(self) -> str:
        """The SHA-256 of the bytes."""
        return hashlib.sha256(self.content).hexdigest()

    def text(self) -> str:
        """The bytes as UTF-8, with or without a byte-order mark."""
        try:
            return self.content.decode("utf-8-sig")
        except UnicodeDecodeError as error:
            line = self.content.count(b"\n", 0, error.start) + 1
            raise CalcpackError(
                "the file is not UTF-8 text", remedy="save it as UTF-8", file=self.name, line=line
            ) from None


@dataclass(frozen=True)
class Document:
    """A TOML file: its data, and the line of every key."""

    file: str
    data: dict[str, Any]
    lines: dict[KeyPath, int]

    def line(self, path: KeyPath) -> int | None:
        """The line of a key, or of what it stands in."""
        for length in range(len(path), 0, -1):
            if path[:length] in self.lines:
                return self.lines[path[:length]]
        return None


def read_bytes(path: Path, name: str) -> FileBytes:
    """Read a file a user named.

    Parameters
    ----------
    path : Path
    name : str
        How messages call it.

    Raises
    ------
    CalcpackError
        It is missing, no file, too large or may not be read.
    """
    try:
        if path.is_dir():
            raise CalcpackError("this is a folder", remedy="name a file in it", file=name)
        if not path.exists():
            raise CalcpackError("there is no such file", file=name)
        if not path.is_file():
            raise CalcpackError("this is not a regular file", file=name)
        size = path.stat().st_size
        if size > LARGEST:
            message = f"the file has {size / 1e6:.1f} MB, at most {LARGEST / 1e6:.0f} MB are read"
            raise CalcpackError(message, remedy="split the job into several", file=name)
        return FileBytes(name, path.read_bytes())
    except (OSError, ValueError) as error:  # ValueError: a NUL in the path
        reason = getattr(error, "strerror", None) or str(error)
        raise CalcpackError(f"the file cannot be read: {reason.lower()}", file=name) from None


def parse_toml(file: FileBytes) -> Document:
    """Parse a TOML file.

    Raises
    ------
    CalcpackError
        The text is not UTF-8 or not TOML.

    Examples
    --------
    >>> document = parse_toml(FileBytes("a.toml", b"format = 1\\n[job]\\ntitle = 'Loft'"))
    >>> document.data["job"], document.line(("job", "title"))
    ({'title': 'Loft'}, 3)
    """
    text = file.text()
    for number, line in enumerate(text.splitlines() if text.count(".") > MOST_DOTS else (), 1):
        if line.count(".") > MOST_DOTS:  # the parser takes quadratic time over the parts of a key
            message = f"there are more than {MOST_DOTS} dots in this line"
            raise CalcpackError(message, remedy="break the line", file=file.name, line=number)
    try:
        data = tomllib.loads(text)
    except RecursionError:
        raise CalcpackError("arrays or tables are nested too deeply", file=file.name) from None
    except ValueError as error:  # TOMLDecodeError, and numbers of thousands of digits
        raise _syntax_error(str(error), file.name, text) from None
    lines: dict[KeyPath, int] = {}
    for path, place in _places(_tree(text.encode())):
        if len(path) <= 2 * DEEPEST:
            lines.setdefault(path, place)
    return Document(file.name, data, lines)


def _syntax_error(reason: str, name: str, text: str) -> CalcpackError:
    """The parser's own reason, with its place where ours stands."""
    match = re.fullmatch(r"(.*) \(at (?:line (\d+), column (\d+)|end of document)\)", reason, re.DOTALL)
    if not match:
        return CalcpackError("this is not TOML: a number has thousands of digits", file=name)
    what, line, column = match.groups()
    if what == "Cannot overwrite a value":
        what = "a key is given a second time"
    if keys := re.fullmatch(r"Cannot declare \((.*)\) twice", what):
        table = ".".join(re.findall("'([^']*)'", keys[1]))
        what = f"the table [{table}] is given a second time"
    where = f"at column {column}" if column else "at the end of the file"
    number = int(line) if line else text.rstrip("\n").count("\n") + 1
    return CalcpackError(f"this is not TOML: {what[:1].lower()}{what[1:]}, {where}", file=name, line=number)


def _tree(content: bytes) -> Node:
    import tree_sitter
    import tree_sitter_toml

    return tree_sitter.Parser(tree_sitter.Language(tree_sitter_toml.language())).parse(content).root_node


def _places(root: Node) -> Iterator[tuple[KeyPath, int]]:
    """Every key and array item with its line, tables in the order they stand."""
    counts: dict[KeyPath, int] = {}  # how many elements each array of tables has so far
    for node in root.named_children:
        if node.type == "pair":
            yield from _pair((), node)
        elif node.type in ("table", "table_array_element"):
            keys = _keys(node.named_children[0])
            path: KeyPath = ()
            for depth, key in enumerate(keys):
                path = (*path, key)
                yield path, node.start_point.row + 1
                if depth == len(keys) - 1 and node.type == "table_array_element":
                    counts[path] = counts.get(path, 0) + 1
                if path in counts:
                    path = (*path, counts[path] - 1)
            yield path, node.start_point.row + 1
            for child in node.named_children[1:]:
                if child.type == "pair":
                    yield from _pair(path, child)


def _pair(table: KeyPath, node: Node) -> Iterator[tuple[KeyPath, int]]:
    key, value = (child for child in node.named_children if child.type != "comment")
    path = table
    for part in _keys(key):
        path = (*path, part)
        yield path, key.start_point.row + 1
    yield from _value(path, value)


def _value(path: KeyPath, node: Node) -> Iterator[tuple[KeyPath, int]]:
    if len(path) > 4 * DEEPEST:  # refused by the reader; here only the recursion is bounded
        return
    if node.type == "inline_table":
        for child in node.named_children:
            if child.type == "pair":
                yield from _pair(path, child)
    elif node.type == "array":
        for place, child in enumerate(each for each in node.named_children if each.type != "comment"):
            yield (*path, place), child.start_point.row + 1
            yield from _value((*path, place), child)


def _keys(node: Node) -> list[str]:
    """The parts of a key, unquoted."""
    if node.type == "dotted_key":  # what is left of the last dot, and what is right of it
        return [part for child in node.named_children for part in _keys(child)]
    text = (node.text or b"").decode()
    if node.type == "quoted_key":
        return list(tomllib.loads(f"{text} = 0"))
    return [text]
