"""The kinds of value a key of the job file can have, checked and turned into SI.

These are validators for pydantic models. What they refuse they say in full: message and remedy travel
to the reader, which knows the place.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Annotated, Any, NamedTuple

from pydantic import BeforeValidator
from pydantic_core import PydanticCustomError

from calcpack.job.errors import CalcpackError
from calcpack.job.units import KINDS, parse_quantity

FARTHEST = 1e5  # [m]; a plan reaches 100 km at most, everything else 1e12 in its SI unit
LARGEST = 1e12
SMALLEST = 1e-9  # of a size that has to be more than nothing, in its SI unit

_MARK = re.compile(r"[A-Za-z0-9_][A-Za-z0-9 ._-]{0,39}")
_TAKEN = {"pack", "index", "appendix", "con", "prn", "aux", "nul"}
_TAKEN |= {f"{port}{number}" for port in ("com", "lpt") for number in range(1, 10)}


def refusal(message: str, remedy: str = "") -> PydanticCustomError:
    """What a validator raises; the reader makes a problem of it."""
    return PydanticCustomError("calcpack", "{message}", {"message": message, "remedy": remedy})


@dataclass(frozen=True)
class Quantity:
    """A text with a unit, turned into SI.

    Parameters
    ----------
    kind : str
        What it is, one of ``units.KINDS``.
    sign : str
        "any", "not negative" or "positive".
    """

    kind: str
    sign: str = "any"

    def __call__(self, value: object) -> float:
        """The quantity in SI, or a refusal."""
        try:
            number = parse_quantity(value, self.kind)
        except CalcpackError as error:
            raise refusal(error.problems[0].message, error.problems[0].remedy) from None
        name = KINDS[self.kind].name
        if abs(number) > (FARTHEST if self.kind == "length" else LARGEST):
            raise refusal(f"'{value}' is beyond anything built")
        if self.sign == "positive" and number < SMALLEST ** max(1, KINDS[self.kind].length):
            raise refusal(f"'{value}' is not more than zero", f"give {name} greater than zero")
        if self.sign == "not negative" and number < 0:
            raise refusal(f"'{value}' is negative", "give zero or more")
        return number


@dataclass(frozen=True)
class Number:
    """A plain number between two bounds."""

    least: float
    largest: float

    def __call__(self, value: object) -> float:
        """The number, or a refusal."""
        if isinstance(value, bool) or not isinstance(value, int | float):
            raise refusal(f"{shown(value)} is no number", "give a plain number, without quotes or unit")
        if not self.least <= value <= self.largest:
            raise refusal(f"{value:g} is out of bounds", f"it can be {self.least:g} to {self.largest:g}")
        return float(value)


class Spot(NamedTuple):
    """A point given by its two coordinates [m], and how the user wrote them."""

    x: float
    y: float
    texts: tuple[str, str]


def shown(value: object) -> str:
    """A value as a message quotes it, cut where it is long."""
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, dict):
        return "a table"
    text = f"'{value}'" if isinstance(value, str) else str(value)
    return text if len(text) <= 60 else f"{text[:56]}..."


def _mark(value: object) -> str:
    if not isinstance(value, str):
        raise refusal("a mark is a text", 'write it in quotes, for example mark = "B1"')
    if not _MARK.fullmatch(value) or value.endswith((" ", ".")):
        raise refusal(
            f"{shown(value)} cannot be a mark",
            "a mark names a file: letters A to Z, digits, and inside it spaces . _ -, at most 40 characters",
        )
    if value.split(".")[0].strip().lower() in _TAKEN:
        raise refusal(f"'{value}' cannot be a mark", "some systems or the pack itself keep this file name")
    return value


def _point(value: object) -> str | Spot:
    if isinstance(value, str) and value.strip():
        return value
    if not isinstance(value, list) or len(value) != 2:
        raise refusal(
            f"{shown(value)} is no point", 'a point is a grid point "A1" or a pair ["3.2 m", "1.0 m"]'
        )
    x, y = (Quantity("length")(each) for each in value)
    return Spot(x, y, (str(value[0]), str(value[1])))


def _flange_width(value: object) -> float | str:
    return "effective" if value == "effective" else Quantity("length", "positive")(value)


def _number(value: object) -> float:
    return Number(-LARGEST, LARGEST)(value)


Mark = Annotated[str, BeforeValidator(_mark)]
PointGiven = Annotated[Any, BeforeValidator(_point)]  # a grid point's name or a Spot
Length = Annotated[float, BeforeValidator(Quantity("length"))]
Size = Annotated[float, BeforeValidator(Quantity("length", "positive"))]
Area = Annotated[float, BeforeValidator(Quantity("area", "positive"))]
FlangeWidth = Annotated[float | str, BeforeValidator(_flange_width)]
Pressure = Annotated[float, BeforeValidator(Quantity("pressure", "not negative"))]
LineLoad = Annotated[float, BeforeValidator(Quantity("line load"))]
Force = Annotated[float, BeforeValidator(Quantity("force"))]
UnitWeight = Annotated[float, BeforeValidator(Quantity("unit weight", "positive"))]
Stress = Annotated[float, BeforeValidator(Quantity("stress", "positive"))]
Plain = Annotated[float, BeforeValidator(_number)]
Strain = Annotated[float, BeforeValidator(Number(0.0, 1.0))]
Share = Annotated[float, BeforeValidator(Number(0.0, 1.0))]
Factor = Annotated[float, BeforeValidator(Number(0.0, 100.0))]
