"""Change the clauses one number or one comparison at a time, and see whether a test notices.

    python tests/clauses/mutate.py calcpack/clauses/en1993 tests/clauses/en1993 tests/reference/test_en1993.py

The first argument is a module or a package, the others are the tests to run. Nothing on disk is changed.
Numbers are made 1 % larger, comparisons say the opposite. One process collects the tests and waits; each mutant
is a fork of it that puts the changed code into its function. What acts at import, a constant or a function
that the tests call while they are collected, is changed in a fork that imports everything anew. A first run of
the tests notes which of them call which function; a mutant meets the tests that call its function first, the
quickest at the head, and then the other tests of the same files, which may share what one of those has
prepared. Tests that take longer than SLOW are asked only where too few quick ones call it.
Survivors are for somebody to look at. Changes that make no difference are listed in indifferent.txt beside
this file, each with its reason, and are not tried; an entry that fits nothing in the files tried is told of.
"""

from __future__ import annotations

import ast
import importlib
import io
import os
import signal
import sys
import time
from collections.abc import Callable
from contextlib import redirect_stderr, redirect_stdout, suppress
from dataclasses import dataclass, field
from multiprocessing import Pipe
from pathlib import Path
from typing import NamedTuple

import pytest
from changed import CALLED, Replaced, drawing_on, module_of, replace_function, telling
from mutants import INDIFFERENT, Function, Indifferent, Mutant, around, mutants, read_indifferent

SECONDS = 240
SLOW = 1.0  # s
ENOUGH = 3  # tests
ROOT = Path(__file__).resolve().parents[2]
TESTS = str(ROOT / "tests")
WITHOUT = ("cacheprovider", "nbval", "unraisableexception", "threadexception", "faulthandler")


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
        """The tests that call any of the functions, the quickest first; all, where a module has none."""
        named = (name for name in self.calls if self.calls[name] & functions or not functions)
        found = sorted(named, key=self.seconds.__getitem__)
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


class Order(NamedTuple):
    """A changed function, and the tests that have to notice it."""

    module: str
    path: Path
    mutant: Mutant
    tests: list[str]


class Stage:
    """A test session that has collected its tests and waits for orders: a fork of it carries out each.

    It sends first what the collection has called and which modules are imported, then the witness of a run
    of all tests, None if they fail, then an answer to each order: whether the tests noticed.
    """

    def __init__(self, connection):
        self.connection = connection

    def pytest_runtestloop(self, session):
        """In the place of running the tests."""
        self.connection.send((set(CALLED), _outside_tests()))
        if in_a_fork(lambda: self.watch(session)):
            self.connection.send(None)
        while (order := self.connection.recv()) is not None:
            self.connection.send(in_a_fork(lambda order=order: self.carry_out(session, order)) != 0)
        return True

    def watch(self, session):
        """Run all tests and send what they call."""
        witness = Witness()
        session.config.pluginmanager.register(witness)
        passed = _passes(session, session.items)
        self.connection.send(witness if passed else None)
        return 0

    def carry_out(self, session, order):
        """0 where every test passes with the changed function."""
        signal.alarm(SECONDS)
        replace_function(order.module, order.path, order.mutant.text, order.mutant.owner)
        named = {item.nodeid: item for item in session.items}
        return 0 if _passes(session, [named[name] for name in order.tests]) else 1


def _passes(session, items) -> bool:
    for item, following in zip(items, [*items[1:], None], strict=True):
        session.config.hook.pytest_runtest_protocol(item=item, nextitem=following)
        if session.testsfailed:
            return False
    return True


def in_a_fork(work: Callable[[], int]) -> int:
    """The exit status of some work that a process of its own does."""
    if (child := os.fork()) == 0:
        code = 1
        try:
            code = work()
        finally:
            os._exit(code)
    return os.waitpid(child, 0)[1]


