"""What loads do to one span: against the beam analysis, against closed sums in exact arithmetic."""

from __future__ import annotations

import itertools
import math
import random
from dataclasses import replace
from fractions import Fraction

import pytest

from calcpack.equivalent import Responses, by_source, loads_on, responses, stretches
from calcpack.statics import BeamLine, LineLoad, Load, PointLoad, analyse

EXACT = 1e-12


def drawn(seed: int, *, lifting: bool) -> tuple[float, list[Load]]:
    """A span with up to six loads that may overlap, touch or stand on one place."""
    rng = random.Random(seed)
    span = round(rng.uniform(0.8, 14), 3)
    low = -40.0 if lifting else 0.0
    places = [0.0, span, span / 2, span / 3, *(rng.uniform(0, span) for _ in range(4))]
    loads: list[Load] = []
    for _ in range(rng.randint(1, 6)):
        if rng.random() < 0.35:
            loads.append(PointLoad(rng.choice(places[2:]), rng.uniform(low, 90)))
            continue
        start, end = sorted(rng.sample(places, 2))
        loads.append(LineLoad(start, end, rng.uniform(low, 50), rng.choice([0.0, rng.uniform(low, 50)])))
    return span, loads


def by_analysis(span: float, loads: list[Load]) -> Responses:
    """The same from the analysis of a beam under any supports."""
    simple = analyse(BeamLine(span, (0.0, span)), [loads])
    fixed = analyse(BeamLine(span, (0.0, span), fixed_start=True, fixed_end=True), [loads])
    left, right = (float(value) for value in simple.reactions[0])
    start, end = (-float(value) for value in fixed.end_moments[0])

    def largest(quantity: str) -> tuple[float, float]:
        curve = simple.curve(quantity)  # type: ignore[arg-type]
        return max((curve.largest, curve.smallest), key=lambda found: abs(found.value))

    moment, deflection = largest("moment"), largest("deflection")
    return Responses(
        max(left, right, key=abs),
        *moment,
        *deflection,
        max(start, end, key=abs),
        left + right,
        (left, right),
        (start, end),
    )


def size(span: float, loads: list[Load]) -> float:
    return sum(
        abs(load.force)
        if isinstance(load, PointLoad)
        else max(abs(load.first), abs(load.last)) * (load.end - load.start)
        for load in loads
    )


def alike(one: Responses, other: Responses, span: float, scale: float, tolerance: float = EXACT) -> bool:
    """Whether all values agree in size to a part of what the loads could do; signs may differ at a tie."""
    powers = {"shear": 0, "moment": 1, "deflection": 3, "end_moment": 1, "total": 0}
    return all(
        abs(abs(getattr(one, name)) - abs(getattr(other, name))) <= tolerance * scale * span**power
        for name, power in powers.items()
    ) and all(
        abs(a - b) <= tolerance * scale * span
        for a, b in zip(
            (*one.reactions, *one.end_moments), (*other.reactions, *other.end_moments), strict=True
        )
    )


@pytest.mark.parametrize("lifting", [False, True])
@pytest.mark.parametrize("seed", range(120))
def test_the_sums_agree_with_the_analysis_of_a_beam(seed: int, lifting: bool) -> None:
    span, loads = drawn(seed, lifting=lifting)
    assert alike(responses(span, loads), by_analysis(span, loads), span, size(span, loads))


@pytest.mark.parametrize("seed", range(20))
def test_the_largest_stand_where_they_are_said_to(seed: int) -> None:
    span, loads = drawn(seed, lifting=True)
    found, scale = responses(span, loads), size(span, loads)
    simple = analyse(BeamLine(span, (0.0, span)), [loads])
    assert abs(simple.curve("moment").at(found.moment_at) - found.moment) <= 1e-11 * scale * span
    assert (
        abs(simple.curve("deflection").at(found.deflection_at) - found.deflection) <= 1e-11 * scale * span**3
    )
    for part in range(401):
        x = span * part / 400
        assert abs(simple.curve("moment").at(x)) <= abs(found.moment) + 1e-11 * scale * span
        assert abs(simple.curve("deflection").at(x)) <= abs(found.deflection) + 1e-11 * scale * span**3


