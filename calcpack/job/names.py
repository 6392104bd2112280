"""Names of grades, sections, bars and uses as they are compared."""

from __future__ import annotations


def alike(name: str) -> str:
    """A name as it is compared: "W18x50" is "W 18X50", "S 355" is "s355"."""
    return "".join(name.split()).casefold()
