"""Units: exact factors, what is read, what is refused, and that nothing is evaluated."""

from __future__ import annotations

import math
import time
from collections.abc import Callable
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcpack.job import units
from calcpack.job.errors import CalcpackError
from calcpack.job.units import KINDS, dimension, factor, kind_of, parse_quantity

# Exact by definition: foot 0.3048 m, pound 0.45359237 kg, standard gravity 9.80665 m/s2.
LBF = 0.45359237 * 9.80665 / 1000


@pytest.mark.parametrize(
    ("unit", "value", "powers"),
    [
        ("m", 1.0, (0, 1)),
        ("mm", 1e-3, (0, 1)),
        ("ft", 0.3048, (0, 1)),
        ("in", 0.0254, (0, 1)),
        ("lb", LBF, (1, 0)),
        ("lbf", LBF, (1, 0)),
        ("kip", 1000 * LBF, (1, 0)),
        ("plf", LBF / 0.3048, (1, -1)),
        ("klf", 1000 * LBF / 0.3048, (1, -1)),
        ("psf", LBF / 0.3048**2, (1, -2)),
        ("ksf", 1000 * LBF / 0.3048**2, (1, -2)),
        ("psi", LBF / 0.0254**2, (1, -2)),
        ("ksi", 1000 * LBF / 0.0254**2, (1, -2)),
        ("pcf", LBF / 0.3048**3, (1, -3)),
        ("kip*ft", 1000 * LBF * 0.3048, (1, 1)),
        ("kip-ft", 1000 * LBF * 0.3048, (1, 1)),
        ("lb/ft^2", LBF / 0.3048**2, (1, -2)),
        ("N/mm^2", 1000.0, (1, -2)),
        ("kN/m²", 1.0, (1, -2)),
        ("kN·m", 1.0, (1, 1)),
        ("kN m", 1.0, (1, 1)),
        ("kN per m", 1.0, (1, -1)),
        ("kN/m2", 1.0, (1, -2)),
        ("kN m^-2", 1.0, (1, -2)),
        ("kN/m/m", 1.0, (1, -2)),
        ("mm^4", 1e-12, (0, 4)),
        ("1/m", 1.0, (0, -1)),
        ("1", 1.0, (0, 0)),
        ("rad", 1.0, (0, 0)),
        ("deg", math.pi / 180, (0, 0)),
        ("bar", 100.0, (1, -2)),  # from here on pint's own
        ("yard", 0.9144, (0, 1)),
        ("kgf/cm^2", 98.0665, (1, -2)),
    ],
)
def test_factor_and_dimension(unit: str, value: float, powers: tuple[int, int]) -> None:
    assert factor(unit) == pytest.approx(value, rel=1e-15)
    assert dimension(unit) == powers


def test_own_table_agrees_with_pint() -> None:
    registry = units._registry()
    compared = 0
    for name, unit in units._COMMON.items():
        if not registry.parse_unit_name(name) or name in ("lb", "lbs", "pound", "pounds"):
            continue  # unknown to pint, or a mass there
        value, base = registry.get_base_units(name)
        powers = base.dimensionality
        assert int(powers["[mass]"]) == unit.force if "[mass]" in powers else unit.force == 0
        assert float(value) / 1000**unit.force == pytest.approx(float(unit.factor), rel=1e-12), name
        compared += 1
    assert compared > 15


@pytest.mark.parametrize(
    ("text", "metres"),
    [
        ("14 ft 6 in", 4.4196),
        ("14'-6\"", 4.4196),
        ("14'6\"", 4.4196),
        ("14′ 6″", 4.4196),
        ("14’-6”", 4.4196),
        ("14 feet 6 inches", 4.4196),
        ("14ft", 4.2672),
        ("14'", 4.2672),
        ("14.5 ft", 4.4196),
        ('5 1/2"', 0.1397),
        ("14'-6 1/2\"", 4.4323),
        ("3/4 in", 0.01905),
        ("-2 ft 6 in", -0.762),
        ("4.5 m", 4.5),
        ("4.5m", 4.5),
        (" 4500 mm ", 4.5),
        ("4.5e3 mm", 4.5),
        ("+.5 m", 0.5),
        ("−2 m", -2.0),
        ("4.5\u00a0m", 4.5),
    ],
)
def test_lengths(text: str, metres: float) -> None:
    assert parse_quantity(text, "length") == metres


