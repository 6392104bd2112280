"""What is printed is the value, rounded as printed; and it can be read back."""

from __future__ import annotations

from decimal import ROUND_HALF_UP, Decimal, localcontext

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcpack.job.units import dimension, factor
from calcpack.sheet.display import (
    MINUS,
    NO_BREAK,
    display_unit,
    is_shown_as,
    parse_shown,
    show,
    shown_column,
    shown_number,
    shown_unit,
)
from calcpack.sheet.unit_text import ATOMS, exact_factor, exponents, label, unit_of, unit_spoken

UNITS = (
    "m", "mm", "kN", "kN/m", "kPa", "MPa", "kN*m", "kN/m^3", "m^2", "m^4", "mm^2", "mm^3", "mm^4", "1", "rad",
    "1/m", "kN*m^2", "kN*m^3", "mm^2/m", "deg", "ft", "psi",
)  # fmt: skip
SIZES = st.floats(min_value=1e-9, max_value=1e12) | st.floats(min_value=-1e9, max_value=-1e-9) | st.just(0.0)
SHORT = st.decimals(min_value=-10000, max_value=10000, places=3).map(float)


def exactly(value: float, unit: str, other: str) -> Decimal:
    """The value in another unit, by decimal arithmetic of many digits."""
    ratio = exact_factor(unit) / exact_factor(other)
    return Decimal(repr(value)) * ratio.numerator / ratio.denominator


@settings(max_examples=400, deadline=None)
@given(SIZES | SHORT, st.sampled_from(UNITS), st.sampled_from(["SI", "US"]), st.booleans())
def test_printed_is_the_value_rounded(value: float, unit: str, system: str, exact: bool) -> None:
    text = show(value, unit, system, exact)  # type: ignore[arg-type]
    number, other = parse_shown(text)
    assert other == shown_unit(unit, system)  # type: ignore[arg-type]
    with localcontext() as context:
        context.prec = 80
        step = Decimal(1).scaleb(number.as_tuple().exponent)  # type: ignore[arg-type]
        expected = (exactly(value, unit, other) / step).quantize(Decimal(1), ROUND_HALF_UP) * step
        assert number == expected
        assert is_shown_as(value, unit, text)
        one_off = text.replace(text.split(NO_BREAK)[0].rstrip("°"), str(abs(number) + step), 1)
        if "×" not in text:
            assert not is_shown_as(value, unit, one_off)


@settings(max_examples=300, deadline=None)
@given(st.floats(min_value=1e-3, max_value=1e9), st.sampled_from(UNITS))
def test_a_computed_value_has_three_figures_and_no_decimals_beyond_four(value: float, unit: str) -> None:
    number, _ = parse_shown(show(value, unit, "SI", shown_in=unit))
    digits, exponent = number.as_tuple().digits, number.as_tuple().exponent
    if value < 0.51e-5 or not number:
        return
    assert isinstance(exponent, int)
    assert len(digits) >= 3
    assert exponent >= 0 or len(digits) <= 4
    assert abs(float(number) - value) <= 0.006 * value


@settings(max_examples=300, deadline=None)
@given(st.integers(1, 99_999_999), st.integers(0, 6), st.sampled_from(UNITS), st.sampled_from(["SI", "US"]))
def test_a_given_value_is_shown_in_full(digits: int, places: int, unit: str, system: str) -> None:
    value = float(Decimal(digits).scaleb(-places))
    shown = parse_shown(show(value, unit, "SI", True, shown_in=unit))[0]
    assert shown == Decimal(repr(value))
    if exponents(unit) == (0, 1) and unit != "ft":  # given in feet, kept in metres
        kept = value * 0.3048
        assert parse_shown(show(kept, "m", "US", True))[0] == Decimal(repr(value))


