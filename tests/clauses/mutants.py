"""What `mutate.py` changes in a text, where, and which changes are known to make no difference."""

from __future__ import annotations

import ast
import re
from collections.abc import Callable, Iterator
from copy import deepcopy
from pathlib import Path
from typing import Any, NamedTuple

INDIFFERENT = Path(__file__).resolve().with_name("indifferent.txt")
ABOUT = {ast.LtE: ast.Gt, ast.Lt: ast.GtE, ast.GtE: ast.Lt, ast.Gt: ast.LtE}
Function = tuple[str, int]  # file, first line


class Mutant(NamedTuple):
    """A changed text: where it is changed (columns in bytes, as `ast` has them), and how in words."""

    line: int
    first: int
    last: int
    said: str
    text: str
    owner: str  # the outermost function whose body it is in, "Class.name"; empty outside of bodies


def mutants(text: str) -> Iterator[Mutant]:
    """Every change of a text, one at a time."""
    tree = ast.parse(text)
    owners = _owners(tree)
    for place, node in enumerate(_outside_words(tree)):
        for said, change in _changes(node):
            copied = deepcopy(tree)
            change(_outside_words(copied)[place])
            where = node.lineno, node.col_offset, node.end_col_offset
            yield Mutant(*where, said, ast.unparse(copied), owners.get(id(node), ""))


def _owners(tree: ast.AST, above: str = "") -> dict[int, str]:
    """For each node in the body of a function the name of the outermost one."""
    found: dict[int, str] = {}
    for each in ast.iter_child_nodes(tree):
        if isinstance(each, ast.FunctionDef):
            found |= {id(node): above + each.name for part in each.body for node in ast.walk(part)}
        elif isinstance(each, ast.ClassDef):
            found |= _owners(each, f"{above}{each.name}.")
    return found


class Indifferent(NamedTuple):
    """A place where a change makes no difference: ``‹ ›`` in the fragment of a line stand about it."""

    file: str
    fragment: str
    why: str

    def fits(self, line: str, mutant: Mutant) -> bool:
        """Whether a mutant changes just this piece of a source line."""
        before, _, rest = self.fragment.partition("‹")
        piece, _, after = rest.partition("›")
        raw = line.encode()
        first, last = raw[: mutant.first].decode(), raw[mutant.last :].decode()
        here = raw[mutant.first : mutant.last].decode() == piece
        return here and first.endswith(before) and last.startswith(after)


def read_indifferent(path: Path = INDIFFERENT) -> list[Indifferent]:
    """The table of such places: file, fragment and reason, a tab between them; # begins a remark."""
    lines = path.read_text(encoding="utf-8").splitlines()
    return [Indifferent(*line.split("\t")) for line in lines if line and not line.startswith("#")]


def _outside_words(tree: ast.AST) -> list[ast.AST]:
    """Every node that is not part of an f-string."""
    words = (each for each in ast.walk(tree) if isinstance(each, ast.JoinedStr))
    inside = {id(node) for each in words for node in ast.walk(each)}
    return [node for node in ast.walk(tree) if id(node) not in inside]


def _changes(node: ast.AST) -> Iterator[tuple[str, Callable[[Any], None]]]:
    """What can be changed about a node: in words, and what does it."""
    if isinstance(node, ast.Constant) and (larger := _larger(node.value)) is not None:

        def enlarge(other: Any) -> None:
            other.value = larger

        yield f"{node.value!r} -> {larger!r}", enlarge
    if isinstance(node, ast.Compare) and len(node.ops) == 1 and type(node.ops[0]) in ABOUT:
        about = ABOUT[type(node.ops[0])]

        def turn(other: Any) -> None:
            other.ops = [about()]

        yield f"{ast.unparse(node)} turned over", turn


def _larger(value: object) -> float | str | None:
    """A number 1 % larger, also one that is written as a text; None for anything else."""
    if isinstance(value, str):
        return f"{float(value) * 1.01:.6g}" if re.fullmatch(r"[0-9]+\.[0-9]+", value) else None
    if isinstance(value, bool) or not isinstance(value, int | float):
        return None
    return value * 1.01 if value else 0.01


def functions(tree: ast.AST) -> list[ast.FunctionDef | ast.Lambda]:
    """Every function of a module."""
    return [each for each in ast.walk(tree) if isinstance(each, ast.FunctionDef | ast.Lambda)]


def first_line(each: ast.FunctionDef | ast.Lambda) -> int:
    """Where a function begins, decorators included."""
    return min([each.lineno, *(mark.lineno for mark in getattr(each, "decorator_list", []))])


def around(tree: ast.AST, path: Path, line: int) -> set[Function]:
    """The functions whose text contains a line; the whole module's for a line outside."""
    everywhere = {(str(path), first_line(each)) for each in functions(tree)}
    inside = {
        (str(path), first_line(each))
        for each in functions(tree)
        if first_line(each) <= line <= (each.end_lineno or 0)
    }
    return inside or everywhere
