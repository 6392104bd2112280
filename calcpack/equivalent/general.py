"""Equivalent loads of any piecewise-linear load with point loads, derived as sums over stretches.

The span is cut wherever the load breaks and wherever a point load stands; stretch i runs from a_i to
b_i, its load goes linearly from w_i1 to w_i2, and P_i stands at its start. The integrals of one
stretch are worked out by sympy; :mod:`calcpack.equivalent.spans` evaluates the same sums with numbers.
"""

from __future__ import annotations

import functools
from collections.abc import Callable

import sympy

from calcpack.equivalent.formula import (
    Form,
    Row,
    Value,
    add,
    beside,
    chain,
    grouped,
    integral,
    letter,
    minus,
    named,
    of,
    over,
    power,
    root,
    series,
    times,
    total,
)
from calcpack.equivalent.letters import (
    BEFORE,
    COUNT,
    FIRST,
    FORCE,
    INDEX,
    LAST,
    M_A,
    M_B,
    POINT,
    R_A,
    R_B,
    SAME,
    SPAN,
    T0,
    TURN_A,
    TURN_B,
    WHOLE,
    A,
    B,
    C,
    H,
    K,
    T,
    X,
    part,
)
from calcpack.equivalent.steps import Derivation, Step, step
from calcpack.equivalent.symmetric import uniform_response
from calcpack.job.model import EquivalentKind

_ONE, _ZERO, _TWO = (of(sympy.Integer(number)) for number in (1, 0, 2))
LOAD = FIRST + K * T  # along a stretch, t from its start


@functools.cache
def load_moment(degree: int) -> Value:
    """Return the integral of w·x^degree along one stretch, in a_i, b_i, w_i1 and w_i2, over its length."""
    along = (FIRST + (LAST - FIRST) * T / H) * (A + T) ** degree
    value = sympy.Poly(sympy.expand(along), T).integrate(T).as_expr().subs(T, H) / H
    return sympy.expand(sympy.expand(value).subs(H, B - A))


def _load_moment_form(degree: int) -> Form:
    """``h_i/6 (w_i1 (2 a_i + b_i) + w_i2 (a_i + 2 b_i))``, arranged from the derived integral."""
    value = load_moment(degree)
    size = sympy.Integer((degree + 1) * (degree + 2))
    inside = [
        times(of(end), series(sympy.expand(value * size).coeff(end), (B,))) if degree else of(end)
        for end in (FIRST, LAST)
    ]
    return times(of(H / size), add(*inside))


def derive(criterion: EquivalentKind) -> Derivation:
    """Derive one equivalent of the general load."""
    roads: dict[EquivalentKind, Callable[[], tuple[list[Step], Form]]] = {
        "total": _total_road,
        "shear": _shear_road,
        "moment": _moment_road,
        "deflection": _deflection_road,
        "fixed-end moment": _fixed_road,
    }
    steps, response = roads[criterion]()
    uniform = uniform_response(criterion)
    (value,) = sympy.solve(uniform.value - response.value, SAME)
    found = of(value)
    result = chain(of(SAME), found)
    steps.append(
        step(
            f"The same steps for a uniform load ${of(SAME).latex}$ give the left-hand side; "
            "the two are equal.",
            chain(uniform, response),
            result,
        )
    )
    return Derivation("general", criterion, tuple(steps), result.equations[0], None)


def _over_all(*terms: Form) -> Form:
    """Add the terms up over all stretches."""
    return total(add(*terms), INDEX, _ONE, of(COUNT))


def _known(latex: str, spoken: str, name: str) -> Form:
    return of(letter(sympy.Symbol(name), latex, spoken, 9))


def _total_road() -> tuple[list[Step], Form]:
    all_load = _known("W", "W", "W")
    adding = step("The whole load.", chain(all_load, _over_all(of(WHOLE), of(POINT))))
    return [_cuts(), _integrals(0), adding], all_load


