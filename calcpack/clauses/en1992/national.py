"""Nationally determined parameters of EN 1992-1-1, as data that a job may name or change."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from functools import lru_cache
from typing import Any

from pydantic import ValidationError

from calcpack.job.errors import CalcpackError, nearest
from calcpack.job.house import house_folder
from calcpack.job.model import Frozen

STANDARD = "EN 1992-1-1"
RECOMMENDED = "recommended"
_PREFIX = "en1992_"


class NationalValue(Frozen):
    """One parameter with the clause that leaves it open."""

    value: float
    clause: str = ""


class National(Frozen):
    """A set of parameters, complete.

    Parameters
    ----------
    name, source : str
    values : mapping of name to value
        Plain numbers; lengths in m.
    cover : mapping of exposure class to least cover for durability [m]
    """

    name: str
    source: str
    values: dict[str, NationalValue]
    cover: dict[str, float]

    def __getitem__(self, key: str) -> float:
        """The value of a parameter."""
        return self.values[key].value

    def cite(self, key: str) -> str:
        """The clause that leaves a parameter open, as a source."""
        return f"{STANDARD}, {self.values[key].clause}"


@lru_cache(maxsize=8)
def _read(name: str) -> dict[str, Any]:
    path = house_folder("shared").joinpath("national", f"{_PREFIX}{name}.toml")
    return tomllib.loads(path.read_text(encoding="utf-8"))


def national_names() -> tuple[str, ...]:
    """The sets there are."""
    folder = house_folder("shared").joinpath("national")
    return tuple(sorted(path.stem.removeprefix(_PREFIX) for path in folder.glob(f"{_PREFIX}*.toml")))


def national(name: str = RECOMMENDED, changes: Mapping[str, float | None] | None = None) -> National:
    """The parameters of a set, with single values changed.

    Parameters
    ----------
    name : str
        Of a file ``shared/national/en1992_NAME.toml``; what it leaves out has its recommended value.
    changes : mapping, optional
        Parameter -> value; None leaves it as it is.

    Returns
    -------
    National

    Raises
    ------
    CalcpackError
        There is no such set, or no such parameter; the nearest one is named.

    Source: EN 1992-1-1:2004 + AC:2010, foreword, National Annex.

    Examples
    --------
    >>> national()["gamma_C"], national(changes={"alpha_cc": 0.85})["alpha_cc"]
    (1.5, 0.85)
    >>> national("recomended")
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: design.national: there is no set 'recomended' of national parameters; \
did you mean 'recommended'?
    """
    if name not in national_names():
        raise CalcpackError(
            f"there is no set '{name}' of national parameters",
            remedy=nearest(name, national_names()),
            key="design.national",
        )
    base = _read(RECOMMENDED)
    own = _read(name)
    merged = merge(base, own)
    values = merged["values"]
    changed = {key: value for key, value in (changes or {}).items() if value is not None}
    for key, value in changed.items():
        if key not in values:
            raise CalcpackError(
                "there is no such parameter", remedy=nearest(key, values), key=f"design.national_values.{key}"
            )
        values[key] = values[key] | {"value": value}
    if changed:
        merged["name"] += f", with {', '.join(changed)} as given in the job"
    return National.model_validate(merged)


def merge(base: Mapping[str, Any], own: Mapping[str, Any]) -> dict[str, Any]:
    """A set that holds only what differs, filled up with the recommended values.

    Raises
    ------
    CalcpackError
        The set has a parameter that the standard does not leave open, or a value that is no number.

    Source: EN 1992-1-1:2004 + AC:2010, foreword, National Annex.

    Examples
    --------
    >>> ours = {"name": "ours", "source": "office", "values": {"alpha_cc": {"value": 0.85}}}
    >>> merged = merge(_read("recommended"), ours)
    >>> merged["values"]["alpha_cc"]
    {'value': 0.85, 'clause': '3.1.6(1)P'}
    """
    values = {key: dict(entry) for key, entry in base["values"].items()}
    for key, entry in own["values"].items():
        if key not in values:
            raise CalcpackError(
                f"the national set '{own['name']}' has no use for '{key}'", remedy=nearest(key, values)
            )
        values[key] |= entry
    merged = {
        "name": own["name"],
        "source": own["source"],
        "values": values,
        "cover": dict(base["cover"]) | dict(own.get("cover", {})),
    }
    try:
        National.model_validate(merged)
    except ValidationError as error:
        first = error.errors()[0]
        key = ".".join(str(part) for part in first["loc"])
        raise CalcpackError(f"the national set '{own['name']}': {first['msg'].lower()}", key=key) from None
    return merged
