"""A PDF's texts and attached files, read in a process of its own that may not use more than a PDF is worth.

Whoever sends a PDF decides what its streams grow into. So reading it is left to a child with a limit of
memory and time by the size of the file; where that child ends, so does nothing else. Nothing of a PDF is run.

``python -m calcpack.record.auditing.pdf_reading`` answers, until its input ends, questions of a line of JSON
and the PDF after it: ``{"ask": "texts", "size": bytes, "part": 0, "of": 1}``, where texts may be those of one
of several equal parts of the pages; or ``{"ask": "attached", "size": bytes, "endings": [""]}``, where the
files are those whose names end in one of several ways. Before the answer there may be lines of
``{"done": pages, "pages": all of them}``. The answer is a line of JSON,
``{"names": [...], "sizes": [...]}`` with what is named after it, or ``{"fault": words}``.
"""

from __future__ import annotations

import json
import re
import sys
from collections.abc import Iterable, Mapping, Sequence
from typing import Any, BinaryIO

import pypdfium2  # type: ignore[import-untyped]

from calcpack.record.auditing.confined import TOO_DEAR, Told, untold

MOST_PAGES = 20_000
MOST_ATTACHED = 5_000
MEMORY, MEMORY_EACH = 200_000_000, 6  # bytes: for any PDF, and for each of its bytes
SECONDS, SECONDS_EACH = 1.5, 1.5e-6  # of one processor; a pack of 35 kB a page takes a fifth of it
UNREADABLE = "it is no readable PDF"
# A PDF ends with the place of its table of objects; without it a reader would have to guess.
_END = re.compile(rb"startxref\s+([0-9]{1,12})\s+%%EOF\s*\Z")
_TABLE = re.compile(rb"\s*(?:xref\b|[0-9]+ [0-9]+ obj\b)")
_OFTEN = 50  # pages between two reports
_BROKEN = (
    pypdfium2.PdfiumError,
    ArithmeticError,
    AssertionError,
    AttributeError,
    LookupError,
    MemoryError,
    OSError,
    RecursionError,
    TypeError,
    ValueError,
)


class Refused(Exception):
    """What is wrong with a PDF, in words."""


def _see_whole(content: bytes) -> None:
    end = _END.search(content, max(0, len(content) - 1_100))
    if not end or not _TABLE.match(content, int(end[1])):
        raise Refused(f"{UNREADABLE}: it is cut off or damaged")


def attached_files(content: bytes, endings: Sequence[str] = ("",)) -> list[tuple[str, bytes]]:
    """The files that a PDF carries inside and whose names end so, with their names.

    Raises
    ------
    Refused
        It is no PDF, is encrypted, or carries too much.
    """
    _see_whole(content)
    try:
        document = pypdfium2.PdfDocument(content)
    except pypdfium2.PdfiumError as error:
        if error.err_code == pypdfium2.raw.FPDF_ERR_PASSWORD:
            raise Refused("it is encrypted") from None
        raise
    try:
        if pypdfium2.raw.FPDF_GetSecurityHandlerRevision(document) >= 0:
            raise Refused("it is encrypted")
        count = document.count_attachments()
        if count > MOST_ATTACHED:
            raise Refused(f"it carries more than {MOST_ATTACHED} files")
        found, room = [], MEMORY // 4 + MEMORY_EACH * len(content)
        for number in range(count):
            attachment = document.get_attachment(number)
            if not (name := attachment.get_name()).lower().endswith(tuple(endings)):
                continue
            data = bytes(attachment.get_data())
            room -= len(data)
            if room < 0:
                raise Refused(TOO_DEAR)
            found.append((name, data))
        return found
    finally:
        document.close()


def page_texts(content: bytes, part: int = 0, of: int = 1, tell: Told = untold) -> list[str]:
    """The visible text of a PDF, page by page, or of one of several equal parts of it.

    Parameters
    ----------
    content : bytes
    part, of : int
    tell : callable
        Told now and then how many pages are read, and how many the whole PDF has.

    Raises
    ------
    Refused
        It is no PDF, or has too many pages.
    """
    _see_whole(content)
    document = pypdfium2.PdfDocument(content)
    try:
        count = len(document)
        if count > MOST_PAGES:
            raise Refused(f"it has more than {MOST_PAGES} pages")
        texts: list[str] = []
        first, end = count * part // of, count * (part + 1) // of
        for number in range(first, end):
            if len(texts) % _OFTEN == 0:
                tell(len(texts), count)
            page = document[number]
            text_page = page.get_textpage()
            texts.append(text_page.get_text_range().replace("\r\n", "\n"))
            text_page.close()
            page.close()
        tell(len(texts), count)
        return texts
    finally:
        document.close()


def _confine(size: int) -> None:
    """Let this process use no more memory and time from here on than a PDF of a size is worth."""
    if sys.platform == "win32":  # pragma: no cover - no such limits there
        return
    import resource

    used = resource.getrusage(resource.RUSAGE_SELF)
    end = int(used.ru_utime + used.ru_stime + SECONDS + SECONDS_EACH * size) + 1
    _, most = resource.getrlimit(resource.RLIMIT_CPU)
    resource.setrlimit(resource.RLIMIT_CPU, (end if most < 0 else min(end, most), most))
    _, most = resource.getrlimit(resource.RLIMIT_AS)
    room = _mapped() + MEMORY + MEMORY_EACH * size
    resource.setrlimit(resource.RLIMIT_AS, (room if most < 0 else min(room, most), most))
    resource.setrlimit(resource.RLIMIT_CORE, (0, 0))


def _mapped() -> int:
    """Memory this process has mapped by now [bytes]."""
    try:
        with open("/proc/self/statm", "rb") as file:
            return int(file.read().split()[0]) * 4096
    except OSError:  # pragma: no cover - another system than Linux
        return 1_000_000_000


def answer(asked: Mapping[str, Any], content: bytes, tell: Told) -> tuple[dict[str, object], Iterable[bytes]]:
    """The answer to a question: its line, and what comes after it."""
    try:
        if asked["ask"] == "texts":
            texts = page_texts(content, asked["part"], asked["of"], tell)
            parts = [text.encode("utf-8", "replace") for text in texts]
            names = [""] * len(parts)
        else:
            attached = attached_files(content, asked["endings"])
            names, parts = [name for name, _ in attached], [data for _, data in attached]
    except Refused as fault:
        return {"fault": str(fault)}, ()
    except MemoryError:
        return {"fault": TOO_DEAR}, ()
    except _BROKEN:
        return {"fault": UNREADABLE}, ()
    return {"names": names, "sizes": [len(part) for part in parts]}, parts


def serve(questions: BinaryIO, answers: BinaryIO) -> None:
    """Answer questions until there are no more."""

    def say(line: Mapping[str, object]) -> None:
        answers.write(json.dumps(line).encode() + b"\n")

    def tell(done: int, pages: int) -> None:
        say({"done": done, "pages": pages})
        answers.flush()

    while line := questions.readline():
        asked = json.loads(line)
        content = questions.read(asked["size"])
        _confine(len(content))
        head, parts = answer(asked, content, tell)
        say(head)
        for part in parts:
            answers.write(part)
        answers.flush()


if __name__ == "__main__":
    serve(sys.stdin.buffer, sys.stdout.buffer)