def _shear_road() -> tuple[list[Step], Form]:
    larger = _known(r"R_{\max}", "R max", "R_max")
    reading = step(
        r"The larger of the two is the largest shear.",
        Row(
            r"R_{\max} = \max\left(R_A, R_B\right)",
            "R max equals the larger of R A and R B",
            (sympy.Eq(larger.value, sympy.Max(R_A, R_B), evaluate=False),),
        ),
    )
    return [_cuts(), _integrals(0, 1), _reactions(), reading], larger


def _moment_road() -> tuple[list[Step], Form]:
    bottom = add(of(FIRST), root(add(power(of(FIRST), 2), of(2 * K * part("V")))))
    where = over(of(2 * part("V")), bottom)
    zero = _shear_along().subs(T, where.value)
    if sympy.simplify(zero) != 0:
        raise ValueError("the place of zero shear does not make the shear zero")
    vanish = step(
        "The moment is largest where the shear passes zero: at a point load, or inside a stretch at the root "
        "of this quadratic (written so that it serves for $k_i = 0$ too).",
        beside(
            chain(series(_shear_along().subs(T, T0), (T0,)), _ZERO),
            chain(of(T0), where),
        ),
    )
    largest = _known(r"M_{\max}", "M max", "M_max")
    reading = Row(
        rf"{largest.latex} = M(t_0)",
        f"{largest.spoken} equals M of t 0",
        (sympy.Eq(largest.value, _moment_along().subs(T, T0), evaluate=False),),
    )
    return [_cuts(), _integrals(0, 1), _reactions(), _shear(), vanish, _moment(reading)], largest


def _deflection_road() -> tuple[list[Step], Form]:
    largest = _known(r"EI\,v_{\max}", "E I v max", "EIv_max")
    reading = Row(
        rf"EI\,\theta(t_0) = 0, \quad {largest.latex} = EI\,v(t_0)",
        f"E I theta of t 0 equals 0; {largest.spoken} equals E I v of t 0",
        (
            sympy.Eq(_rotation_along().subs(T, T0), 0, evaluate=False),
            sympy.Eq(largest.value, _deflection_along().subs(T, T0), evaluate=False),
        ),
    )
    bend = step(
        r"Bending turns the axis, $EI\,\theta' = -M$, $v' = \theta$, starting from $\theta_1 = \theta_A$ and "
        "$v_1 = 0$, each stretch going on where the last one ended. The deflection is largest where the "
        "rotation is zero, a root of this quartic found by number.",
        chain(_of_t(r"EI\,\theta", "E I theta"), grouped(_rotation_along(), 1, T)),
        chain(_of_t(r"EI\,v", "E I v"), grouped(_deflection_along(), 1, T)),
        reading,
    )
    steps = [_cuts(), _integrals(0, 1, 2, 3), _reactions(), _shear(), _moment(), _start_rotation(), bend]
    return steps, largest