@pytest.mark.parametrize(
    ("value", "unit", "exact", "si", "us"),
    [
        (4.5, "m", True, "4.50 m", "14.7638 ft"),
        (4.125, "m", True, "4.125 m", "13.5335 ft"),
        (4.2672, "m", True, "4.2672 m", "14.00 ft"),
        (14 * 0.3048, "m", True, "4.2672 m", "14.00 ft"),
        (0.55 * 1000, "mm", True, "550 mm", "21.6535 in"),
        (2.39401450, "kPa", True, "2.3940145 kPa", "50 psf"),
        (54.0, "kN*m", False, "54.0 kN·m", "39.8 kip·ft"),
        (110.66, "kN*m", False, "110.7 kN·m", "81.6 kip·ft"),
        (10.0562, "kN/m", False, "10.06 kN/m", "0.689 klf"),
        (0.75, "1", False, "0.750", "0.750"),
        (0.75, "1", True, "0.75", "0.75"),
        (4, "1", True, "4", "4"),
        (9.9996, "kN", False, "10.0 kN", "2.25 kip"),
        (0.9999, "kN", False, "1.00 kN", "0.225 kip"),
        (-0.00001, "kN", False, "0.0 kN", "0.0 kip"),
        (-0.0, "kN/m", False, "0.00 kN/m", "0.000 klf"),
        (-12.35, "kN", False, f"{MINUS}12.4 kN", f"{MINUS}2.78 kip"),  # halves away from zero
        (12.25, "kN", False, "12.3 kN", "2.75 kip"),
        (1256.637, "mm^2", False, "1257 mm²", "1.95 in²"),
        (8.356e7, "mm^4", False, "83.56 × 10⁶ mm⁴", "201 in⁴"),
        (8.356e-5, "m^4", False, "83.56 × 10⁻⁶ m⁴", "0.00968 ft⁴"),
        (25.0, "kN/m^3", True, "25.0 kN/m³", "159.147 pcf"),
        (1 / 3, "1", True, "0.333333", "0.333333"),
        (21.8, "deg", False, "21.8°", "21.8°"),
        (999.96, "m", False, "1000 m", "3281 ft"),
        (999999.6, "mm", False, "1000000 mm", "39370 in"),
    ],
)
def test_as_an_engineer_writes_it(value: float, unit: str, exact: bool, si: str, us: str) -> None:
    assert show(value, unit, "SI", exact).replace(NO_BREAK, " ") == si
    assert show(value, unit, "US", exact).replace(NO_BREAK, " ") == us


def test_a_unit_of_the_author_s_choice() -> None:
    strength = 4000 * factor("psi") / 1000
    assert show(strength, "MPa", "US", True, shown_in="psi") == f"4000{NO_BREAK}psi"
    with pytest.raises(ValueError, match="cannot be shown in 'm'"):
        show(strength, "MPa", "US", shown_in="m")


@pytest.mark.parametrize("value", [float("nan"), float("inf"), float("-inf")])
def test_no_finite_number(value: float) -> None:
    with pytest.raises(ValueError, match="cannot be shown"):
        show(value, "kN", "SI")
    assert not is_shown_as(value, "kN", "1.0 kN")


@pytest.mark.parametrize("unit", ["furlong", "", "kN*", "kN^", "m m", "kN//m", "__import__", "kN*m" * 20])
def test_units_that_no_sheet_knows(unit: str) -> None:
    with pytest.raises(ValueError, match="not one the sheet knows"):
        show(1.0, unit, "SI")


@pytest.mark.parametrize(
    "text", ["", "kN", "1.0 kN; rm", "1e5", "1.0  kN", "--1", "1.0 bogus", "1" * 200, "NaN"]
)
def test_texts_that_nobody_printed(text: str) -> None:
    with pytest.raises(ValueError):
        parse_shown(text)


def test_a_wrong_unit_is_not_the_value() -> None:
    assert not is_shown_as(12.0, "kN", "12.0 kN/m")


@pytest.mark.parametrize("unit", [*ATOMS, "kN*m", "kN/m", "kN/m^3", "mm^4", "kip*ft", "kN*m^2", "1/m"])
def test_units_agree_with_those_of_the_job_file(unit: str) -> None:
    assert exponents(unit) == dimension(unit)
    assert float(exact_factor(unit)) == pytest.approx(factor(unit), rel=1e-15)


@pytest.mark.parametrize("unit", [*ATOMS, *UNITS, "kip*ft", "kN/m^2", "in^3"])
def test_labels_are_read_back(unit: str) -> None:
    assert unit_of(label(unit)) == unit


@pytest.mark.parametrize("unit", UNITS)
def test_display_unit_converts(unit: str) -> None:
    text, times = display_unit(unit, "US")
    other = unit_of(text)
    assert exponents(other) == exponents(unit)
    assert times == pytest.approx(factor(unit) / factor(other), rel=1e-14)
    assert exponents(unit_of(display_unit(other, "SI")[0])) == exponents(unit)


def test_a_column_has_one_count_of_decimals() -> None:
    assert shown_column([1234.56, -0.04, 12.3], "kN", "SI") == ["1235", "0", "12"]
    assert shown_column([9.99, -0.06], "kN", "SI") == ["9.99", f"{MINUS}0.06"]
    assert shown_column([], "kN", "SI") == []
    assert shown_column([0.0], "kN/m", "US") == ["0.000"]


def test_number_alone() -> None:
    assert shown_number(54.0, "kN*m", "US") == "39.8"


def test_units_aloud() -> None:
    assert unit_spoken("kip*ft") == "kip feet"
    assert unit_spoken("psf") == "pounds per square foot"
    assert unit_spoken("kN/m") == "kilonewtons per metre"
    assert unit_spoken("m") == "metres"
    assert unit_spoken("1/m") == "per metre"
