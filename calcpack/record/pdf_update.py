"""A PDF extended by what is appended to it, nothing before it touched."""

from __future__ import annotations

import hashlib
import io

from pyhanko.pdf_utils import generic
from pyhanko.pdf_utils.generic import pdf_name
from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter
from pyhanko.pdf_utils.misc import PdfError
from pyhanko.pdf_utils.reader import PdfFileReader

from calcpack.job.errors import CalcpackError


class Update(IncrementalPdfFileWriter):  # type: ignore[misc, unused-ignore]
    """Appends to a PDF; the same addition to the same file gives the same bytes.

    The document's metadata stay as they are (its XMP packet and its information dictionary keep saying the
    same thing), and the file's second identifier follows from its content instead of from chance.
    """

    def __init__(self, pdf: bytes) -> None:
        super().__init__(io.BytesIO(pdf))

    def _update_meta(self) -> None:
        pass

    @classmethod
    def _handle_id(cls, prev: PdfFileReader) -> generic.ArrayObject:
        prev.stream.seek(0)
        digest = hashlib.sha256(prev.stream.read()).digest()[:16]
        first = prev.trailer["/ID"][0] if "/ID" in prev.trailer else digest
        raw = getattr(first, "original_bytes", first)
        return generic.ArrayObject([generic.ByteStringObject(raw), generic.ByteStringObject(digest)])

    def bytes(self) -> bytes:
        """The file with its addition."""
        written = io.BytesIO()
        self.write(written)  # type: ignore[no-untyped-call]
        return written.getvalue()


def open_pdf(data: bytes, name: str) -> PdfFileReader:
    """A reader on a PDF.

    Raises
    ------
    CalcpackError
        It is none, or it is damaged.
    """
    try:
        reader = PdfFileReader(io.BytesIO(data))
        _ = reader.root["/Pages"]
    except (PdfError, ValueError, KeyError, TypeError, AttributeError, IndexError, RecursionError) as error:
        raise CalcpackError(f"'{name}' cannot be read as a PDF: {error}") from None
    return reader


def name(text: str) -> generic.NameObject:
    """A name of a PDF: ``name("Type")`` is /Type."""
    return pdf_name(f"/{text}")
