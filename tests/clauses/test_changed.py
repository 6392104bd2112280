"""How the mutation runner changes a function that is imported, hears of calls, and knows who imports whom."""

from __future__ import annotations

import importlib

from changed import CALLED, drawing_on, replace_function, telling

TEXT = '''"""A module."""


class Box:
    """A box."""

    def __init__(self, side):
        self.side = side

    @property
    def area(self):
        """Its face."""
        return (lambda side: side * 2)(self.side)


def twice(x):
    """Twice as much."""
    return 2 * x
'''


def imported(tmp_path, monkeypatch, name, text):
    path = tmp_path / f"{name}.py"
    path.write_text(text, encoding="utf-8")
    monkeypatch.syspath_prepend(tmp_path)
    return importlib.import_module(name), path


def test_functions_and_methods_get_their_new_code(tmp_path, monkeypatch):
    module, path = imported(tmp_path, monkeypatch, "to_change", TEXT)
    twice, box = module.twice, module.Box(3)
    replace_function("to_change", path, TEXT.replace("2 * x", "2.02 * x"), "twice")
    assert twice(100) == 202
    assert box.area == 6
    replace_function("to_change", path, TEXT.replace("side * 2", "side * 2.02"), "Box.area")
    assert box.area == 3 * 2.02


def test_calls_are_heard(tmp_path, monkeypatch):
    source = tmp_path / "source.py"
    source.write_text(TEXT, encoding="utf-8")
    module, _ = imported(tmp_path, monkeypatch, "that_tells", telling(source))
    CALLED.clear()
    assert module.twice(1) == 2
    assert module.twice.__doc__ == "Twice as much."
    assert {(str(source), 16)} == CALLED
    assert module.Box(3).area == 6
    assert {line for _, line in CALLED} == {7, 10, 13, 16}


def test_who_imports_a_module_by_way_of_another():
    found = drawing_on({"calcpack.clauses.aci318.limits"})
    assert {"calcpack.clauses.aci318.strength", "calcpack.clauses.aci318.detailing"} <= found
    assert "calcpack.clauses.aisc360.strength" not in found
    assert "calcpack.sheet" not in found
