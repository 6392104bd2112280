"""Documents set several at a time, in processes that are replaced before they have remembered too much.

A typesetter remembers what it has laid out, some 100 MB for a strength sheet. That makes the second setting
of a document quick and a large pack heavy: a process sets a few documents, then another takes its place.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import ProcessPoolExecutor
from concurrent.futures.process import BrokenProcessPool
from contextlib import ExitStack
from types import TracebackType

from calcpack.export.typesetting import Setting, Typeset, typeset
from calcpack.job.errors import CalcpackError
from calcpack.processes import process_pool, processors, work_for_another

MOST_PROCESSES = 4
REMEMBERED = 6  # documents a process may set before another takes its place


class Press:
    """Sets documents; as a context manager it ends its processes.

    Parameters
    ----------
    documents : int
        How many there are to set, so that a few are set here, without any other process.
    """

    def __init__(self, documents: int = 1) -> None:
        self._count = processors(min(MOST_PROCESSES, documents // 2)) if documents > 3 else 0
        self._documents = documents
        self._processes: list[ProcessPoolExecutor] = []
        self._stack = ExitStack()

    def __enter__(self) -> Press:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self._end(at_once=error is not None)

    def set_all(
        self, settings: Iterable[Setting], *, pdf: bool = True, done: Callable[[], None] = lambda: None
    ) -> list[Typeset]:
        """Documents set, in the order given.

        Parameters
        ----------
        settings : iterable of Setting
            No more of them are kept than are being set. Given again in the same order a document is set
            where it was before, and sooner.
        pdf : bool
            False only lays out.
        done : callable
            Called as each is finished.

        Raises
        ------
        CalcpackError
            One of them cannot be set, or a process was ended from outside.
        """
        found = []
        for each in self._set_here(settings, pdf) if not self._count else self._set_elsewhere(settings, pdf):
            found.append(each)
            done()
        return found

    def _set_here(self, settings: Iterable[Setting], pdf: bool) -> Iterator[Typeset]:
        for setting in settings:
            yield typeset(setting, pdf=pdf)

    def _set_elsewhere(self, settings: Iterable[Setting], pdf: bool) -> Iterator[Typeset]:
        most = self._count * REMEMBERED
        ahead = iter(settings)
        while some := list(itertools.islice(ahead, most)):
            if self._documents > most or not self._processes:
                self._begin()
            waiting = [
                self._processes[number % self._count].submit(typeset, setting, pdf=pdf)
                for number, setting in enumerate(some)
            ]
            for each in waiting:
                try:
                    yield each.result()
                except BrokenProcessPool:
                    raise CalcpackError(
                        "a process that sets pages was ended from outside",
                        remedy="see that there is memory enough (some 3 GB) and build again",
                    ) from None

    def _begin(self) -> None:
        self._end()
        self._processes = [
            self._stack.enter_context(process_pool(1, work_for_another)) for _ in range(self._count)
        ]

    def _end(self, *, at_once: bool = False) -> None:
        if at_once:
            for process in self._processes:
                process.shutdown(wait=False, cancel_futures=True)
        self._processes = []
        self._stack.close()