def _fixed_road() -> tuple[list[Step], Form]:
    larger = _known("M_F", "M F", "M_F")
    turns = _point_rotations()
    start, end = turns
    own, other = _turn_by_end_moment()
    solved = sympy.solve(
        [M_A * own + M_B * other - start, M_A * other + M_B * own - end], [M_A, M_B], dict=True
    )[0]
    rest = series(SPAN - C)
    release = step(
        "With both ends free to turn and the supports not sinking, a force $P$ at $c$ turns the ends.",
        chain(of(TURN_A), _weighted("L-x"), _turn_a_form(FORCE, C)),
        chain(
            of(TURN_B), _weighted("x"), over(times(of(FORCE * C), rest, series(SPAN + C, (C,))), of(6 * SPAN))
        ),
    )
    hold = step(
        "End moments $M_A$, $M_B$ must turn them back: no rotation at a fixed end.",
        beside(
            chain(add(of(M_A * own), of(M_B * other)), of(TURN_A)),
            chain(add(of(M_A * other), of(M_B * own)), of(TURN_B)),
        ),
        beside(
            chain(of(M_A), over(times(of(FORCE * C), power(rest, 2)), of(SPAN**2))),
            chain(of(M_B), over(times(of(FORCE * C**2), rest), of(SPAN**2))),
        ),
    )
    _same(solved[M_A], FORCE * C * (SPAN - C) ** 2 / SPAN**2)
    _same(solved[M_B], FORCE * C**2 * (SPAN - C) / SPAN**2)
    first, second, third = (part(f"J_{degree}") for degree in (1, 2, 3))
    at_a = series(SPAN - A)
    summed = step(
        r"With $w\,\mathrm{d}x$ for $P$ and $x$ for $c$, all the load together; $M_F$ is the larger.",
        chain(
            of(M_A),
            times(
                of(1 / SPAN**2),
                _over_all(
                    of(SPAN**2 * first),
                    minus(of(2 * SPAN * second)),
                    of(third),
                    times(of(POINT * A), power(at_a, 2)),
                ),
            ),
        ),
        chain(
            of(M_B),
            times(
                of(1 / SPAN**2),
                _over_all(of(SPAN * second), minus(of(third)), times(of(POINT * A**2), at_a)),
            ),
        ),
        Row(
            r"M_F = \max\left(M_A, M_B\right)",
            "M F equals the larger of M A and M B",
            (sympy.Eq(larger.value, sympy.Max(M_A, M_B), evaluate=False),),
        ),
    )
    return [_cuts(), _integrals(1, 2, 3), release, hold, summed], larger


def _same(one: Value, other: Value) -> None:
    if sympy.expand(one - other) != 0:
        raise ValueError(f"{one} and {other} differ")


def _cuts() -> Step:
    along = chain(_of_t("w", "w"), series(LOAD, (T,)))
    return step(
        "The span $L$ by itself, cut wherever the load breaks and wherever a point load stands. Stretch $i$ "
        "of $n$, from $a_i$ to $b_i$, carries a load going straight from $w_{i1}$ to $w_{i2}$, and at its "
        "start the point load $P_i$ (zero where none stands); $t = x - a_i$.",
        beside(
            chain(of(H), series(B - A, (A,))),
            chain(of(K), over(series(LAST - FIRST, (FIRST,)), of(H))),
            along,
        ),
    )


def _of_t(latex: str, spoken: str) -> Form:
    name = latex.replace(r"EI\,\theta", "EItheta").replace(r"EI\,v", "EIv")
    return named(f"{latex}(t)", f"{spoken} of t", sympy.Function(name)(T))


def _integrals(*degrees: int) -> Step:
    rows = []
    for degree in degrees:
        name = "W" if degree == 0 else f"J_{degree}"
        inner = ["w", "w x", "w x^{2}", "w x^{3}"][degree]
        words = ["w", "w x", "w x squared", "w x cubed"][degree]
        form = _load_moment_form(degree)
        shown = named(
            rf"\int_{{a_i}}^{{b_i}} {inner}\,\mathrm{{d}}x",
            f"the integral from a i to b i of {words} d x",
            sympy.expand(load_moment(degree) * H),
        )
        rows.append(chain(of(part(name)), shown, form))
    says = {
        (0,): "The load of a stretch.",
        (0, 1): "The load of a stretch, and its moment about the left support.",
    }.get(degrees, "The integrals of a stretch that are needed below.")
    return step(says, *rows)


def _reactions() -> Step:
    about = _over_all(of(part("J_1")), of(POINT * A))
    down = _over_all(of(WHOLE), of(POINT))
    return step(
        "Moments about the left support give the right reaction, vertical balance the left one.",
        beside(
            chain(of(R_B), times(of(1 / SPAN), about)),
            chain(of(R_A), add(down, minus(of(R_B)))),
        ),
    )


def _shear_along() -> Value:
    return part("V") - _from_start(LOAD)


def _moment_along() -> Value:
    return part("M") + _from_start(_shear_along())


def _rotation_along() -> Value:
    return part("EItheta") - _from_start(_moment_along())


def _deflection_along() -> Value:
    return part("EIv") + _from_start(_rotation_along())


def _from_start(value: Value) -> Value:
    return sympy.expand(sympy.Poly(sympy.expand(value), T).integrate(T).as_expr())


