"""Change the clauses one number or one comparison at a time, and see whether a test notices.

    python tests/clauses/mutate.py calcpack/clauses/en1993 tests/clauses/en1993 tests/reference/test_en1993.py

The first argument is a module or a package, the others are the tests to run. Nothing on disk is changed:
each mutant is a forked process that imports the changed text. Numbers are made 1 % larger, comparisons say
the opposite. A first run of the tests notes which of them call which function; a mutant meets the tests that
call its function first, the quickest at the head, and then the other tests of the same files, which may share
what one of those has prepared. Tests that take longer than SLOW are asked only where too few quick ones call it.
Survivors are for somebody to look at. Changes that make no difference are listed in indifferent.txt beside
this file, each with its reason, and are not tried; an entry that fits nothing in the files tried is told of.
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
from typing import Any, NamedTuple

SECONDS = 240
SLOW = 0.3  # s
ENOUGH = 3  # tests
ROOT = Path(__file__).parents[2]
TESTS = ("tests", "test_", "conftest")
WITHOUT = ("cacheprovider", "nbval", "unraisableexception", "threadexception", "faulthandler")
PACKAGE = "calcpack"
INDIFFERENT = Path(__file__).with_name("indifferent.txt")
ABOUT = {ast.LtE: ast.Gt, ast.Lt: ast.GtE, ast.GtE: ast.Lt, ast.Gt: ast.LtE}


class Replaced(importlib.abc.MetaPathFinder, importlib.abc.SourceLoader):
    """Imports one module from a changed text."""

    def __init__(self, module: str, path: Path, text: str) -> None:
        self.module, self.path, self.text = module, path, text

    def find_spec(self, name, path=None, target=None):
        """Ours alone."""
        if name != self.module:
            return None
        spec = importlib.machinery.ModuleSpec(name, self, origin=str(self.path))
        if self.path.name == "__init__.py":
            spec.submodule_search_locations = [str(self.path.parent)]
        return spec

    def get_filename(self, name):
        """Where the unchanged text stands."""
        return str(self.path)

    def get_data(self, path):
        """The changed text."""
        return self.text.encode()

    def path_stats(self, path):
        """No compiled file is kept."""
        raise OSError


class Mutant(NamedTuple):
    """A changed text: where it is changed (columns in bytes, as `ast` has them), and how in words."""

    line: int
    first: int
    last: int
    said: str
    text: str


def mutants(text: str) -> Iterator[Mutant]:
    """Every change of a text, one at a time."""
    tree = ast.parse(text)
    for place, node in enumerate(_outside_words(tree)):
        for said, change in _changes(node):
            copied = deepcopy(tree)
            change(_outside_words(copied)[place])
            yield Mutant(node.lineno, node.col_offset, node.end_col_offset, said, ast.unparse(copied))


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


Function = tuple[str, int]  # file, first line


@dataclass
class Witness:
    """Notes for each test how long it takes and which functions of the files it calls."""

    calls: dict[str, set[Function]] = field(default_factory=dict)
    seconds: dict[str, float] = field(default_factory=dict)

    def pytest_runtest_protocol(self, item, nextitem):
        """Watch one test with the fixtures it is the first to ask for."""
        CALLED.clear()
        self.seconds[item.nodeid] = -time.perf_counter()

    def pytest_runtest_logfinish(self, nodeid, location):
        """The test is over."""
        self.calls[nodeid] = set(CALLED)
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


CALLED: set[Function] = set()  # since it was last emptied


def telling(path: Path) -> str:
    """A module's text with its functions saying that they are called."""
    tree = ast.parse(path.read_text(encoding="utf-8"))
    say = f"__import__({__name__!r}).CALLED.add({{}})"
    for each in functions(tree):
        call = ast.parse(say.format((str(path), first_line(each))), mode="eval").body
        if isinstance(each, ast.Lambda):
            each.body = ast.BoolOp(ast.Or(), [call, each.body])
        else:
            each.body.insert(1 if ast.get_docstring(each) else 0, ast.Expr(call))
    return ast.unparse(tree)


