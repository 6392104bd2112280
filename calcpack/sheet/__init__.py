"""Lines of calculation: written once, shown as words, formula, numbers and result, kept as a record."""

from calcpack.sheet.book import Sheet
from calcpack.sheet.display import (
    display_unit,
    is_shown_as,
    parse_shown,
    show,
    shown_column,
    shown_number,
)
from calcpack.sheet.expression import Expression, Number, Operation, Quantity, Reference, expression
from calcpack.sheet.line import Line
from calcpack.sheet.operations import (
    PI,
    absolute,
    atan,
    choose,
    cos,
    equal,
    exp,
    greatest,
    in_unit,
    least,
    log,
    measured,
    number,
    number_in,
    quantity,
    sin,
    sqrt,
    tan,
    total,
)
from calcpack.sheet.record import Source, check_record, read_record, write_json
from calcpack.sheet.runs import emphasis, formula, strong
from calcpack.sheet.symbols import indexed
from calcpack.sheet.trees import from_json, to_json

__all__ = [
    "PI",
    "Expression",
    "Line",
    "Number",
    "Operation",
    "Quantity",
    "Reference",
    "Sheet",
    "Source",
    "absolute",
    "atan",
    "check_record",
    "choose",
    "cos",
    "display_unit",
    "emphasis",
    "equal",
    "exp",
    "expression",
    "formula",
    "from_json",
    "greatest",
    "in_unit",
    "indexed",
    "is_shown_as",
    "least",
    "log",
    "measured",
    "number",
    "number_in",
    "parse_shown",
    "quantity",
    "read_record",
    "show",
    "shown_column",
    "shown_number",
    "sin",
    "sqrt",
    "strong",
    "tan",
    "to_json",
    "total",
    "write_json",
]