def test_the_comparison_with_the_analysis_can_fail() -> None:
    span, loads = drawn(3, lifting=False)
    found, scale = responses(span, loads), size(span, loads)
    off = [*loads, LineLoad(0, span, 1e-9, 1e-9)]
    assert not alike(found, by_analysis(span, off), span, scale)
    assert not alike(replace(found, end_moment=found.end_moment * (1 + 1e-9)), found, span, scale)


def exact_sums(
    span: int, lines: list[tuple[int, int, int, int]]
) -> tuple[Fraction, Fraction, Fraction, Fraction]:
    """Right reaction and both fixed-end moments and the total from antiderivatives, in whole numbers."""
    right, start, end, total = (Fraction(0) for _ in range(4))
    for a, b, first, last in lines:
        slope = Fraction(last - first, b - a)
        load = [first - slope * a, slope]  # of x

        def area(weight: list[int], load: list[Fraction] = load, a: int = a, b: int = b) -> Fraction:
            product = [Fraction(0)] * (len(weight) + 1)
            for i, w in enumerate(weight):
                for j, q in enumerate(load):
                    product[i + j] += w * q
            return sum(
                (
                    c * (Fraction(b) ** (k + 1) - Fraction(a) ** (k + 1)) / (k + 1)
                    for k, c in enumerate(product)
                ),
                Fraction(0),
            )

        total += area([1])
        right += area([0, 1]) / span
        start += area([0, span**2, -2 * span, 1]) / span**2
        end += area([0, 0, span, -1]) / span**2
    return right, start, end, total


@pytest.mark.parametrize("seed", range(40))
def test_sums_in_exact_arithmetic(seed: int) -> None:
    rng = random.Random(seed)
    span = rng.randint(2, 15)
    lines = []
    for _ in range(rng.randint(1, 4)):
        a, b = sorted(rng.sample(range(span + 1), 2))
        lines.append((a, b, rng.randint(0, 40), rng.randint(1, 40)))
    right, start, end, total = (float(value) for value in exact_sums(span, lines))
    found = responses(span, [LineLoad(a, b, first, last) for a, b, first, last in lines])
    assert math.isclose(found.reactions[1], right, rel_tol=EXACT)
    assert math.isclose(found.total, total, rel_tol=EXACT)
    assert math.isclose(found.end_moment, max(start, end), rel_tol=EXACT)
    assert not math.isclose(found.end_moment, max(start, end) * (1 + 3e-12), rel_tol=EXACT)


@pytest.mark.parametrize("seed", range(20))
def test_mirroring_turning_over_and_doubling(seed: int) -> None:
    span, loads = drawn(seed, lifting=False)
    scale = size(span, loads)
    found = responses(span, loads)
    mirrored: list[Load] = [
        PointLoad(span - load.at, load.force)
        if isinstance(load, PointLoad)
        else LineLoad(span - load.end, span - load.start, load.last, load.first)
        for load in loads
    ]
    back = responses(span, mirrored)
    assert alike(
        found, replace(back, reactions=back.reactions[::-1], end_moments=back.end_moments[::-1]), span, scale
    )
    assert math.isclose(back.moment_at, span - found.moment_at, abs_tol=1e-7 * span) or math.isclose(
        back.moment, found.moment, rel_tol=EXACT
    )
    lifted = responses(span, [_scaled(load, -2) for load in loads])
    for name in ("shear", "moment", "deflection", "end_moment", "total"):
        assert math.isclose(getattr(lifted, name), -2 * getattr(found, name), rel_tol=EXACT), name


def _scaled(load: Load, factor: float) -> Load:
    if isinstance(load, PointLoad):
        return PointLoad(load.at, factor * load.force)
    return LineLoad(load.start, load.end, factor * load.first, factor * load.last)


def test_no_load_does_nothing() -> None:
    nothing = Responses(0, 0, 0, 0, 0, 0, 0, (0, 0), (0, 0))
    assert responses(5, []) == nothing
    assert responses(5, [LineLoad(0, 5, 0, 0), PointLoad(2, 0)]) == nothing


def test_loads_that_cancel_leave_no_rounding_behind() -> None:
    loads = [LineLoad(0, 6, 0.1, 0.1), LineLoad(0, 6, 0.2, 0.2), LineLoad(0, 6, -0.3, -0.3)]
    found = responses(6, loads)
    assert (found.shear, found.moment, found.deflection, found.end_moment, found.total) == (0, 0, 0, 0, 0)


