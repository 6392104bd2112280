"""Numbers of the comparisons as the manual prints them."""

from __future__ import annotations

import math
from collections.abc import Sequence

from calcpack.verification.comparison import Comparison
from calcpack.verification.tables import Quantity

NOTHING = 0.01  # of what is allowed: less than that is printed as none
_SUPERS = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


def signed(text: str) -> str:
    """A number with a true minus sign."""
    return text.replace("-", "\u2212")


def in_powers(number: float, digits: int = 2) -> str:
    """A small number as a power of ten.

    Examples
    --------
    >>> in_powers(1e-11), in_powers(4.5e-10)
    ('10⁻¹¹', '4.5·10⁻¹⁰')
    """
    mantissa, _, exponent = f"{number:.{digits - 1}e}".partition("e")
    power = "10" + str(int(exponent)).translate(_SUPERS)
    mantissa = mantissa.rstrip("0").rstrip(".")
    return power if mantissa == "1" else signed(f"{mantissa}·{power}")


def short(number: float, digits: int = 2) -> str:
    """A number to a few significant digits.

    Examples
    --------
    >>> short(0.0050001), short(2.5), short(183.4), short(3e-8)
    ('0.005', '2.5', '180', '3·10⁻⁸')
    """
    if number and abs(number) < 1e-4:
        return in_powers(number, digits)
    return signed(f"{float(f'{number:.{digits}g}'):.12g}")


def _places(printed: str) -> int:
    return len(printed.partition(".")[2])


def published(each: Comparison) -> str:
    """As printed; of a formula what it gives."""
    return signed(f"{each.value:.6g}") if each.is_formula else signed(each.published)


def ours(each: Comparison) -> str:
    """With two digits more than are published."""
    if isinstance(each.ours, str):
        return each.ours
    if each.is_formula:
        return signed(f"{each.ours:.6g}")
    return signed(f"{each.ours:z.{_places(each.published) + 2}f}")


def difference(each: Comparison) -> str:
    """Ours less theirs, to a hundredth of what is allowed."""
    if each.in_words or isinstance(each.ours, str):
        return "" if each.holds else "another"
    if not math.isfinite(each.difference):
        return "no number"
    if each.share < NOTHING:
        return "0"
    room = max(each.allowed.below, each.allowed.above)
    if room < 1e-6:
        size = in_powers(abs(each.difference))
        return ("+" if each.difference > 0 else "\u2212") + size
    places = max(0, 2 - math.floor(math.log10(room) + 1e-9))
    return signed(f"{each.difference:+.{places}f}")


def allowed(each: Comparison) -> str:
    """How far ours may be."""
    if each.in_words:
        return "the same"
    if each.rule.endswith(" relative"):
        return f"±{in_powers(float(each.rule.split()[0]))} of it"
    room = each.allowed
    if each.rule.startswith("rounded up"):
        return f"{signed(f'{-room.below:g}')} to 0"
    if room.below != room.above:
        low = signed(f"-{room.below:g}") if room.below else "0"
        return f"{low} to +{room.above:g}" if room.above else f"{low} to 0"
    return f"±{short(room.above)}"


def rule(quantity: Quantity, comparisons: Sequence[Comparison]) -> str:
    """A column's tolerance in words, said once for all its rows."""
    here = [each for each in comparisons if each.quantity == quantity]
    rules = dict.fromkeys(each.rule for each in here)
    words = []
    for found in rules:
        if found.endswith(" relative"):
            words.append(f"±{in_powers(float(found.split()[0]))} of it")
        elif found == "half a unit":
            words.append("half a unit of the last digit")
        else:
            words.append(found if found.startswith("rounded up") else f"±{found}")
    return " or ".join(words)


def verdict(holds: bool) -> str:
    """Whether it holds, in words."""
    return "holds" if holds else "does not hold"


def of_allowed(share: float) -> str:
    """A share of what is allowed, as a part of it.

    Examples
    --------
    >>> of_allowed(0.0), of_allowed(0.004), of_allowed(0.8712), of_allowed(0.99995), of_allowed(1.3)
    ('0', '< 0.01', '0.87', '1.00', '1.30')
    """
    if share == 0:
        return "0"
    if not math.isfinite(share):
        return "not equal"
    if share < NOTHING:
        return f"< {NOTHING:g}"
    return f"{share:.2f}"
