"""A PDF extended by what is appended to it, nothing before it touched."""

from __future__ import annotations

import hashlib
import io
import re

from pyhanko.pdf_utils import generic
from pyhanko.pdf_utils.generic import pdf_name
from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter
from pyhanko.pdf_utils.misc import PdfError
from pyhanko.pdf_utils.reader import PdfFileReader

from calcpack.job.errors import CalcpackError

_END = re.compile(rb"startxref\s+\d+\s+%%EOF(?:\r\n|\n|\r)?")


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


def built_length(data: bytes, signed_from: int | None) -> int:
    """How many bytes of a pack were there before the first signature was appended.

    Parameters
    ----------
    data : bytes
    signed_from : int or None
        Where the first signature's container begins; None where nothing is signed.

    Examples
    --------
    >>> file = b"... startxref 9 %%EOF" + bytes([10]) + b"signature startxref 30 %%EOF"
    >>> built_length(file, 25), built_length(file, None)
    (22, 50)
    """
    if signed_from is None:
        return len(data)
    ends = [match.end() for match in _END.finditer(data, 0, signed_from)]
    return ends[-1] if ends else 0


def grown_from(data: bytes, sha256: str) -> bool:
    """Whether a PDF is one of that hash with additions appended, as signatures are.

    Parameters
    ----------
    data : bytes
    sha256 : str
        In hexadecimal.

    Examples
    --------
    >>> first = b"... startxref 9 %%EOF" + bytes([10])
    >>> grown_from(first + b"signature", hashlib.sha256(first).hexdigest())
    True
    >>> grown_from(b"%" + first, hashlib.sha256(first).hexdigest())
    False
    """
    return any(hashlib.sha256(data[: match.end()]).hexdigest() == sha256 for match in _END.finditer(data))


def name(text: str) -> generic.NameObject:
    """A name of a PDF: ``name("Type")`` is /Type."""
    return pdf_name(f"/{text}")
