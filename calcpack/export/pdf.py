"""One sheet as a PDF: PDF/A-3a and PDF/UA-1, searchable, tagged, its notebook and record inside."""

from __future__ import annotations

from collections.abc import Sequence

from calcpack.export.content import SheetContent
from calcpack.export.mathematics import Mathematics
from calcpack.export.paper import Paper, document_data, sheet_part
from calcpack.export.typesetting import Attached, Setting, typeset

NOTEBOOK_MIME = "application/x-ipynb+json"
RECORD_FILE_MIME = "application/json"


def sheet_pdf(content: SheetContent, mathematics: Mathematics | None = None) -> bytes:
    """A calculation sheet on paper.

    Parameters
    ----------
    content : SheetContent
    mathematics : Mathematics
        Formulas known already, shared between the sheets of a pack.

    Returns
    -------
    bytes
        The PDF; the same for the same content.

    Raises
    ------
    CalcpackError
        Something in the sheet cannot be set.
    """
    return typeset(sheet_setting(content, mathematics or Mathematics())).pdf


def sheet_setting(content: SheetContent, mathematics: Mathematics, led_to: Sequence[str] = ()) -> Setting:
    """A sheet as a document to be set.

    Parameters
    ----------
    content : SheetContent
    mathematics : Mathematics
    led_to : sequence of str
        Numbers of the lines whose places are wanted under "led-to"; "pages" brings the count of pages.
    """
    paper = Paper(mathematics)
    part = sheet_part(content, paper)
    header = content.header
    title = f"{content.mark} {content.title} – job {header.number}, revision {header.revision}"
    data = document_data(header, content.submission.paper, title, f"Calculation sheet of {header.title}")
    data |= {"maths": paper.formulas, "part": part, "led-to": list(led_to)}
    return Setting(
        "sheet.typ",
        data,
        header.date,
        attached=attachments(content) if content.submission.attachments else (),
        files=paper.pictures,
        queries=("pages", "led-to"),
        first=content.numbers.first,
        of=content.numbers.of,
    )


def attachments(content: SheetContent) -> tuple[Attached, ...]:
    """The files a sheet carries inside."""
    found = [Attached(f"{content.mark}.ipynb", content.notebook, NOTEBOOK_MIME, "Executed notebook")]
    if content.record is not None:
        found.append(Attached(f"{content.mark}.json", content.record_bytes, RECORD_FILE_MIME, "Sheet record"))
    return tuple(found)