def _dummy() -> Form:
    return named(r"\tau", "tau", T)


def _passed(name: str, value: Value) -> Form:
    return integral(named(rf"{name}(\tau)", f"{name} of tau", value), _dummy(), _ZERO, of(T))


def _shear() -> Step:
    before = add(
        of(R_A),
        minus(total(of(part("P", BEFORE)), BEFORE, _ONE, of(INDEX))),
        minus(total(of(part("W", BEFORE)), BEFORE, _ONE, named("i-1", "i minus 1", INDEX - 1))),
    )
    return step(
        "The shear along a stretch, from its value $V_i$ at the start.",
        chain(of(part("V")), before),
        chain(_of_t("V", "V"), add(of(part("V")), minus(_passed("w", LOAD))), grouped(_shear_along(), 1, T)),
    )


def _moment(*more: Row) -> Step:
    after = of(part("M", INDEX + 1))
    at_end = sympy.expand(_moment_along().subs(T, H).subs(K, (LAST - FIRST) / H))
    load = sympy.expand(part("M") + part("V") * H - at_end)
    arranged = times(of(H**2 / 6), series(sympy.expand(load * 6 / H**2), (LAST,)))
    return step(
        "The moment along it, from its value $M_i$ at the start; at the support $M_1 = 0$.",
        chain(
            _of_t("M", "M"),
            add(of(part("M")), _passed("V", _shear_along())),
            grouped(_moment_along(), 1, T),
        ),
        chain(
            after,
            named("M(h_i)", "M of h i", at_end),
            add(of(part("M")), of(part("V") * H), minus(arranged)),
        ),
        *more,
    )


def _weighted(weight: str) -> Form:
    """``1/L ∫ M (L-x) dx`` under a force P at c: the rotation of an end, the supports not sinking."""
    rise, fall = FORCE * (SPAN - C) * X / SPAN, FORCE * C * (SPAN - X) / SPAN
    factor = SPAN - X if weight == "L-x" else X
    value = _between(rise * factor, 0, C) + _between(fall * factor, C, SPAN)
    inner = r"M \left(L - x\right)" if weight == "L-x" else "M x"
    spoken = "M times open bracket L minus x close bracket" if weight == "L-x" else "M x"
    return named(
        rf"\frac{{1}}{{L}} \int_{{0}}^{{L}} {inner}\,\mathrm{{d}}x",
        f"1 over L times the integral from 0 to L of {spoken} d x",
        sympy.expand(value / SPAN),
    )


def _between(value: Value, low: Value, high: Value) -> Value:
    anti = sympy.Poly(sympy.expand(value), X).integrate(X).as_expr()
    return sympy.expand(anti.subs(X, high) - anti.subs(X, low))


def _point_rotations() -> tuple[Value, Value]:
    return _weighted("L-x").value, _weighted("x").value


def _turn_by_end_moment() -> tuple[Value, Value]:
    """How far a unit end moment, falling to zero at the other end, turns its own end and the other."""
    moment = (SPAN - X) / SPAN
    return _between(moment * (SPAN - X), 0, SPAN) / SPAN, _between(moment * X, 0, SPAN) / SPAN


def _turn_a_form(force: Value, place: Value) -> Form:
    return over(
        times(of(force * place), series(SPAN - place), series(2 * SPAN - place, (place,))), of(6 * SPAN)
    )


def _start_rotation() -> Step:
    first, second, third = (part(f"J_{degree}") for degree in (1, 2, 3))
    point = times(of(POINT * A), series(SPAN - A), series(2 * SPAN - A, (A,)))
    return step(
        "The far support does not sink, which gives the start rotation: for a force $P$ at $c$, then for "
        "all the load.",
        chain(of(TURN_A), _weighted("L-x"), _turn_a_form(FORCE, C)),
        chain(
            of(TURN_A),
            times(
                of(1 / (6 * SPAN)),
                _over_all(of(2 * SPAN**2 * first), minus(of(3 * SPAN * second)), of(third), point),
            ),
        ),
    )
