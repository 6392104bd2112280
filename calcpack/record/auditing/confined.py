"""The child process that reads PDFs, as its parent sees it."""

from __future__ import annotations

import atexit
import contextlib
import json
import os
import subprocess
import sys
import threading
from collections.abc import Callable, Mapping, Sequence
from concurrent.futures import ThreadPoolExecutor
from typing import IO

from calcpack.job.errors import CalcpackError
from calcpack.processes import processors

TOO_DEAR = "it takes more time or memory to read than any pack of its size"
_LARGE, _MOST_CHILDREN = 4_000_000, 8  # bytes; children at once
Told = Callable[[int, int], None]  # pages read, pages in all
_MODULE = "calcpack.record.auditing.pdf_reading"


def untold(_done: int, _all: int) -> None:
    """Nobody is told."""


class PdfReading:
    """A child that reads PDFs, started when it is first asked and again when a PDF has been the end of it."""

    def __init__(self) -> None:
        self._child: subprocess.Popen[bytes] | None = None
        self._owner = 0
        self._one_at_a_time = threading.Lock()

    def texts(
        self, content: bytes, name: str, part: int = 0, of: int = 1, told: Told = untold
    ) -> tuple[str, ...]:
        """The visible text of a PDF, page by page, or of one of several equal parts of its pages.

        What is told now and then is how many pages are read, and how many the whole PDF has.

        Raises
        ------
        CalcpackError
            It is no readable PDF, or would cost more than any pack of its size.
        """
        question = {"ask": "texts", "part": part, "of": of}
        return tuple(text.decode("utf-8") for _, text in self._ask(question, content, name, told))

    def attached(self, content: bytes, name: str, endings: Sequence[str] = ("",)) -> dict[str, bytes]:
        """The files that a PDF carries inside, by name; only those whose names end so, in small letters.

        Raises
        ------
        CalcpackError
            It is no readable PDF, is encrypted, or would cost more than any pack of its size.
        """
        question = {"ask": "attached", "endings": endings}
        return dict(self._ask(question, content, name, untold))

    def _ask(
        self, question: Mapping[str, object], content: bytes, name: str, told: Told
    ) -> list[tuple[str, bytes]]:
        with self._one_at_a_time:
            return self._answered({**question, "size": len(content)}, content, name, told)

    def _answered(
        self, question: Mapping[str, object], content: bytes, name: str, told: Told
    ) -> list[tuple[str, bytes]]:
        questions, answers = self._pipes()
        try:
            questions.write(json.dumps(question).encode() + b"\n")
            questions.write(content)
            questions.flush()
            while "done" in (head := json.loads(answers.readline())):
                told(head["done"], head["pages"])
            if "fault" not in head:
                return [
                    (each, answers.read(size))
                    for each, size in zip(head["names"], head["sizes"], strict=True)
                ]
        except (OSError, ValueError):  # it has ended in the middle
            self.close()
            raise CalcpackError(TOO_DEAR, file=name) from None
        raise CalcpackError(head["fault"], file=name)

    def _pipes(self) -> tuple[IO[bytes], IO[bytes]]:
        if self._child is None or self._owner != os.getpid() or self._child.poll() is not None:
            self._child = subprocess.Popen(
                [sys.executable, "-m", _MODULE],
                stdin=subprocess.PIPE,
                stdout=subprocess.PIPE,
                stderr=subprocess.DEVNULL,
            )
            self._owner = os.getpid()
        assert self._child.stdin is not None
        assert self._child.stdout is not None
        return self._child.stdin, self._child.stdout

    def close(self) -> None:
        """End the child."""
        child, self._child = self._child, None
        if child is None or self._owner != os.getpid():
            return
        child.kill()
        child.wait()
        for pipe in (child.stdin, child.stdout):
            if pipe is not None:
                with contextlib.suppress(OSError):
                    pipe.close()


def whole_pdf(content: bytes, name: str, told: Told = untold) -> tuple[dict[str, bytes], tuple[str, ...]]:
    """The files that a PDF carries and the visible text of its pages, a large one read by several children.

    Parameters
    ----------
    content : bytes
    name : str
        For messages.
    told : callable
        Told now and then how many pages are read, of how many.

    Raises
    ------
    CalcpackError
        As of :class:`PdfReading`.
    """
    of = processors(_MOST_CHILDREN)
    if of == 1 or len(content) < _LARGE:
        return READING.attached(content, name), READING.texts(content, name, told=told)
    together = _Together(told)
    children = [PdfReading() for _ in range(of)]
    try:
        with ThreadPoolExecutor(of) as threads:
            asked = [
                threads.submit(child.texts, content, name, part, of, together.of(part))
                for part, child in enumerate(children)
            ]
            attached = READING.attached(content, name)
            return attached, tuple(text for each in asked for text in each.result())
    finally:
        for child in children:
            child.close()


class _Together:
    """What several children tell, as one tells it."""

    def __init__(self, told: Told) -> None:
        self._told = told
        self._done: dict[int, int] = {}
        self._one_at_a_time = threading.Lock()

    def of(self, part: int) -> Told:
        """Who listens to the child that reads a part."""

        def told(done: int, pages: int) -> None:
            with self._one_at_a_time:
                self._done[part] = done
                self._told(sum(self._done.values()), pages)

        return told


READING = PdfReading()
"""The one child of this process."""
atexit.register(READING.close)
