"""Names of grades, sections, bars and uses as they are compared."""

from __future__ import annotations

import re

# "20 mm", "20", "Ø20"; "#8", "No. 8", "no 8". A bare number is a diameter in mm.
_METRIC = re.compile(r"(?:[øØ⌀]\s*)?([0-9]{1,6})(?:\.0*)?\s*(?:mm)?", re.IGNORECASE)
_US = re.compile(r"(?:#|no\.?)\s*([0-9]{1,6})", re.IGNORECASE)


def alike(name: str) -> str:
    """A name as it is compared: "W18x50" is "W 18X50", "S 355" is "s355"."""
    return "".join(name.split()).casefold()


def bar_name(size: str) -> str:
    """A bar's size in the one form of its kind; a name of another kind as it is.

    Examples
    --------
    >>> bar_name("Ø20"), bar_name("No. 8"), bar_name(" D18 ")
    ('20 mm', '#8', 'D18')
    """
    text = size.strip()
    for pattern, form in ((_METRIC, "{} mm"), (_US, "#{}")):
        if match := pattern.fullmatch(text):
            return form.format(int(match[1]))
    return text