def witnessed(files: list[Path], tests: list[str]) -> Witness | None:
    """What the unchanged tests call; None if they fail. What they import beside the files stays imported."""
    with tempfile.TemporaryFile() as kept:
        if (child := os.fork()) == 0:
            for path in files:
                sys.meta_path.insert(0, Replaced(_module(path), path.resolve(), telling(path.resolve())))
            witness = Witness()
            code = _run_tests(tests, [witness])
            if code == 0:
                names = [name for name, each in list(sys.modules.items()) if each and _is_shared(name)]
                kept.write(pickle.dumps((witness.calls, witness.seconds, names)))
                kept.flush()
            os._exit(code)
        if os.waitpid(child, 0)[1]:
            return None
        kept.seek(0)
        calls, seconds, names = pickle.loads(kept.read())
    changed = drawing_on({_module(path) for path in files})
    for name in names:
        if name not in changed:
            with suppress(Exception):
                importlib.import_module(name)
    if met := changed & sys.modules.keys():
        raise RuntimeError(f"imported before they are changed: {sorted(met)}")
    return Witness(calls, seconds)


def _is_shared(name: str) -> bool:
    """Whether a module is none of the tests'."""
    return name != "__main__" and not name.startswith(TESTS)


def _module(path: Path) -> str:
    return ".".join(path.with_suffix("").parts).removesuffix(".__init__")


def drawing_on(changed: set[str]) -> set[str]:
    """Some modules of the package with every module that imports them, directly or by way of another."""
    imports = {}
    for path in sorted(Path(PACKAGE).rglob("*.py")):
        whole = ast.parse(path.read_text(encoding="utf-8"))
        imports[_module(path)] = {name for node in ast.walk(whole) for name in _imported(node)}
    found = set(changed)
    while more := {name for name, wanted in imports.items() if name not in found and wanted & found}:
        found |= more
    return found


def _imported(node: ast.AST) -> set[str]:
    """The modules that an import statement loads, with the packages they stand in."""
    if isinstance(node, ast.Import):
        names = {each.name for each in node.names}
    elif isinstance(node, ast.ImportFrom) and node.module:
        names = {node.module, *(f"{node.module}.{each.name}" for each in node.names)}
    else:
        return set()
    parts = [name.split(".") for name in names]
    return {".".join(each[:count]) for each in parts for count in range(1, len(each) + 1)}


def _run_tests(tests: list[str], plugins: list[object]) -> int:
    import pytest

    without = [part for name in WITHOUT for part in ("-p", f"no:{name}")]
    with redirect_stdout(io.StringIO()), redirect_stderr(io.StringIO()):
        return int(pytest.main(["-x", "-q", "--assert=plain", *without, *tests], plugins))


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


class Count(NamedTuple):
    """How many changes were made, how many of them are listed, how many no test noticed."""

    mutants: int = 0
    indifferent: int = 0
    survivors: int = 0

    def __str__(self) -> str:
        return f"{self.mutants} mutants, {self.indifferent} of no difference, {self.survivors} survivors"


def try_module(path: Path, witness: Witness, listed: list[Indifferent]) -> tuple[Count, set[Indifferent]]:
    """Every change of a module: survivors are printed; with them the entries of the list that were met."""
    whole = path.read_text(encoding="utf-8")
    tree, source = ast.parse(whole), whole.splitlines()
    tried = skipped = survivors = 0
    met: set[Indifferent] = set()
    for mutant in mutants(whole):
        tried += 1
        same = [each for each in listed if each.fits(source[mutant.line - 1], mutant)]
        if same:
            met.update(same)
            skipped += 1
            continue
        near = witness.callers(around(tree, path.resolve(), mutant.line))
        groups = near, witness.neighbours(near)
        if not any(noticed(_module(path), path.resolve(), mutant.text, group) for group in groups):
            survivors += 1
            print(f"{path}:{mutant.line}: {mutant.said}", flush=True)
    return Count(tried, skipped, survivors), met


def main(arguments: list[str]) -> int:
    """Mutate every module under the first argument; the number of survivors is the exit status."""
    os.chdir(ROOT)
    target, tests = Path(arguments[0]), arguments[1:]
    files = sorted(target.rglob("*.py")) if target.is_dir() else [target]
    witness = witnessed(files, tests)
    if witness is None:
        print("the tests fail as they are")
        return 100
    everything = read_indifferent()
    total = Count()
    for path in files:
        listed = [each for each in everything if each.file == path.as_posix()]
        count, met = try_module(path, witness, listed)
        total = Count(*(one + other for one, other in zip(total, count, strict=True)))
        for each in listed:
            if each not in met:
                print(f"{INDIFFERENT.name}: nothing in {path} fits {each.fragment}")
        print(f"{path}: {count}", flush=True)
    print(total)
    return min(total.survivors, 100)


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
