"""Every public function of the clauses says what it takes, in which unit, and which clause it is from."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

CLAUSES = Path(__file__).parents[2] / "calcpack" / "clauses"
# Tables, words and lengths that no clause is about.
OTHER = {"arranged", "candidates", "choose_bars", "rounded_down", "bound", "guard", "limit_words", "cite",
         "bare", "shared", "psi", "take_stirrups", "segments", "within", "millimetres", "uniform"}  # fmt: skip


def public(standard):
    """The functions of a standard's modules, and the methods that take figures."""
    for path in sorted((CLAUSES / standard).glob("*.py")):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.FunctionDef) and ast.get_docstring(node) and node.name not in OTHER:
                yield path.name, node


def figures(node):
    """The arguments that are plain numbers."""
    arguments = [*node.args.args, *node.args.kwonlyargs]
    return [each.arg for each in arguments if each.annotation and ast.unparse(each.annotation) == "float"]


FUNCTIONS = [
    (standard, name, node)
    for standard in ("aci318", "aisc360", "en1992", "en1993")
    for name, node in public(standard)
    if node.args.args[:1] and node.args.args[0].arg != "self" and not node.name.startswith("_")
]


@pytest.mark.parametrize(
    ("standard", "name", "node"), FUNCTIONS, ids=lambda value: getattr(value, "name", value)
)
def test_a_function_is_its_data_sheet(standard, name, node):
    said = ast.get_docstring(node)
    assert "Source: " in said, f"{standard}/{name}: {node.name} names no clause"
    for figure in figures(node):
        assert figure in said, f"{standard}/{name}: {node.name} does not say what {figure} is"


def test_there_are_functions_to_look_at():
    assert len(FUNCTIONS) > 60
