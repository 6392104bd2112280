"""What a derivation is made of: steps as plain data that a sheet can show."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from calcpack.equivalent.formula import Row, Value, runs
from calcpack.equivalent.shapes import ShapeKind
from calcpack.job.model import EquivalentKind

Runs = tuple[str | dict[str, str], ...]


@dataclass(frozen=True)
class Step:
    """One step: a sentence, the equations that follow from it, the same equations spoken.

    Parameters
    ----------
    says : tuple of str and {"math": LaTeX}
    rows : tuple of str
        LaTeX, one line each, in display style.
    alt : str
        The rows in words.
    equations : tuple of sympy.Eq
        What the rows state, in sympy.
    """

    says: Runs
    rows: tuple[str, ...]
    alt: str
    equations: tuple[Value, ...]

    def as_data(self) -> dict[str, Any]:
        """Return the step as a sheet's derivation block takes it (fresh lists, JSON-ready)."""
        return {
            "says": [dict(run) if isinstance(run, dict) else run for run in self.says],
            "rows": list(self.rows),
            "alt": self.alt,
        }


@dataclass(frozen=True)
class Derivation:
    """The road from a load's shape to the uniform load that stands for it.

    Parameters
    ----------
    shape : str
        "uniform", "triangle", "trapezoid" or "general".
    kind : str
        Which equivalent: "shear", "moment", "deflection", "fixed-end moment" or "total".
    steps : tuple of Step
        The last row of the last step states the result.
    result : sympy.Eq
        w_eq = ...
    factor : sympy expression or None
        w_eq over the load's peak, in m where the shape has one; None for the general shape.
    """

    shape: ShapeKind
    kind: EquivalentKind
    steps: tuple[Step, ...]
    result: Value
    factor: Value | None

    @property
    def latex(self) -> str:
        """The result as LaTeX."""
        return self.steps[-1].rows[-1]

    def block(self) -> dict[str, Any]:
        """Return the derivation as a sheet's block (JSON-ready)."""
        return {"type": "derivation", "steps": [step.as_data() for step in self.steps]}


def step(says: str, *rows: Row) -> Step:
    """Make a step; formulas in the sentence stand between dollar signs."""
    return Step(
        runs(says),
        tuple(row.latex for row in rows),
        ". ".join(row.spoken for row in rows) + ".",
        tuple(equation for row in rows for equation in row.equations),
    )