@pytest.mark.parametrize(
    ("value", "kind", "message"),
    [
        (4.5, "length", 'a length needs its unit, for example "4.5 m"'),
        ("4.5", "length", 'a length needs its unit, for example "4.5 m"'),
        (0, "pressure", 'a pressure needs its unit, for example "2.4 kPa"'),
        (True, "force", 'a force is a text with a unit, for example "12 kN"'),
        (["1 m"], "length", 'a length is a text with a unit, for example "4.5 m"'),
        ("", "length", "'' is no quantity; give a length, for example \"4.5 m\""),
        ("m", "length", "'m' is no quantity; give a length, for example \"4.5 m\""),
        ("4.5 kPa", "length", "'4.5 kPa' is a pressure, not a length; give it like \"4.5 m\""),
        ("3 kN/m", "force", "'3 kN/m' is a line load, not a force; give it like \"12 kN\""),
        ("3 kN^2", "force", "'3 kN^2' is force^2, not a force; give it like \"12 kN\""),
        ("3 m/m", "length", "'3 m/m' is a plain number, not a length; give it like \"4.5 m\""),
        ("3 kg", "force", "'kg' is a mass; give the weight, for example in kN or lb"),
        ("3 s", "length", "'s' is no unit of length, force or stress"),
        ("3 KN", "force", "there is no unit 'KN'; did you mean 'kN'?"),
        ("3 mtr", "length", "there is no unit 'mtr'; write it like 'kN/m^2', 'mm' or 'psf'"),
        ("4,5 m", "length", "'4,5 m' is no quantity; the decimal sign is a point, for example \"4.5 m\""),
        ("1 000 mm", "length", "'1 000 mm' is no quantity; give a length, for example \"4.5 m\""),
        ("nan m", "length", "'nan m' is no quantity; give a length, for example \"4.5 m\""),
        ("inf m", "length", "'inf m' is no quantity; give a length, for example \"4.5 m\""),
        ("1e999 m", "length", "'1e999 m' is no finite number; give a length, for example \"4.5 m\""),
    ],
)
def test_refused(value: object, kind: str, message: str) -> None:
    with pytest.raises(CalcpackError) as caught:
        parse_quantity(value, kind)
    assert str(caught.value) == message


HOSTILE = [
    "9**9**9 m",
    "1 m**99999",
    "1 m^9^9^9",
    "1 m**9**9**9",
    "1 (m**9)**9",
    "1e99999999999 m",
    "__import__('os')",
    "1 __import__('os').system('true')",
    "1 m; import os",
    "1 lambda: 0",
    "1 {m}",
    "1 m" * 5000,
    "9" * 100_000 + " m",
    "1 " + "m*" * 50_000,
    "1 " + "(" * 20_000,
    "1 " + "a" * 100_000,
    "1 m" + " " * 100_000 + "x",
    "1/0 in",
    "1 m\x00",
    "１ m",
]


@pytest.mark.parametrize("text", HOSTILE, ids=range(len(HOSTILE)))
def test_hostile_text_is_refused_at_once(text: str, allowed: Callable[[float], float]) -> None:
    factor("yard")  # pint is loaded, which is not what is timed
    begin = time.process_time()
    for kind in KINDS:
        with pytest.raises(CalcpackError):
            parse_quantity(text, kind)
    with pytest.raises(CalcpackError):
        factor(text)
    assert time.process_time() - begin < allowed(0.5)


@settings(deadline=None)
@given(st.text(max_size=60))
def test_any_text_is_a_finite_number_or_refused(text: str) -> None:
    try:
        value = parse_quantity(text, "length")
    except CalcpackError:
        return
    assert math.isfinite(value)


UNITS = {
    "length": ["m", "cm", "mm", "ft", "in", "yard"],
    "pressure": ["kPa", "Pa", "kN/m^2", "psf", "ksf", "lb/ft**2"],
    "line load": ["kN/m", "N/mm", "plf", "klf", "kip/ft"],
    "force": ["kN", "N", "MN", "lb", "lbf", "kip"],
    "moment": ["kN*m", "kip-ft", "lb ft"],
    "stress": ["MPa", "GPa", "psi", "ksi"],
    "unit weight": ["kN/m^3", "pcf", "lb/ft^3"],
}


@settings(max_examples=200, deadline=None)
@given(
    st.sampled_from([(kind, unit) for kind, names in UNITS.items() for unit in names]),
    st.floats(min_value=-1e12, max_value=1e12),
    st.sampled_from(["", " ", "  "]),
)
def test_round_trip(kind_and_unit: tuple[str, str], number: float, space: str) -> None:
    kind, unit = kind_and_unit
    value = parse_quantity(f"{number!r}{space}{unit}", kind)
    assert value == float(Fraction(repr(number)) * units._unit(unit).factor)  # correctly rounded, once
    assert value / factor(unit) == pytest.approx(number, rel=1e-15, abs=1e-300)
    assert parse_quantity(f"{value!r} {'m' if kind == 'length' else _si(kind)}", kind) == value


def _si(kind: str) -> str:
    force, length = KINDS[kind].force, KINDS[kind].length
    return f"kN^{force}" + (f"*m^{length}" if length else "")


@settings(deadline=None)
@given(st.integers(0, 400), st.integers(0, 11), st.integers(0, 15))
def test_feet_inches_and_sixteenths(feet: int, inches: int, sixteenths: int) -> None:
    exact = float((feet * 12 + inches + Fraction(sixteenths, 16)) * Fraction("0.0254"))
    fraction = f" {sixteenths}/16" if sixteenths else ""
    assert parse_quantity(f"{feet}'-{inches}{fraction}\"", "length") == exact
    assert parse_quantity(f"{feet} ft {inches}{fraction} in", "length") == exact


def test_every_kind_reads_its_own_example() -> None:
    for name, kind in KINDS.items():
        assert math.isfinite(parse_quantity(kind.example, name))
        assert kind_of(kind.force, kind.length)
