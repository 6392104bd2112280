"""The uses of a job's floors: what a panel's use asks for, and the category whose factors the job takes."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import NamedTuple

from calcpack.job.errors import nearest
from calcpack.job.model import Basis, Occupancy, Panel, Psi
from calcpack.job.names import alike
from calcpack.job.occupancies import applying

CATEGORIES = tuple("ABCDEFGH")
DEFAULT_CATEGORY = "B"


class Fault(NamedTuple):
    """What is wrong with ``basis.occupancy``."""

    message: str
    remedy: str


class Uses:
    """The uses a job can name.

    Parameters
    ----------
    actions : str
        ``basis.actions``.
    own : sequence of Occupancy
        The job's own.

    Examples
    --------
    >>> uses = Uses("EN 1990", ())
    >>> uses.find("a  stairs").uniform
    2.0
    >>> uses.settled(Basis(occupancy="C3"), ())[0].occupancy
    'C'
    >>> uses.settled(Basis(occupancy="J"), ())
    Fault(message="there is no category 'J'", remedy="it can be 'A', 'B', 'C', 'D', 'E', 'F', 'G' or 'H'")
    """

    def __init__(self, actions: str, own: Iterable[Occupancy]) -> None:
        self.own = {alike(use.key): use for use in own}
        self._known: dict[str, tuple[Occupancy, str]] = {}
        for use, source in applying(actions, tuple(self.own.values())):
            self._known.setdefault(alike(use.key), (use, source))

    @property
    def names(self) -> list[str]:
        """As the tables write them, the job's own first."""
        return [use.key for use, _ in self._known.values()]

    def find(self, name: str) -> Occupancy | None:
        """The use of that name."""
        found = self._known.get(alike(name))
        return found[0] if found else None

    def source(self, use: Occupancy) -> str:
        """Where the use's values are from."""
        return self._known[alike(use.key)][1]

    def settled(self, basis: Basis, panels: Iterable[Panel]) -> tuple[Basis, Psi | None] | Fault:
        """The basis with the EN 1990 category of its use, and the job's own factors for it.

        ``basis.occupancy`` may be a category or the name of a use. Where it is not given, it follows from
        the panels' uses, if these agree.

        Parameters
        ----------
        basis : Basis
        panels : iterable of Panel

        Returns
        -------
        tuple of (Basis, Psi or None), or Fault
        """
        if basis.occupancy:
            return self._named(basis)
        if not basis.actions.startswith("EN"):
            return basis, None
        found = [use for panel in panels if panel.use and (use := self.find(panel.use)) and use.category]
        kinds = {(use.category, use.psi): use for use in found}
        if len(kinds) > 1:
            names = ", ".join(f"{use.key} (category {use.category})" for use in kinds.values())
            message = f"the panels' uses have different factors: {names}"
            return Fault(message, "name the use or the category whose factors the job takes")
        if found:
            return self._taken(basis, found[0])
        usual = self.own.get(alike(DEFAULT_CATEGORY))  # what is taken where nothing is named
        return basis, self._taken(basis, usual)[1] if usual else None

    def _named(self, basis: Basis) -> tuple[Basis, Psi | None] | Fault:
        """The basis of a job that names its category or use."""
        name = basis.occupancy
        own = self.own.get(alike(name))
        if own is None and name in CATEGORIES:
            return basis, None
        use = own or self.find(name)
        if use is None:
            choices = [*CATEGORIES, *(each.key for each in self.own.values())]
            return Fault(f"there is no category '{name}'", nearest(name, choices))
        if not use.category:
            return Fault(f"the use '{name}' has no category", "give it one in its table, or name A to H here")
        return self._taken(basis, use)

    def _taken(self, basis: Basis, use: Occupancy) -> tuple[Basis, Psi | None]:
        psi = None
        if use.psi:
            psi0, psi1, psi2 = use.psi
            psi = Psi(psi0=psi0, psi1=psi1, psi2=psi2, use=use.says or use.key, source=self.source(use))
        return basis.model_copy(update={"occupancy": use.category}), psi


def live_load(raw_live: float | None, use: Occupancy | None) -> float:
    """The live load of a panel [kPa]: as given, or of its use."""
    return raw_live if raw_live is not None else use.uniform if use else 0.0


def with_use(use: Occupancy, uses: Uses) -> Mapping[str, str]:
    """What a panel keeps of its use.

    Examples
    --------
    >>> uses = Uses("EN 1990", ())
    >>> with_use(uses.find("B"), uses)
    {'use': 'B', 'use_source': 'EN 1991-1-1 Table 6.2, offices', 'unreduced': ''}
    """
    source = f"{uses.source(use)}, {use.says}" if use.says else uses.source(use)
    unreduced = ""
    if use.reduced:
        reason = use.reduced.removeprefix("no").lstrip(", ")
        unreduced = f"use {use.key} is not reduced" + (f" ({reason})" if reason else "")
    return {"use": use.key, "use_source": source, "unreduced": unreduced}
