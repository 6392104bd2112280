"""Combinations of actions, read as data from shared/combinations."""

from __future__ import annotations

import tomllib
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from functools import cache
from itertools import combinations as choose
from typing import Any, Literal

from calcpack.job.errors import CalcpackError, nearest
from calcpack.job.house import house_folder
from calcpack.job.model import CASES, Case, OwnCombination, Psi
from calcpack.job.uses import DEFAULT_CATEGORY

VARIABLE: tuple[Case, ...] = ("live", "roof_live", "snow")
PLACED: tuple[Case, ...] = ("live", "roof_live")  # put span by span where they are worst
OWN_SET = "job"


@dataclass(frozen=True)
class Combination:
    """Factors on the load cases that act together.

    Parameters
    ----------
    name : str
        As an engineer would write it: ``1.35 G + 1.5 Q``.
    limit : "strength" or "service"
    factors : mapping of case to float
        Cases left out do not act.
    situation : str
        For service: characteristic, frequent, quasi-permanent, short-term, long-term.
    cite : str
        The clause it comes from.
    """

    name: str
    limit: Literal["strength", "service"]
    factors: Mapping[Case, float]
    situation: str = ""
    cite: str = ""


@dataclass(frozen=True)
class CombinationSet:
    """All combinations of a named set for the cases that occur."""

    name: str
    source: str
    family: str  # "EN", "ASCE" or "own"
    combinations: tuple[Combination, ...]
    psi: Mapping[Case, Mapping[str, Any]] = field(default_factory=dict)
    psi_source: str = ""


@cache
def _files() -> dict[str, dict[str, Any]]:
    found = {}
    for path in sorted(house_folder("shared").joinpath("combinations").glob("*.toml")):
        data = tomllib.loads(path.read_text(encoding="utf-8"))
        if "name" in data:
            found[data["name"]] = data
    return found


@cache
def _psi() -> dict[str, Any]:
    return tomllib.loads(
        house_folder("shared").joinpath("combinations", "psi.toml").read_text(encoding="utf-8")
    )


def set_names() -> tuple[str, ...]:
    """Names a job may put under ``basis.actions``."""
    return (*_files(), OWN_SET)


def combination_set(
    name: str,
    cases: Iterable[Case],
    *,
    occupancy: str = "",
    own: Sequence[OwnCombination] = (),
    live_psi: Psi | None = None,
) -> CombinationSet:
    """Write out a set of combinations for the load cases that occur.

    Parameters
    ----------
    name : str
        The name of a file's set in shared/combinations, or ``job`` for the job's own alone.
    cases : iterable of case
        Those that occur; a combination is written with these alone, each once.
    occupancy : str
        Category of the live load, A to G, where the set has ψ factors; "" takes B.
    own : sequence of OwnCombination
        What the job file states itself, put behind those of the set.
    live_psi : Psi or None
        The job's own factors of the live load, in place of the category's.

    Raises
    ------
    CalcpackError
        No such set, no such category, or a set without any combination.

    Examples
    --------
    >>> found = combination_set("ASCE 7-22 strength", ["dead", "live"])
    >>> [each.name for each in found.combinations if each.limit == "strength"]
    ['1.4 D', '1.2 D + 1.6 L', '1.2 D + L']
    """
    if name not in set_names():
        raise CalcpackError(
            f"no set of combinations '{name}'", remedy=nearest(name, set_names()), key="basis.actions"
        )
    present = tuple(case for case in CASES if case in set(cases))
    if name == OWN_SET:
        data: dict[str, Any] = {"family": "own", "source": "the job file", "symbols": {}}
    else:
        data = _files()[name]
    symbols = {"dead": "D", "live": "L", "roof_live": "Lr", "snow": "S"} | data["symbols"]
    psi = _psi_factors(occupancy, live_psi) if "rule" in data else {}
    written = [
        *(each for rule in data.get("rule", ()) for each in _by_rule(rule, data, present, psi)),
        *(each for entry in data.get("combination", ()) for each in _by_entry(entry, present)),
        *(_only(each.factors, present, each.limit, "", "the job file", each.name) for each in own),
    ]
    combinations = _named(written, symbols)
    if not combinations:
        raise CalcpackError(
            f"the set '{name}' has no combination for this job's load cases",
            remedy="state them as [[combination]] entries",
            key="basis.actions",
        )
    return CombinationSet(
        name=name,
        source=data["source"],
        family=data["family"],
        combinations=combinations,
        psi={case: factors for case, factors in psi.items() if case in present},
        psi_source=_psi_source(live_psi if "live" in present else None) if psi else "",
    )


