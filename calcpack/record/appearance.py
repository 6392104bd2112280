"""What is seen of a signature: set with the page's own faces, every one embedded."""

from __future__ import annotations

import datetime
import io
from collections.abc import Sequence

from pyhanko.pdf_utils.content import PdfContent, ResourceType
from pyhanko.pdf_utils.layout import AxisAlignment, BoxConstraints, Margins, SimpleBoxLayoutRule
from pyhanko.pdf_utils.reader import PdfFileReader
from pyhanko.stamp import StaticStampStyle

from calcpack.export.mathematics import Mathematics
from calcpack.export.paper import Paper
from calcpack.export.text import clean, shown_date
from calcpack.export.typesetting import Setting, typeset
from calcpack.job.errors import CalcpackError
from calcpack.record.pdf_update import name


class _Drawn(PdfContent):
    """A page set on its own, as the content of a stamp."""

    def __init__(self, pdf: bytes, width: float, height: float) -> None:
        super().__init__(box=BoxConstraints(width=width, height=height))
        self._pdf = pdf

    def render(self) -> bytes:
        page = self._ensure_writer.import_page_as_xobject(PdfFileReader(io.BytesIO(self._pdf)), page_ix=0)
        self.set_resource(category=ResourceType.XOBJECT, name=name("Signature"), value=page)
        return b"/Signature Do"


def shown_time(moment: datetime.datetime) -> str:
    """A moment with its offset from universal time.

    Examples
    --------
    >>> shown_time(datetime.datetime(2026, 12, 1, 9, 5, tzinfo=datetime.UTC))
    '1 Dec 2026 09:05 UTC'
    """
    offset = moment.utcoffset() or datetime.timedelta()
    zone = "UTC" if not offset else f"UTC{moment:%z}"[:6] + ":" + f"{moment:%z}"[3:]
    return f"{shown_date(moment.date())} {moment:%H:%M} {zone}"


def appearance(
    box: tuple[float, float, float, float],
    *,
    signer: str,
    licence: str,
    role: str,
    moment: datetime.datetime,
    notes: Sequence[str],
) -> StaticStampStyle:
    """The stamp of a signature.

    Parameters
    ----------
    box : tuple of float
        Left, bottom, right, top [pt] of its place.
    signer, licence, role : str
    moment : datetime
        With its time zone.
    notes : sequence of str
        The reason and whatever else is to be seen, a paragraph each.

    Raises
    ------
    CalcpackError
        It does not fit its place in lettering that can be read.
    """
    width, height = box[2] - box[0], box[3] - box[1]
    paper = Paper(Mathematics())
    data = {
        "title": "Signature",
        "date": [moment.year, moment.month, moment.day],
        "width": width,
        "height": height,
        "name": paper.words(clean(signer)),
        "licence": paper.words(clean(licence)),
        "role": paper.words(role),
        "time": paper.words(shown_time(moment)),
        "notes": [paper.words(clean(note)) for note in notes],
    }
    done = typeset(Setting("signature.typ", data, moment.date(), queries=("fits",)))
    if not all(done.places["fits"]):
        raise CalcpackError(
            "the reason is too long to be read in the signature's place",
            remedy="say it in fewer words and name the document that says the rest",
        )
    return StaticStampStyle(
        border_width=0,
        background=_Drawn(done.pdf, width, height),
        background_layout=SimpleBoxLayoutRule(
            x_align=AxisAlignment.ALIGN_MIN, y_align=AxisAlignment.ALIGN_MIN, margins=Margins.uniform(0)
        ),
        background_opacity=1.0,
    )
