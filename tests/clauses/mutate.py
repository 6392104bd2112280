"""Change the clauses one number or one comparison at a time, and see whether a test notices.

    python tests/clauses/mutate.py calcpack/clauses/en1993 tests/clauses/en1993 tests/reference/test_en1993.py

The first argument is a module or a package, the others are the tests to run. Nothing on disk is changed:
each mutant is a forked process that imports the changed text. Numbers are made 1 % larger, comparisons say
the opposite. Survivors are for somebody to look at: some changes make no difference.
"""

from __future__ import annotations

import ast
import importlib.abc
import importlib.machinery
import io
import os
import re
import signal
import sys
from collections.abc import Callable, Iterator
from contextlib import redirect_stderr, redirect_stdout
from copy import deepcopy
from pathlib import Path
from typing import Any

SECONDS = 120
ROOT = Path(__file__).parents[2]
HEAVY = (
    "numpy",
    "scipy.linalg",
    "sympy",
    "pint",
    "calcpack.sheet",
    "calcpack.actions",
    "calcpack.job.library",
)
ABOUT = {ast.LtE: ast.Gt, ast.Lt: ast.GtE, ast.GtE: ast.Lt, ast.Gt: ast.LtE}


class Replaced(importlib.abc.MetaPathFinder, importlib.abc.SourceLoader):
    """Imports one module from a changed text."""

    def __init__(self, module: str, path: Path, text: str) -> None:
        self.module, self.path, self.text = module, path, text

    def find_spec(self, name, path=None, target=None):
        """Ours alone."""
        if name != self.module:
            return None
        return importlib.machinery.ModuleSpec(name, self, origin=str(self.path))

    def get_filename(self, name):
        """Where the unchanged text stands."""
        return str(self.path)

    def get_data(self, path):
        """The changed text."""
        return self.text.encode()

    def path_stats(self, path):
        """No compiled file is kept."""
        raise OSError


def mutants(text: str) -> Iterator[tuple[int, str, str]]:
    """Line, what is changed, and the changed text."""
    tree = ast.parse(text)
    for place, node in enumerate(_outside_words(tree)):
        for said, change in _changes(node):
            copied = deepcopy(tree)
            change(_outside_words(copied)[place])
            yield node.lineno, said, ast.unparse(copied)


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


def noticed(module: str, path: Path, text: str, tests: list[str]) -> bool:
    """Whether the tests fail with the changed text, in a process of their own."""
    child = os.fork()
    if child == 0:
        import pytest

        sys.meta_path.insert(0, Replaced(module, path, text))
        code = 1
        try:
            with redirect_stdout(io.StringIO()), redirect_stderr(io.StringIO()):
                signal.alarm(SECONDS)
                code = pytest.main(["-x", "-q", "-p", "no:cacheprovider", *tests])
        finally:
            os._exit(0 if code == 0 else 1)
    return os.waitpid(child, 0)[1] != 0


def main(arguments: list[str]) -> int:
    """Mutate every module under the first argument; the number of survivors is the exit status."""
    os.chdir(ROOT)
    target, tests = Path(arguments[0]), arguments[1:]
    for name in HEAVY:
        __import__(name)
    files = sorted(target.rglob("*.py")) if target.is_dir() else [target]
    survivors = tried = 0
    if noticed("", Path(), "", tests):
        print("the tests fail as they are")
        return 100
    for path in files:
        module = ".".join(path.with_suffix("").parts).removesuffix(".__init__")
        for line, said, text in mutants(path.read_text(encoding="utf-8")):
            tried += 1
            if not noticed(module, path.resolve(), text, tests):
                survivors += 1
                print(f"{path}:{line}: {said}", flush=True)
    print(f"{tried} mutants, {survivors} survivors")
    return min(survivors, 100)


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
