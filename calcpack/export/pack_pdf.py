"""The pack on paper: cover, index, basis, schedule, reactions, sheets, appendices and manifest in one file.

``paginate`` lays everything out and tells every sheet its numbers; with these ``set_sheets`` sets the single
sheets, and ``build_pack`` sets what stands around them, its manifest naming their hashes, and binds all.
Nothing in a number changes the layout, and a sheet's own file has the pages the pack has.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass

from calcpack.export.binding import Bound, Place, bind
from calcpack.export.content import SheetNumbers
from calcpack.export.mathematics import Mathematics
from calcpack.export.pack import Pack
from calcpack.export.pack_design import PackDesign, pages_of
from calcpack.export.press import Press
from calcpack.export.typesetting import Typeset, typeset
from calcpack.job.errors import CalcpackError

_HEIGHTS = {"A4": 297.0, "Letter": 279.4}  # [mm]
_POINT = 72 / 25.4


@dataclass(frozen=True)
class SigningPlace:
    """Room for a signature: ``box`` is left, bottom, right, top in PDF points; ``page`` counts from 0."""

    role: str
    page: int
    box: tuple[float, float, float, float]


@dataclass(frozen=True)
class BuiltPack:
    """The pack's file, every sheet's numbers, and where it is signed."""

    pdf: bytes
    numbers: dict[str, SheetNumbers]
    signing: tuple[SigningPlace, ...]


def paginate(
    pack: Pack,
    mathematics: Mathematics | None = None,
    press: Press | None = None,
    *,
    done: Callable[[], None] = lambda: None,
) -> dict[str, SheetNumbers]:
    """Lay everything out and number the sheets.

    Parameters
    ----------
    pack : Pack
        With as many ``files`` as the final one will have, under their final names; their hashes may be empty.
    mathematics : Mathematics
        Formulas known already.
    press : Press
        Sets the sheets.
    done : callable
        Called as each sheet is laid out.

    Returns
    -------
    dict
        Mark of every sheet and appendix -> its first page and the count of all.

    Raises
    ------
    CalcpackError
        Two sheets have the same mark, or something cannot be set.
    """
    design = PackDesign(pack, mathematics or Mathematics())
    laid = (press or Press()).set_all(design.sheets(), pdf=False, done=done)
    return design.numbers([pages_of(each) for each in laid])


def set_sheets(
    pack: Pack,
    mathematics: Mathematics | None = None,
    press: Press | None = None,
    *,
    done: Callable[[], None] = lambda: None,
) -> dict[str, Typeset]:
    """Every sheet and appendix of a pack as its own PDF, and where the lines stand that the pack leads to.

    Parameters
    ----------
    pack : Pack
        Its sheets numbered.
    mathematics, press, done
        As of :func:`paginate`.

    Returns
    -------
    dict
        Mark -> its file, the same as that of :func:`sheet_pdf`.
    """
    design = PackDesign(pack, mathematics or Mathematics())
    done_sheets = (press or Press()).set_all(design.sheets(), done=done)
    return {content.mark: each for content, each in zip(pack.bound, done_sheets, strict=True)}


def build_pack(
    pack: Pack, mathematics: Mathematics | None = None, sheets: Mapping[str, Typeset] | None = None
) -> BuiltPack:
    """Set what stands before and behind the sheets and bind all.

    Parameters
    ----------
    pack : Pack
        Its sheets numbered.
    mathematics : Mathematics
        Formulas known already.
    sheets : mapping
        The sheets as :func:`set_sheets` made them of the same pack; without it they are set here.

    Returns
    -------
    BuiltPack
        Equal for equal packs, byte by byte.

    Raises
    ------
    CalcpackError
        Two sheets have the same mark, something cannot be set, or the manifest changed the count of
        pages since the sheets were numbered.
    """
    mathematics = mathematics or Mathematics()
    design = PackDesign(pack, mathematics)
    made = sheets or set_sheets(pack, mathematics)
    numbers = design.numbers([pages_of(made[content.mark]) for content in pack.bound])
    for content in pack.bound:
        given = content.numbers
        if given != numbers[content.mark]:
            raise CalcpackError(
                f"the sheet is numbered {given.first} of {given.of}, but the pack puts it at"
                f" {numbers[content.mark].first} of {numbers[content.mark].of}",
                mark=content.mark,
                remedy="number the sheets again with the pack as it is",
            )
    start, end = (typeset(each) for each in design.around)
    parts = [
        Bound("start", start.pdf),
        *(
            Bound(
                str(number),
                made[content.mark].pdf,
                {
                    at["line"]: Place(at["page"] - 1, at["x"], at["y"])
                    for at in made[content.mark].places["led-to"]
                },
            )
            for number, content in enumerate(pack.bound)
        ),
        Bound("end", end.pdf),
    ]
    return BuiltPack(
        bind(parts, files=pack.submission.attachments), numbers, tuple(_signing(start, pack.submission.paper))
    )


def _signing(start: Typeset, paper: str) -> Iterator[SigningPlace]:
    height = _HEIGHTS[paper]
    for place in start.places["signing"]:
        if place["part"] == "cover":
            box = (
                place["x"],
                height - place["y"] - place["height"],
                place["x"] + place["width"],
                height - place["y"],
            )
            left, bottom, right, top = (round(each * _POINT, 2) for each in box)
            yield SigningPlace(place["role"], place["page"] - 1, (left, bottom, right, top))