def test_a_small_load_beside_nothing_is_not_taken_for_rounding() -> None:
    assert responses(6, [LineLoad(0, 6, 1e-9, 1e-9)]).total == pytest.approx(6e-9, rel=EXACT)


def test_up_and_down_alike_gives_the_positive_one() -> None:
    found = responses(8, [LineLoad(0, 4, -3, -3), LineLoad(4, 8, 3, 3)])
    assert found.shear == 6  # each half carries 12 kN, and the couple asks 12 kN × 4 m / 8 m of the ends
    assert found.total == 0
    assert (found.moment, found.moment_at) == (3 * 4**2 / 8, 6)
    assert found.deflection > 0
    assert found.end_moment > 0


def test_point_loads_at_the_very_ends_go_into_the_supports() -> None:
    inside: list[Load] = [PointLoad(2, 7)]
    assert responses(6, [*inside, PointLoad(0, 50), PointLoad(6, 50), PointLoad(1e-10, 9)]) == responses(
        6, inside
    )


def test_places_that_differ_by_rounding_make_one_cut() -> None:
    parts = stretches(6, [LineLoad(0, 2.1, 0, 9), LineLoad(2.1000000000000005, 6, 9, 9), PointLoad(2.1, 4)])
    assert [part.start for part in parts] == [0, 2.1]
    assert parts[1].force == 4


def test_the_walk_ends_at_the_far_support() -> None:
    for seed in range(30):
        span, loads = drawn(seed, lifting=True)
        last, scale = stretches(span, loads)[-1], size(span, loads)
        assert abs(last.moment_at(last.length)) <= 1e-13 * scale * span
        assert abs(last.deflection_at(last.length)) <= 1e-13 * scale * span**3


def test_cutting_a_beam_into_spans_keeps_all_but_what_stands_on_supports() -> None:
    rng = random.Random(5)
    for _ in range(30):
        cuts = [0.0, *sorted(rng.uniform(0, 12) for _ in range(3)), 12.0]
        loads: list[Load] = [
            LineLoad(rng.uniform(0, 5), rng.uniform(6, 12), rng.uniform(0, 9), rng.uniform(0, 9)),
            PointLoad(rng.uniform(0, 12), 5),
            PointLoad(cuts[2], 11),
            PointLoad(0, 13),
        ]
        parts = [loads_on(loads, a, b) for a, b in itertools.pairwise(cuts)]
        kept = sum(load.total for part in parts for load in part)
        assert kept == pytest.approx(sum(load.total for load in loads) - 24, rel=EXACT)
        for part, a, b in zip(parts, cuts, cuts[1:], strict=False):
            responses(b - a, part)  # every part lies on its span
            assert all(isinstance(load, LineLoad) or 0 < load.at < b - a for load in part)


def test_cut_loads_keep_their_place_and_source() -> None:
    loads: list[Load] = [LineLoad(1, 5, 0, 8, "P1"), PointLoad(3, 4, "B2"), LineLoad(0, 2, 6, 6, "P2")]
    assert loads_on(loads, 2, 4) == (LineLoad(0, 2, 2, 6, "P1"), PointLoad(1, 4, "B2"))
    assert loads_on(loads, 0, 6) == tuple(loads)
    assert by_source(loads_on(loads, 0, 6))["P2"] == (loads[2],)


@pytest.mark.parametrize(
    ("span", "loads"),
    [
        (0, []),
        (-1, []),
        (math.inf, []),
        (5, [PointLoad(6, 1)]),
        (5, [PointLoad(2, math.nan)]),
        (5, [LineLoad(0, 5, math.inf, 0)]),
        (5, [LineLoad(-1, 5, 1, 1)]),
        (5, [LineLoad(4, 2, 1, 1)]),
    ],
)
def test_what_is_no_span_or_no_load_is_refused(span: float, loads: list[Load]) -> None:
    with pytest.raises(ValueError, match=r"span|finite"):
        responses(span, loads)


def test_a_span_without_length_cannot_be_cut_out() -> None:
    with pytest.raises(ValueError, match="no length"):
        loads_on([], 3, 3)
