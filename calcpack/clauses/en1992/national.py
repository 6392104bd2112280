"""Nationally determined parameters of EN 1992-1-1, as data that a job may name or change."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from functools import cache
from typing import Any, NamedTuple

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


class Difference(NamedTuple):
    """A parameter that differs from its recommended value; lengths in m."""

    symbol: str
    value: float
    recommended: float
    is_length: bool
    clause: str

    @property
    def words(self) -> str:
        """As a sheet says it."""
        scale, unit = (1e3, " mm") if self.is_length else (1.0, "")
        value, base = (f"{each * scale:.6g}{unit}" for each in (self.value, self.recommended))
        return f"{self.symbol} = {value} (recommended {base})"


# How a sheet calls a parameter: the standard's symbol, where it stands.
SYMBOLS = {
    "gamma_C": "γ_C", "gamma_S": "γ_S", "alpha_cc": "α_cc", "alpha_ct": "α_ct", "delta_c_dev": "Δc_dev",
    "delta_k1": "k1 of 5.5(4)", "delta_k2": "k2 of 5.5(4), factor", "delta_k3": "k3 of 5.5(4)",
    "delta_k4": "k4 of 5.5(4), factor", "c_Rd": "C_Rd,c times γ_C", "v_min": "v_min, factor",
    "nu": "ν, factor", "alpha_cw": "α_cw", "cot_theta_min": "least cot θ", "cot_theta_max": "largest cot θ",
    "crack_k3": "k3 of 7.3.4(3)", "crack_k4": "k4 of 7.3.4(3)", "bar_k1": "k1 of 8.2(2)",
    "bar_k2": "k2 of 8.2(2)", "as_min": "A_s,min, factor", "as_min_least": "A_s,min, least ratio",
    "as_max": "A_s,max, ratio", "beta_1": "β1 of 9.2.1.2(1)", "beta_2": "β2 of 9.2.1.4(1)",
    "rho_w_min": "ρ_w,min, factor", "s_l_max": "s_l,max over d", "s_t_max": "s_t,max over d",
    "s_t_most": "s_t,max", "K_simple": "K, simple span", "K_end": "K, end span", "K_inner": "K, inner span",
    "K_cantilever": "K, cantilever",
}  # fmt: skip
LENGTHS = ("delta_c_dev", "bar_k2", "s_t_most")


class National(Frozen):
    """A set of parameters, complete.

    Parameters
    ----------
    name, source : str
    values : mapping of name to value
        Plain numbers; lengths in m.
    cover : mapping of exposure class to least cover for durability [m]
    file : str
        Beside the job file; empty for a shipped set.
    own : set of str
        Parameters and exposure classes that the set gives itself.
    """

    name: str
    source: str
    values: dict[str, NationalValue]
    cover: dict[str, float]
    file: str = ""
    own: frozenset[str] = frozenset()  # the parameters that the set itself gives

    @property
    def differing(self) -> list[Difference]:
        """What differs from the recommended values, in the standard's order."""
        base = National.model_validate(_read(RECOMMENDED))
        found = [
            Difference(SYMBOLS[key], each.value, base[key], key in LENGTHS, each.clause)
            for key, each in self.values.items()
            if each.value != base[key]
        ]
        return found + [
            Difference(f"c_min,dur of {key}", value, base.cover[key], True, "Table 4.4N")
            for key, value in self.cover.items()
            if value != base.cover[key]
        ]

    def __getitem__(self, key: str) -> float:
        """The value of a parameter."""
        return self.values[key].value

    def cite(self, key: str) -> str:
        """The clause that leaves a parameter open, as a source."""
        return f"{STANDARD}, {self.values[key].clause}"


@cache
def _read(name: str) -> dict[str, Any]:
    path = house_folder("shared").joinpath("national", f"{_PREFIX}{name}.toml")
    return tomllib.loads(path.read_text(encoding="utf-8"))


def national_names() -> tuple[str, ...]:
    """The sets there are."""
    folder = house_folder("shared").joinpath("national")
    return tuple(sorted(path.stem.removeprefix(_PREFIX) for path in folder.glob(f"{_PREFIX}*.toml")))


def national(
    given: str | Mapping[str, Any] = RECOMMENDED, changes: Mapping[str, float | None] | None = None
) -> National:
    """The parameters of a set, with single values changed.

    Parameters
    ----------
    given : str or mapping
        Name of a file ``shared/national/en1992_NAME.toml``, or the set of a file beside the job:
        ``file, name, source, values, cover``. What it leaves out has its recommended value.
    changes : mapping, optional
        Parameter -> value; None leaves it as it is.

    Returns
    -------
    National

    Raises
    ------
    CalcpackError
        There is no such set, or no such parameter, and the nearest one is named; limits that cross.

    Source: EN 1992-1-1:2004 + AC:2010, foreword, National Annex.

    Examples
    --------
    >>> national()["gamma_C"], national(changes={"alpha_cc": 0.85})["alpha_cc"]
    (1.5, 0.85)
    >>> national("recomended")
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: design.national: there is no set 'recomended' of national parameters; \
did you mean 'recommended'?, or a file beside the job, 'recomended.toml'
    >>> ours = {"file": "a.toml", "name": "Annex A", "source": "office", "values": {"gamma_C": 1.4}}
    >>> [each.words for each in national(ours).differing]
    ['γ_C = 1.4 (recommended 1.5)']
    """
    base = _read(RECOMMENDED)
    merged = merge(base, _set(given))
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
    low, high = (values[f"cot_theta_{end}"]["value"] for end in ("min", "max"))
    if low > high:
        raise CalcpackError(
            f"the least cot θ, {low:g}, is above the largest, {high:g}",
            remedy="give cot_theta_min below cot_theta_max",
            key="design.national",
        )
    return National.model_validate(merged)


def _set(given: str | Mapping[str, Any]) -> dict[str, Any]:
    """A set as data: of a file beside the job, or shipped."""
    if not isinstance(given, str):
        return {
            "file": given["file"],
            "name": given["name"],
            "source": given["source"],
            "values": {key: {"value": value} for key, value in given["values"].items() if value is not None},
            "cover": {key: value for key, value in given.get("cover", {}).items() if value is not None},
        }
    if given not in national_names():
        raise CalcpackError(
            f"there is no set '{given}' of national parameters",
            remedy=f"{nearest(given, national_names())}, or a file beside the job, '{given}.toml'",
            key="design.national",
        )
    return _read(given)


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
        "file": own.get("file", ""),
        "own": frozenset((*own["values"], *own.get("cover", {}))),
    }
    try:
        National.model_validate(merged)
    except ValidationError as error:
        first = error.errors()[0]
        key = ".".join(str(part) for part in first["loc"])
        raise CalcpackError(f"the national set '{own['name']}': {first['msg'].lower()}", key=key) from None
    return merged