class Theatre:
    """The clean process's end of a stage, with what the stage has told."""

    def __init__(self, files: list[Path], tests: list[str]) -> None:
        self.connection, other = Pipe()
        if os.fork() == 0:
            self.connection.close()
            for path in files:
                sys.meta_path.insert(0, Replaced(module_of(path), path.resolve(), telling(path.resolve())))
            os._exit(_run_tests(tests, [Stage(other)]))
        other.close()
        try:
            self.early, names = self.connection.recv()
        except EOFError:
            raise SystemExit("the tests cannot be collected") from None
        self.witness: Witness | None = self.connection.recv()
        _share(names, drawing_on({module_of(path) for path in files}))

    def notices(self, path: Path, mutant: Mutant, near: set[Function], tests: list[str]) -> bool:
        """Whether any of the tests fails with a mutant."""
        if not tests:
            return False
        if mutant.owner and not near & self.early:
            self.connection.send(Order(module_of(path), path.resolve(), mutant, tests))
            return self.connection.recv()
        return in_a_fork(lambda: _anew(path, mutant, tests)) != 0

    def close(self) -> None:
        """The stage ends."""
        self.connection.send(None)


def _outside_tests() -> list[str]:
    """The modules that are imported and are none of the tests' own."""
    files = {name: getattr(each, "__file__", None) or "" for name, each in list(sys.modules.items())}
    return [name for name, file in files.items() if name != "__main__" and not file.startswith(TESTS)]


def _anew(path: Path, mutant: Mutant, tests: list[str]) -> int:
    """Run tests with a mutant that is imported."""
    signal.alarm(SECONDS)
    sys.meta_path.insert(0, Replaced(module_of(path), path.resolve(), mutant.text))
    return 0 if _run_tests(tests, []) == 0 else 1


def _share(names: list[str], changed: set[str]) -> None:
    """Import what no change reaches: every fork that imports anew has it already."""
    for name in names:
        if name not in changed:
            with suppress(Exception):
                importlib.import_module(name)
    if met := changed & sys.modules.keys():
        raise RuntimeError(f"imported before they are changed: {sorted(met)}")


def _run_tests(tests: list[str], plugins: list[object]) -> int:
    without = [part for name in WITHOUT for part in ("-p", f"no:{name}")]
    with redirect_stdout(io.StringIO()), redirect_stderr(io.StringIO()):
        return int(pytest.main(["-x", "-q", "--assert=plain", *without, *tests], plugins))


class Count(NamedTuple):
    """How many changes were made, how many of them are listed, how many no test noticed."""

    mutants: int = 0
    indifferent: int = 0
    survivors: int = 0

    def __str__(self) -> str:
        return f"{self.mutants} mutants, {self.indifferent} of no difference, {self.survivors} survivors"


def try_module(path: Path, theatre: Theatre, listed: list[Indifferent]) -> tuple[Count, set[Indifferent]]:
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
        near = around(tree, path.resolve(), mutant.line)
        callers = theatre.witness.callers(near)
        groups = callers, theatre.witness.neighbours(callers)
        if not any(theatre.notices(path, mutant, near, group) for group in groups):
            survivors += 1
            print(f"{path}:{mutant.line}: {mutant.said}", flush=True)
    return Count(tried, skipped, survivors), met


def main(arguments: list[str]) -> int:
    """Mutate every module under the first argument; the number of survivors is the exit status."""
    os.chdir(ROOT)
    target, tests = Path(arguments[0]), arguments[1:]
    files = sorted(target.rglob("*.py")) if target.is_dir() else [target]
    theatre = Theatre(files, tests)
    if theatre.witness is None:
        print("the tests fail as they are")
        return 100
    everything = read_indifferent()
    total = Count()
    for path in files:
        listed = [each for each in everything if each.file == path.as_posix()]
        count, met = try_module(path, theatre, listed)
        total = Count(*(one + other for one, other in zip(total, count, strict=True)))
        for each in listed:
            if each not in met:
                print(f"{INDIFFERENT.name}: nothing in {path} fits {each.fragment}")
        print(f"{path}: {count}", flush=True)
    theatre.close()
    print(total)
    return min(total.survivors, 100)


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
