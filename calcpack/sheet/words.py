"""Formulas in words: on one line for messages, and as they would be read aloud."""

from __future__ import annotations

from calcpack.sheet.display import System, parse_shown, show, shown_unit, with_unit
from calcpack.sheet.expression import Expression, Number, Operation, Quantity, Reference
from calcpack.sheet.symbols import read_symbol
from calcpack.sheet.unit_text import label, unit_spoken

_SIGNS = {"add": " + ", "sub": " - ", "mul": "*", "div": "/", "pow": "^"}
_RELATIONS = {"eq": " = ", "le": " <= ", "lt": " < ", "ge": " >= ", "gt": " > "}
_RANKS = {"add": 1, "sub": 1, "sum": 1, "neg": 2, "mul": 3, "div": 3, "pow": 5}


def _rank(node: Expression) -> int:
    return _RANKS.get(node.name, 6) if isinstance(node, Operation) else 6


def plain(root: Expression) -> str:
    """A formula on one line, as it could be typed.

    Examples
    --------
    >>> q, S = Reference("q", "2.01"), Reference("S", "1.02")
    >>> plain(q * S / 2 - (q - 3) ** 2)
    'q*S/2 - (q - 3)^2'
    """

    def held(node: Expression, least: int) -> str:
        return plain(node) if _rank(node) >= least else f"({plain(node)})"

    match root:
        case Number():
            return root.text
        case Quantity():
            return f"{root.text} {label(root.unit)}".strip()
        case Reference():
            return root.symbol
        case Operation(name="pi"):
            return "pi"
        case Operation(name="neg"):
            return "-" + held(root.args[0], 3)
        case Operation(name="sum"):
            return " + ".join([held(root.args[0], 1), *(held(each, 3) for each in root.args[1:])])
        case Operation(name=name) if name in _SIGNS:
            rank = _RANKS[name]
            left, right = root.args
            return held(left, rank + (name == "pow")) + _SIGNS[name] + held(right, max(rank + 1, 3))
        case Operation(name=name) if name in _RELATIONS:
            return _RELATIONS[name].join(plain(each) for each in root.args)
        case Operation():
            unit = f", {label(root.unit)}" if root.unit else ""
            return f"{root.name}({', '.join(plain(each) for each in root.args)}{unit})"
    raise TypeError(f"{root!r} is not an expression")


def shown_constant(node: Quantity, system: System) -> str:
    r"""A constant as printed: in full where somebody wrote it, rounded where it was worked out.

    Examples
    --------
    >>> for text in ("25", "12.345678901"):
    ...     print(ascii(shown_constant(Quantity(text, "kN"), "SI")))
    '25\xa0kN'
    '12.3\xa0kN'
    """
    if node.rounded:
        return show(float(node.text), node.unit, system)
    written = len(node.text.replace(".", "").strip("0")) <= 6
    if written and shown_unit(node.unit, system) == node.unit and node.unit != "1":
        return with_unit(node.text, node.unit)
    return show(float(node.text), node.unit, system, exact=written)


_SPOKEN_SIGNS = {"add": "plus", "sub": "minus", "mul": "times", "div": "over", "pow": "to the power"}
_SPOKEN_RELATIONS = {
    "eq": "equals",
    "le": "is at most",
    "lt": "is less than",
    "ge": "is at least",
    "gt": "is more than",
}
_FUNCTIONS = {
    "sqrt": "the square root of", "abs": "the size of", "min": "the least of", "max": "the greatest of",
    "sin": "the sine of", "cos": "the cosine of", "tan": "the tangent of", "atan": "the arc tangent of",
    "log": "the natural logarithm of", "exp": "the exponential of",
}  # fmt: skip


def _spoken_rank(node: Expression) -> int:
    """Words for a function do not hold together as its parentheses do."""
    if isinstance(node, Operation) and node.name not in (*_RANKS, "pi"):
        return 0 if node.name == "choose" else 4
    return _rank(node)


def spoken(root: Expression, system: System = "SI") -> str:
    """A formula as read aloud, symbols by name.

    Examples
    --------
    >>> q, m = Reference("q", "2.01"), Reference("m", "3.04")
    >>> spoken(q / 2 * (3 - m**2))
    'q over 2 times (3 minus m squared)'
    """

    def held(node: Expression, least: int) -> str:
        said = spoken(node, system)
        return said if _spoken_rank(node) >= least else f"({said})"

    match root:
        case Number():
            return root.text
        case Quantity():
            return spoken_value(shown_constant(root, system))
        case Reference():
            return read_symbol(root.symbol).spoken
        case Operation(name="pi"):
            return "pi"
        case Operation(name="neg"):
            return "minus " + held(root.args[0], 3)
        case Operation(name="sum"):
            return " plus ".join(held(each, 3) for each in root.args)
        case Operation(name="pow", arguments=(base, Number(text="2"))):
            return f"{held(base, 6)} squared"
        case Operation(name=name) if name in _SPOKEN_SIGNS:
            rank = _RANKS[name]
            left, right = root.args
            sign = _SPOKEN_SIGNS[name]
            return f"{held(left, rank + (name == 'pow'))} {sign} {held(right, max(rank + 1, 3))}"
        case Operation(name=name) if name in _SPOKEN_RELATIONS:
            left, right = root.args
            return f"{held(left, 1)} {_SPOKEN_RELATIONS[name]} {held(right, 1)}"
        case Operation(name="choose"):
            condition, then, otherwise = (spoken(each, system) for each in root.args)
            return f"{then} if {condition}, otherwise {otherwise}"
        case Operation(name="number_in" | "in_unit"):
            return f"{held(root.args[0], 3)} in {unit_spoken(root.unit)}"
        case Operation(arguments=arguments):
            inner = " and ".join(held(each, 5) for each in arguments)
            return f"{_FUNCTIONS[root.name]} {inner}"
    raise TypeError(f"{root!r} is not an expression")


def spoken_value(shown: str) -> str:
    """A printed value as read aloud.

    Examples
    --------
    >>> spoken_value("−54.0 kN·m"), spoken_value("83.56 × 10⁶ mm⁴")
    ('minus 54.0 kilonewton metres', '83.56 times 10 to the power 6 millimetres to the power 4')
    """
    number, unit = parse_shown(shown)
    digits = shown.split()[0].rstrip("°").lstrip("-\u2212")
    power = ""
    if "×" in shown:
        exponent = number.as_tuple().exponent
        ten = int(exponent) + len(digits.partition(".")[2])
        power = f" times 10 to the power {f'minus {-ten}' if ten < 0 else ten}"
    words = unit_spoken(unit)
    return f"{'minus ' if number < 0 else ''}{digits}{power}{f' {words}' if words else ''}"
