"""A PDF to which something was appended: what it was before."""

from __future__ import annotations

import hashlib
import re

_END = re.compile(rb"startxref\s+\d+\s+%%EOF(?:\r\n|\n|\r)?")


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
    whole, done = hashlib.sha256(), 0
    for match in _END.finditer(data):
        whole.update(data[done : match.end()])
        done = match.end()
        if whole.hexdigest() == sha256:
            return True
    return False
