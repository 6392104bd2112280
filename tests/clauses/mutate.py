"""Change the clauses one number or one comparison at a time, and see whether a test notices.

    python tests/clauses/mutate.py calcpack/clauses/en1993 tests/clauses/en1993 tests/reference/test_en1993.py

The first argument is a module or a package, the others are the tests to run. Nothing on disk is changed:
each mutant is a forked process that imports the changed text. Numbers are made 1 % larger, comparisons say
the opposite. A first run of the tests notes which of them call which function; a mutant meets the tests that
call its function first, the quickest at the head, and then the other tests of the same files, which may share
what one of those has prepared. Tests that take longer than SLOW are asked only where too few quick ones call it.
Survivors are for somebody to look at: some changes make no difference.
"""

from __future__ import annotations

import ast
import importlib
import importlib.abc
import importlib.machinery
import io
import os
import pickle
import re
import signal
import sys
import tempfile
import time
from collections.abc import Callable, Iterator
from contextlib import redirect_stderr, redirect_stdout, suppress
from copy import deepcopy
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

SECONDS = 240
SLOW = 0.3  # s
ENOUGH = 3  # tests
ROOT = Path(__file__).parents[2]
OURS = ("calcpack", "tests", "test_", "conftest", "_pytest", "pytest", "hypothesis", "_hypothesis", "nbval")
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


Function = tuple[str, int]  # file, first line


@dataclass
class Witness:
    """Notes for each test how long it takes and which functions of some files it calls."""

    files: frozenset[str]
    calls: dict[str, set[Function]] = field(default_factory=dict)
    seconds: dict[str, float] = field(default_factory=dict)

    def pytest_runtest_protocol(self, item, nextitem):
        """Watch one test with the fixtures it is the first to ask for."""
        seen = self.calls.setdefault(item.nodeid, set())
        files = self.files

        def watch(frame, event, argument):
            code = frame.f_code
            if code.co_filename in files:
                seen.add((code.co_filename, code.co_firstlineno))

        self.seconds[item.nodeid] = -time.perf_counter()
        sys.settrace(watch)

    def pytest_runtest_logfinish(self, nodeid, location):
        """The test is over."""
        sys.settrace(None)
        self.seconds[nodeid] += time.perf_counter()

    def callers(self, functions: set[Function]) -> list[str]:
        """The tests that call any of the functions, the quickest first."""
        found = sorted(
            (name for name in self.calls if self.calls[name] & functions), key=self.seconds.__getitem__
        )
        return [name for place, name in enumerate(found) if place < ENOUGH or self.seconds[name] < SLOW]

    def neighbours(self, near: list[str]) -> list[str]:
        """The quick tests in the same files as some others, without these."""
        homes = {_home(name) for name in near}
        return [
            name
            for name, seconds in self.seconds.items()
            if _home(name) in homes and name not in near and seconds < SLOW
        ]


def _home(name: str) -> str:
    return name.partition("::")[0]


def witnessed(files: list[Path], tests: list[str]) -> Witness | None:
    """What the unchanged tests call; None if they fail."""
    with tempfile.TemporaryFile() as kept:
        if (child := os.fork()) == 0:
            witness = Witness(frozenset(str(each.resolve()) for each in files))
            code = _run_tests(tests, [witness])
            if code == 0:
                kept.write(pickle.dumps((witness.calls, witness.seconds, _foreign_modules())))
                kept.flush()
            os._exit(code)
        if os.waitpid(child, 0)[1]:
            return None
        kept.seek(0)
        calls, seconds, foreign = pickle.loads(kept.read())
    for name in foreign:
        with suppress(Exception):
            importlib.import_module(name)
    return Witness(frozenset(), calls, seconds)


def _foreign_modules() -> list[str]:
    """What is imported and is neither ours nor the test runner's: imported once, every mutant shares it."""
    return [name for name, module in list(sys.modules.items()) if module and not name.startswith(OURS)]


def _run_tests(tests: list[str], plugins: list[object]) -> int:
    import pytest

    with redirect_stdout(io.StringIO()), redirect_stderr(io.StringIO()):
        return int(pytest.main(["-x", "-q", "-p", "no:cacheprovider", "-p", "no:nbval", *tests], plugins))


def noticed(module: str, path: Path, text: str, tests: list[str]) -> bool:
    """Whether the tests fail with the changed text, in a process of their own."""
    if not tests:
        return False
    if (child := os.fork()) == 0:
        sys.meta_path.insert(0, Replaced(module, path, text))
        code = 1
        try:
            signal.alarm(SECONDS)
            code = _run_tests(tests, [])
        finally:
            os._exit(0 if code == 0 else 1)
    return os.waitpid(child, 0)[1] != 0


def around(tree: ast.AST, path: Path, line: int) -> set[Function]:
    """The functions whose text contains a line, decorators included; the whole module's for a line outside."""
    defined = [each for each in ast.walk(tree) if isinstance(each, ast.FunctionDef | ast.Lambda)]

    def first(each: ast.FunctionDef | ast.Lambda) -> int:
        marks = getattr(each, "decorator_list", [])
        return min([each.lineno, *(mark.lineno for mark in marks)])

    inside = {(str(path), first(each)) for each in defined if first(each) <= line <= (each.end_lineno or 0)}
    return inside or {(str(path), first(each)) for each in defined}


def main(arguments: list[str]) -> int:
    """Mutate every module under the first argument; the number of survivors is the exit status."""
    os.chdir(ROOT)
    target, tests = Path(arguments[0]), arguments[1:]
    files = sorted(target.rglob("*.py")) if target.is_dir() else [target]
    survivors = tried = 0
    witness = witnessed(files, tests)
    if witness is None:
        print("the tests fail as they are")
        return 100
    for path in files:
        module = ".".join(path.with_suffix("").parts).removesuffix(".__init__")
        whole = path.read_text(encoding="utf-8")
        tree = ast.parse(whole)
        for line, said, text in mutants(whole):
            tried += 1
            near = witness.callers(around(tree, path.resolve(), line))
            groups = near, witness.neighbours(near)
            if not any(noticed(module, path.resolve(), text, group) for group in groups):
                survivors += 1
                print(f"{path}:{line}: {said}", flush=True)
        print(f"{path}: done, {tried} mutants and {survivors} survivors so far", file=sys.stderr, flush=True)
    print(f"{tried} mutants, {survivors} survivors")
    return min(survivors, 100)


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