def _psi_source(live: Psi | None) -> str:
    """Where the factors are from."""
    table = str(_psi()["source"])
    return f"Live load: {live.source}; otherwise {table}" if live else table


def _psi_factors(occupancy: str, live: Psi | None) -> dict[Case, dict[str, Any]]:
    table = _psi()
    category = occupancy or DEFAULT_CATEGORY
    if category not in table["live"]:
        raise CalcpackError(
            f"no category '{category}'", remedy=nearest(category, table["live"]), key="basis.occupancy"
        )
    own = live.model_dump(exclude={"source"}) if live else {}
    return {
        "live": table["live"][category] | own | {"category": category},
        "roof_live": table["roof_live"]["H"] | {"category": "H"},
        "snow": table["snow"]["low"] | {"category": "snow"},
    }


@dataclass(frozen=True)
class _Draft:
    factors: dict[Case, float]
    limit: Literal["strength", "service"]
    situation: str
    cite: str
    name: str = ""


def _only(
    factors: Mapping[Case, float],
    present: Sequence[Case],
    limit: Literal["strength", "service"],
    situation: str,
    cite: str,
    name: str = "",
) -> _Draft:
    kept = {case: factors[case] for case in present if factors.get(case, 0.0) != 0.0}
    return _Draft(kept, limit, situation, cite, name)


def _by_entry(entry: Mapping[str, Any], present: Sequence[Case]) -> Iterator[_Draft]:
    """A combination written out in the file, with each of its ``one_of`` in turn."""
    occur = set(VARIABLE) & set(present)
    for companion in ({}, *entry.get("one_of", ())):
        factors = entry["factors"] | companion
        variable = set(factors) & set(VARIABLE)
        if variable and occur and not variable & occur:
            continue  # all it is about does not occur; what is left of it says nothing of its own
        yield _only(factors, present, entry["limit"], entry.get("situation", ""), entry["cite"])


def _by_rule(
    rule: Mapping[str, Any],
    data: Mapping[str, Any],
    present: Sequence[Case],
    psi: Mapping[Case, Mapping[str, Any]],
) -> Iterator[_Draft]:
    """A leading variable action and others beside it, each at its own ψ (EN 1990, 6.4.3.2)."""
    variable = [case for case in present if case in VARIABLE]
    apart = [set(pair) for pair in data.get("not_together", ())]
    for permanent in rule["permanent"]:
        if not variable or set(variable) - set(PLACED):
            yield _only({"dead": permanent}, present, rule["limit"], rule.get("situation", ""), rule["cite"])
        for leading in variable:
            others = [case for case in variable if case != leading and {case, leading} not in apart]
            for count in range(len(others) + 1):
                for beside in choose(others, count):
                    if not _fit_together(beside, others, apart):
                        continue
                    factors = {"dead": permanent, leading: _at(rule, "leading", psi[leading])} | {
                        case: _at(rule, "accompanying", psi[case]) for case in beside
                    }
                    yield _only(factors, present, rule["limit"], rule.get("situation", ""), rule["cite"])


def _fit_together(beside: Sequence[Case], others: Sequence[Case], apart: Sequence[set[Case]]) -> bool:
    """Whether these may act together, and no movable load is left out that might act too.

    A movable load is placed where it is worst, nowhere included, so leaving it out says nothing new.
    """
    if any(set(pair) in apart for pair in choose(beside, 2)):
        return False
    return not any(
        case in PLACED and case not in beside and not any({case, other} in apart for other in beside)
        for case in others
    )


def _at(rule: Mapping[str, Any], role: str, psi: Mapping[str, Any]) -> float:
    factor = float(rule[role])
    # rounded, since 1.5 x 0.7 is not 1.05 in binary
    return round(factor * float(psi[rule[f"{role}_psi"]]), 12) if f"{role}_psi" in rule else factor


def _named(drafts: Iterable[_Draft], symbols: Mapping[str, str]) -> tuple[Combination, ...]:
    """Name them, drop what is empty or said before."""
    seen: set[tuple[Any, ...]] = set()
    names: set[tuple[str, str]] = set()
    result = []
    for draft in drafts:
        key = (draft.limit, draft.situation, tuple(sorted(draft.factors.items())), draft.name)
        if not draft.factors or key in seen:
            continue
        seen.add(key)
        name = draft.name or " + ".join(
            symbols[case] if factor == 1.0 else f"{factor:.5g} {symbols[case]}"
            for case, factor in draft.factors.items()
        )
        if (name, draft.limit) in names:  # the same sum in another service situation
            name = f"{name} ({draft.situation})" if draft.situation else f"{name} ({draft.cite})"
        names.add((name, draft.limit))
        result.append(Combination(name, draft.limit, draft.factors, draft.situation, draft.cite))
    return tuple(result)
