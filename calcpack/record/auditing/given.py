"""What a sheet's notebook holds, read as data: its parameters, its copy of the record, what it shows."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import Any

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.beam import Load
from calcpack.record.auditing.reading import LARGEST_NOTEBOOK, read_json
from calcpack.record.auditing.shapes import Each, Few, Maybe, misfit

BLOCKS = "application/vnd.calcpack.blocks+json"
RECORD = "application/vnd.calcpack.record+json"
# The cell is a name and one raw string without its own quotes inside: what stands between them is the text.
_CELL = re.compile(r"\s*[A-Z]+\s*=\s*r(?P<quote>'''|\"\"\")(?P<text>.*)(?P=quote)\s*", re.S)
MOST_LOADS = 1_000
CASES = ("dead", "live", "roof_live", "snow")
LONGEST = 10_000.0  # beam [m]
MOST_PANELS = 200  # that load one beam
MOST_CUTS = 2_000_000  # dividing a panel again takes its corners to the third
MOST_CORNERS = 60  # of a panel, and of what drains to one of its edges
_LOADS = [{"source": str}]
_SHARE = {
    "edge": int, "carrier": str, "carrier_kind": str, "area": float,
    "region": Few((float, float), MOST_CORNERS), "depth": Few((float, float), MOST_CORNERS),
    "ends": Few((float, float), MOST_CORNERS),
}  # fmt: skip
_PANEL = {
    "mark": str, "corners": Few((float, float), MOST_CORNERS), "thickness": float, "unit_weight": float,
    **dict.fromkeys(CASES, float),
}  # fmt: skip
_PARAMETERS = {
    "mark": str,
    "length": float,
    "bearings": [{"at": float, "kind": str, "mark": str}],
    "fixed": (bool, bool),
    "free": (bool, bool),
    "equivalent": str,
    "design_loads": str,
    "loads": Each(_LOADS),
    "placements": [{"case": str, "beam": str, "span": int, "loads": _LOADS}],
    "section": Maybe(
        {"key": str, "shape": str, "dimensions": Each(float), "area": float, "inertia": float},
    ),
    "material": Maybe({"key": str, "modulus": float, "unit_weight": float}),
    "panels": Few(
        {
            "panel": _PANEL, "area": float, "sides": [float], "transfer": str,
            "direction": Maybe((float, float)), "supported": [bool], "continuous": [bool],
            "shares": Few(_SHARE, MOST_CORNERS),
        },
        MOST_PANELS,
    ),
    "carried": [{"mark": str, "at": float, "reactions": Each(float)}],
    "basis": {"dividing_lines": str, "live_load_reduction": Maybe(str), "occupancy": Maybe(str)},
    "actions": {"combinations": [{"name": str, "limit": str, "factors": Each(float)}]},
    "bars": Maybe([{"name": str, "diameter": float, "area": float, "source": str}]),
    "live_psi": Maybe({"psi0": float, "psi1": float, "psi2": float}),
    "tributary": Maybe([{"area": float, "source": str, "exempt": str}]),
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class Bearing:
    """What stands under a point of the beam."""

    at: float
    kind: str
    mark: str


@dataclass(frozen=True, slots=True)
class Placed:
    """A span of a beam loaded: what that puts on this beam."""

    case: str
    beam: str
    span: int
    loads: tuple[Load, ...]


class Given:
    """A beam's parameters.

    Parameters
    ----------
    data : mapping
        As the notebook's first cell holds them.

    Raises
    ------
    CalcpackError
        They are not a beam's parameters.
    """

    def __init__(self, data: Mapping[str, Any], name: str) -> None:
        self.data = data
        self.name = name
        if fault := misfit(data, _PARAMETERS):
            raise CalcpackError(
                f"its parameters are not those of a beam: {fault}",
                file=name,
                remedy="audit the record without it",
            )
        if sum(len(each["panel"]["corners"]) ** 3 for each in data["panels"]) > MOST_CUTS:
            raise CalcpackError("more panels and corners than load a beam", file=name)
        try:
            self.mark = str(data["mark"])
            self.length = float(data["length"])
            self.bearings = tuple(
                Bearing(float(each["at"]), str(each["kind"]), str(each["mark"])) for each in data["bearings"]
            )
            self.fixed = (bool(data["fixed"][0]), bool(data["fixed"][1]))
            self.free = (bool(data["free"][0]), bool(data["free"][1]))
            self.equivalent = str(data["equivalent"])
            self.design_loads = str(data["design_loads"])
            self.loads = {str(case): _loads(each) for case, each in data["loads"].items()}
            self.placements = tuple(
                Placed(str(each["case"]), str(each["beam"]), int(each["span"]), _loads(each["loads"]))
                for each in data["placements"]
            )
            self.section: Mapping[str, Any] | None = data["section"]
            self.material: Mapping[str, Any] | None = data["material"]
            self.panels: Sequence[Mapping[str, Any]] = data["panels"]
            self.carried: Sequence[Mapping[str, Any]] = data["carried"]
            self.basis: Mapping[str, Any] = data["basis"]
            self.combinations: Sequence[Mapping[str, Any]] = data["actions"]["combinations"]
            self.tributary: Sequence[Mapping[str, Any]] = data.get("tributary") or ()
            within = all(0.0 <= bearing.at <= self.length for bearing in self.bearings)
            if not 0.0 < self.length <= LONGEST or not self.bearings or not within:
                raise ValueError
            if not set(self.loads) <= set(CASES):
                raise ValueError
        except (KeyError, TypeError, ValueError, IndexError, AttributeError):
            raise CalcpackError(
                "its parameters are not those of a beam", file=name, remedy="audit the record without it"
            ) from None

    @property
    def supports(self) -> tuple[float, ...]:
        """Places of the supports [m]."""
        return tuple(bearing.at for bearing in self.bearings)

    @property
    def spans(self) -> tuple[tuple[float, float], ...]:
        """Start and end of every span, overhangs included [m]."""
        return tuple(pairwise(sorted({0.0, self.length, *self.supports})))

    @property
    def stiffness(self) -> float | None:
        """E I of the gross section [kNm2]."""
        if self.section is None or self.material is None:
            return None
        return float(self.section["inertia"]) * float(self.material["modulus"])


def _loads(data: Sequence[Mapping[str, Any]]) -> tuple[Load, ...]:
    if len(data) > MOST_LOADS:
        raise ValueError
    return tuple(_load(each) for each in data)


_POINT = {"at": float, "force": float, "source": str}
_SEGMENT = {"start": float, "end": float, "first": float, "last": float, "source": str}


def _load(data: Mapping[str, Any]) -> Load:
    if fault := misfit(data, _POINT if "at" in data else _SEGMENT):
        raise ValueError(fault)
    if "at" in data:
        at, force = float(data["at"]), float(data["force"])
        return Load(at, at, force, force, data["source"], point=True)
    if not data["end"] > data["start"]:
        raise ValueError
    ends = float(data["start"]), float(data["end"])
    return Load(*ends, float(data["first"]), float(data["last"]), data["source"])


def recorded_loads(data: object) -> dict[str, tuple[Load, ...]]:
    """The loads as a record states them.

    Raises
    ------
    ValueError
        They are none.
    """
    try:
        found = {}
        for case, rows in data.items():  # type: ignore[attr-defined]
            if case not in CASES:
                raise ValueError
            found[str(case)] = _loads(
                [
                    row
                    if "at" in row
                    else {
                        "start": row["from"],
                        "end": row["to"],
                        "first": row["start"],
                        "last": row["end"],
                        "source": row["source"],
                    }
                    for row in rows
                ]
            )
        return found
    except (KeyError, TypeError, AttributeError, ValueError):
        raise ValueError("the loads are not written as loads") from None


@dataclass(frozen=True)
class Notebook:
    """A sheet's notebook, read as data."""

    data: Mapping[str, Any]
    name: str

    @cached_property
    def metadata(self) -> Mapping[str, Any]:
        """What an exporter reads of it."""
        found = self.data.get("metadata")
        own = found.get("calcpack") if isinstance(found, dict) else None
        return own if isinstance(own, dict) else {}

    @cached_property
    def cells(self) -> list[Mapping[str, Any]]:
        """Its cells."""
        found = self.data.get("cells")
        return [each for each in found if isinstance(each, dict)] if isinstance(found, list) else []

    def _outputs(self) -> Iterator[Mapping[str, Any]]:
        for cell in self.cells:
            outputs = cell.get("outputs")
            for output in outputs if isinstance(outputs, list) else ():
                data = output.get("data") if isinstance(output, dict) else None
                if isinstance(data, dict):
                    yield data

    @cached_property
    def record(self) -> Mapping[str, Any] | None:
        """Its copy of the record."""
        found = [data[RECORD] for data in self._outputs() if RECORD in data]
        return found[-1] if found and isinstance(found[-1], dict) else None

    @cached_property
    def blocks(self) -> list[Mapping[str, Any]]:
        """What it shows, in order; of blocks side by side those in the columns."""
        found: list[Mapping[str, Any]] = []

        def gather(blocks: object) -> None:
            for block in blocks if isinstance(blocks, list) else ():
                if not isinstance(block, dict):
                    continue
                if block.get("type") == "columns" and isinstance(block.get("columns"), list):
                    for column in block["columns"]:
                        gather(column)
                else:
                    found.append(block)

        for data in self._outputs():
            held = data.get(BLOCKS)
            if isinstance(held, dict):
                gather(held.get("blocks"))
        return found

    @cached_property
    def lines(self) -> dict[str, Mapping[str, Any]]:
        """The lines it shows, by number."""
        found: dict[str, Mapping[str, Any]] = {}
        for block in self.blocks:
            if block.get("type") == "line":
                found.setdefault(str(block.get("no")), block)
        return found

    @cached_property
    def tables(self) -> list[Mapping[str, Any]]:
        """The tables it shows, in order."""
        return [
            block
            for block in self.blocks
            if block.get("type") == "table"
            and isinstance(block.get("columns"), list)
            and isinstance(block.get("rows"), list)
        ]

    @cached_property
    def given(self) -> Given | None:
        """Its parameters; None for a notebook that has none of a beam's."""
        for cell in self.cells:
            tags = cell.get("metadata", {}).get("tags") if isinstance(cell.get("metadata"), dict) else None
            if cell.get("cell_type") != "code" or not isinstance(tags, list) or "parameters" not in tags:
                continue
            source = cell.get("source")
            text = "".join(map(str, source)) if isinstance(source, list) else str(source)
            match = _CELL.fullmatch(text)
            if not match or match["quote"] in match["text"]:
                raise CalcpackError("its parameters are not one string of data", file=self.name)
            data = read_json(match["text"].encode(), self.name, LARGEST_NOTEBOOK)
            return Given(data, self.name) if isinstance(data, dict) and "bearings" in data else None
        return None


def read_notebook(content: bytes, name: str) -> Notebook:
    """A notebook as data; nothing in it is run.

    Raises
    ------
    CalcpackError
        It is no notebook.

    Examples
    --------
    >>> read_notebook(b'{"cells": [], "metadata": {}}', "B1.ipynb").given is None
    True
    """
    data = read_json(content, name, LARGEST_NOTEBOOK)
    if not isinstance(data, dict) or "cells" not in data:
        raise CalcpackError("it is no notebook", file=name)
    return Notebook(data, name)
