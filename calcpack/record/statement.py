"""What a pack says of itself for signing: job, revision, persons, level of checking, what does not hold.

It stands in the PDF's page-piece dictionary (ISO 32000-1, 14.5), which every authority accepts; a pack
without attachments carries it as well.
"""

from __future__ import annotations

import datetime
import json
from collections.abc import Mapping, Sequence
from typing import Any, Literal

from pydantic import BaseModel, ConfigDict, ValidationError
from pyhanko.pdf_utils import generic
from pyhanko.pdf_utils.reader import PdfFileReader

from calcpack.job.errors import CalcpackError
from calcpack.job.model import Header, Person, Submission
from calcpack.record.pdf_update import Update, name
from calcpack.record.roles import Role


class Statement(BaseModel):
    """What is signed, as far as signing needs to know it.

    Parameters
    ----------
    number, title, revision, date
        As on the cover.
    check_level, allow_markup
        As the job's submission says.
    prepared, checked, approved : Person
    unmet : tuple of str
        Requirements that are not satisfied: "B3 line 4.12: deflection under live load".
    """

    model_config = ConfigDict(frozen=True, extra="ignore")
    format: Literal[1] = 1
    number: str
    title: str
    revision: str
    date: datetime.date
    check_level: Literal["self", "second person", "third party"]
    allow_markup: bool
    prepared: Person = Person()
    checked: Person = Person()
    approved: Person = Person()
    unmet: tuple[str, ...] = ()

    def person(self, role: Role) -> Person:
        """Who is named for a role."""
        found: Person = getattr(self, role)
        return found


def statement_of(
    header: Header, submission: Submission, records: Sequence[Mapping[str, Any] | None]
) -> Statement:
    """The statement of a pack.

    Parameters
    ----------
    header, submission : Header, Submission
    records : sequence of mapping or None
        The records of its sheets.
    """
    return Statement(
        number=header.number,
        title=header.title,
        revision=header.revision,
        date=header.date,
        check_level=submission.check_level,
        allow_markup=submission.allow_markup,
        prepared=header.prepared,
        checked=header.checked,
        approved=header.approved,
        unmet=tuple(text for record in records if record is not None for text in unmet_of(record)),
    )


def unmet_of(record: Mapping[str, Any]) -> tuple[str, ...]:
    """The requirements of a sheet's record that are not satisfied.

    Examples
    --------
    >>> line = {"no": "4.02", "kind": "require", "says": "Bending", "passes": False}
    >>> unmet_of({"mark": "B3", "lines": [line]})
    ('B3 line 4.02: Bending',)
    """
    return tuple(
        f"{record['mark']} line {line['no']}: {line['says']}"
        for line in record.get("lines", ())
        if line.get("kind") == "require" and line.get("passes") is False
    )


def put_statement(update: Update, statement: Statement) -> None:
    """Write the statement into a PDF's page-piece dictionary."""
    text = json.dumps(statement.model_dump(mode="json"), ensure_ascii=True, sort_keys=True)
    date = statement.date
    modified = generic.TextStringObject(f"D:{date.year:04}{date.month:02}{date.day:02}000000Z")
    data = generic.DictionaryObject(
        {
            name("LastModified"): modified,
            name("Private"): generic.DictionaryObject({name("Statement"): generic.TextStringObject(text)}),
        }
    )
    pieces = generic.DictionaryObject({name("calcpack"): update.add_object(data)})
    update.root[name("PieceInfo")] = update.add_object(pieces)
    update.update_root()  # type: ignore[no-untyped-call]


def read_statement(reader: PdfFileReader, file: str) -> Statement:
    """The statement of a pack's PDF.

    Raises
    ------
    CalcpackError
        It has none: it was not built by calcpack, or is a single sheet.
    """
    try:
        text = reader.root["/PieceInfo"]["/calcpack"]["/Private"]["/Statement"]
        return Statement.model_validate_json(str(text))
    except (KeyError, TypeError, ValidationError):
        raise CalcpackError(
            f"'{file}' has no places to sign: it is no pack that calcpack built",
            remedy="name the pack.pdf of an output folder",
        ) from None
