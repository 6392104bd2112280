"""Equivalent loads of the uniform load, the triangle and the trapezoid, derived from equilibrium.

Everything is worked out by sympy from the load function over half the span; only the order in
which terms are written is chosen here, and every rearranged form is checked against the derived one.
"""

from __future__ import annotations

import functools
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import sympy

from calcpack.equivalent.formula import (
    Form,
    Row,
    Value,
    add,
    beside,
    chain,
    fronted,
    grouped,
    integral,
    minus,
    named,
    neat,
    of,
    over,
    times,
    within,
)
from calcpack.equivalent.letters import HOLD, PEAK, PRESSURE, RATIO, REACTION, RISE, SAME, SHORT, SPAN, X
from calcpack.equivalent.steps import Derivation, Step, step
from calcpack.job.model import EquivalentKind

SymmetricKind = Literal["uniform", "triangle", "trapezoid"]


_ORDER = (RISE,)  # within brackets: what has no rise first
_ZERO = of(sympy.Integer(0))
_HALF = named("L/2", "L over 2", SPAN / 2)  # as a limit or an argument, on one line


@dataclass(frozen=True)
class Piece:
    """A part of the half span with one load function, and what equilibrium and bending make of it."""

    tag: str  # "", "1" or "2", as written behind w, V, M
    low: Value
    high: Value
    load: Value
    shear: Value
    moment: Value
    rotation: Value  # times bending stiffness


@dataclass(frozen=True)
class HalfSpan:
    """Half of a symmetrically loaded span, solved."""

    pieces: tuple[Piece, ...]
    total: Value
    reaction: Value
    top: Value  # where the shear vanishes
    moment: Value
    deflection: Value  # at midspan, times bending stiffness
    hold: Value  # fixed-end moment


def _place(value: Value) -> Form:
    return _HALF if value == SPAN / 2 else of(value)


def _integrated(value: Value, low: Value, high: Value) -> Value:
    anti = sympy.Poly(value, X).integrate(X).as_expr()
    return sympy.expand(anti.subs(X, high) - anti.subs(X, low))


@functools.cache
def half_span(kind: SymmetricKind) -> HalfSpan:
    """Solve the half span: integrate the load to shear, moment, rotation and deflection.

    Conditions: moments about the far support balance; no moment at the support; midspan stays
    level by symmetry; the support does not sink. With fixed ends, no rotation at the support.
    """
    middle = SPAN / 2
    cuts: list[tuple[Value, Value, Value]] = {
        "uniform": [(PEAK, sympy.Integer(0), middle)],
        "triangle": [(2 * PEAK * X / SPAN, sympy.Integer(0), middle)],
        "trapezoid": [(PEAK * X / RISE, sympy.Integer(0), RISE), (PEAK, RISE, middle)],
    }[kind]
    total = sympy.expand(sum(2 * _integrated(load, low, high) for load, low, high in cuts))
    reaction = sympy.expand(_solved(REACTION * SPAN - total * middle, REACTION))
    shears, moments = [], []
    shear_now, moment_now = reaction, sympy.Integer(0)
    for load, low, high in cuts:
        shears.append(sympy.expand(shear_now - _integrated(load, low, X)))
        moments.append(sympy.expand(moment_now + _integrated(shears[-1], low, X)))
        shear_now, moment_now = shears[-1].subs(X, high), moments[-1].subs(X, high)
    rotations: list[Value] = []
    turned = sympy.Integer(0)
    for (_, low, high), moment in zip(reversed(cuts), reversed(moments), strict=True):
        rotations.insert(0, sympy.expand(turned + _integrated(moment, X, high)))
        turned = rotations[0].subs(X, low)
    pieces = tuple(
        Piece(tag if len(cuts) > 1 else "", low, high, load, shear, moment, rotation)
        for tag, (load, low, high), shear, moment, rotation in zip(
            "12", cuts, shears, moments, rotations, strict=False
        )
    )
    bending = sympy.expand(sum(_integrated(p.moment, p.low, p.high) for p in pieces))
    return HalfSpan(
        pieces,
        total,
        reaction,
        _solved(shears[-1], X),
        sympy.expand(moments[-1].subs(X, middle)),
        sympy.expand(sum(_integrated(p.rotation, p.low, p.high) for p in pieces)),
        sympy.expand(_solved(bending - HOLD * middle, HOLD)),
    )


def _solved(zero: Value, unknown: Value) -> Value:
    (root,) = sympy.solve(zero, unknown)
    return root


def derive(kind: SymmetricKind, criterion: EquivalentKind, *, panel: bool) -> Derivation:
    """Derive one equivalent load of one symmetric shape.

    ``panel``: end in terms of the panel that brings the load (pressure, short side, side ratio).
    """
    half = half_span(kind)
    roads: dict[EquivalentKind, Callable[[HalfSpan], list[Step]]] = {
        "total": lambda _: [],
        "shear": lambda _: [],
        "moment": lambda h: [_shear(h, vanishes=True), _moment(h, largest=True)],
        "deflection": lambda h: [_shear(h), _moment(h), _rotation(h), _deflection(h)],
        "fixed-end moment": lambda h: [_shear(h), _moment(h), _held(h)],
    }
    steps = [_free_body(kind, half), _load_and_reaction(half, reaction=criterion != "total")]
    steps += roads[criterion](half)
    last, value = _same_response(kind, criterion, half)
    steps.append(last)
    result = value
    if panel and kind != "uniform":
        shown, result = _panel(kind, value)
        steps.append(shown)
    return Derivation(
        kind, criterion, tuple(steps), sympy.Eq(SAME, result, evaluate=False), sympy.expand(value / PEAK)
    )


def _function(letters: str, spoken: str, tag: str, at: Form, value: Value) -> Form:
    """``V_1(x)``: shown as a function, standing for its value there."""
    subscript = f"_{tag}" if tag else ""
    return named(
        f"{letters}{subscript}({at.latex})", f"{spoken}{' ' + tag if tag else ''} of {at.spoken}", value
    )


def _unknown(letters: str, spoken: str, tag: str) -> Form:
    """The left-hand side of a definition, ``V_1(x)``."""
    name = letters.replace(r"EI\,\theta", "EItheta") + (f"_{tag}" if tag else "")
    return _function(letters, spoken, tag, of(X), sympy.Function(name)(X))


def _free_body(kind: SymmetricKind, half: HalfSpan) -> Step:
    says = {
        "uniform": "The span $L$ by itself on two supports, the load $w_0$ all along it; "
        "one half mirrors the other.",
        "triangle": "The span $L$ by itself on two supports; the load rises from nothing at the support "
        "to $w_0$ at midspan, and the other half mirrors it.",
        "trapezoid": "The span $L$ by itself on two supports; the load rises to $w_0$ over the length $a$ "
        "(1), then stays level (2), and the other half mirrors it.",
    }[kind]
    rows = [
        within(chain(_unknown("w", "w", p.tag), of(p.load)), _place(p.low), of(X), _place(p.high))
        for p in half.pieces
    ]
    return step(says, beside(*rows))


def _load_and_reaction(half: HalfSpan, *, reaction: bool) -> Step:
    parts = [
        times(
            of(sympy.Integer(2)),
            integral(_function("w", "w", p.tag, of(X), p.load), of(X), _place(p.low), _place(p.high)),
        )
        for p in half.pieces
    ]
    load = named("W", "W", half.total)
    whole = chain(
        named("W", "W", sympy.Symbol("W")), add(*parts), fronted(half.total, _front(half.total), _ORDER)
    )
    if not reaction:
        return step("The load adds up to $W$.", whole)
    balance = chain(of(REACTION * SPAN), times(load, of(SPAN / 2), dot=True))
    found = chain(of(REACTION), over(load, of(sympy.Integer(2))), _reaction_form(half))
    return step(
        "The load adds up to $W$, its resultant at midspan; moments about the far support give the "
        "reaction $R$.",
        whole,
        beside(balance, found),
    )


def _front(value: Value) -> Value:
    return PEAK if len(sympy.Add.make_args(value)) > 1 else sympy.Integer(1)


def _reaction_form(half: HalfSpan) -> Form:
    value = half.reaction
    return of(value) if value.is_Mul else fronted(value, PEAK / 2, _ORDER)


def _shear(half: HalfSpan, *, vanishes: bool = False) -> Step:
    rows: list[Row] = []
    before = named("R", "R", half.reaction)
    for p in half.pieces:
        passed = integral(
            _function("w", "w", p.tag, named(r"\xi", "xi", X), p.load), _dummy(), _place(p.low), of(X)
        )
        rows.append(
            chain(_unknown("V", "V", p.tag), add(before, minus(passed)), grouped(p.shear, PEAK, X, _ORDER))
        )
        before = _function("V", "V", p.tag, _place(p.high), p.shear.subs(X, p.high))
    if not vanishes:
        return step("The shear is the reaction less the load passed.", *rows)
    last = half.pieces[-1]
    zero = chain(_function("V", "V", last.tag, of(X), last.shear), _ZERO)
    return step(
        "The shear is the reaction less the load passed; it only falls, and is zero where the moment is "
        "largest.",
        *rows,
        beside(zero, chain(of(X), of(half.top))),
    )


def _dummy() -> Form:
    """The variable of an integral that ends at x."""
    return named(r"\xi", "xi", X)


def _moment(half: HalfSpan, *, largest: bool = False) -> Step:
    rows: list[Row] = []
    before: Form | None = None
    for p in half.pieces:
        area = integral(_function("V", "V", p.tag, _dummy(), p.shear), _dummy(), _place(p.low), of(X))
        rows.append(
            chain(
                _unknown("M", "M", p.tag),
                add(before, area) if before else area,
                grouped(p.moment, PEAK, X, _ORDER),
            )
        )
        before = _function("M", "M", p.tag, _place(p.high), p.moment.subs(X, p.high))
    if not largest:
        return step("The bending moment, zero at the support, is the area under the shear.", *rows)
    tag = half.pieces[-1].tag
    rows.append(
        chain(
            named(r"M_{\max}", "M max", sympy.Symbol("M_max")),
            _function("M", "M", tag, _place(half.top), half.moment),
            fronted(half.moment, _front(half.moment), _ORDER),
        )
    )
    return step(
        "The bending moment, zero at the support, is the area under the shear; at midspan it is largest.",
        *rows,
    )


def _rotation(half: HalfSpan) -> Step:
    rows: list[Row] = []
    after: Form | None = None
    for p in reversed(half.pieces):
        area = integral(_function("M", "M", p.tag, _dummy(), p.moment), _dummy(), of(X), _place(p.high))
        rows.append(
            chain(
                _unknown(r"EI\,\theta", "E I theta", p.tag),
                add(after, area) if after else area,
                grouped(p.rotation, PEAK, X, _ORDER),
            )
        )
        after = _function(r"EI\,\theta", "E I theta", p.tag, _place(p.low), p.rotation.subs(X, p.low))
    return step(
        r"Bending turns the axis, $EI\,\theta' = -M$; at midspan it is level by symmetry, $\theta = 0$.",
        *rows,
    )


def _deflection(half: HalfSpan) -> Step:
    parts = [
        integral(
            _function(r"EI\,\theta", "E I theta", p.tag, of(X), p.rotation),
            of(X),
            _place(p.low),
            _place(p.high),
        )
        for p in half.pieces
    ]
    row = chain(
        named(r"EI\,v_{\max}", "E I v max", sympy.Symbol("EIv_max")),
        add(*parts),
        fronted(half.deflection, _front(half.deflection), _ORDER),
    )
    return step(
        r"The deflection is the sum of the rotation, $v' = \theta$, from the support, where $v = 0$; "
        "it is largest at midspan.",
        row,
    )


def _held(half: HalfSpan) -> Step:
    parts = [
        integral(_function("M", "M", p.tag, of(X), p.moment), of(X), _place(p.low), _place(p.high))
        for p in half.pieces
    ]
    bending = add(*parts)
    turn = chain(
        named(r"EI\,\theta(0)", "E I theta of 0", sympy.Symbol("EItheta_0")),
        add(*parts, minus(of(HOLD * SPAN / 2))),
    )
    zero = Row(
        f"{turn.latex} = 0", f"{turn.spoken} equals 0", (sympy.Eq(bending.value - HOLD * SPAN / 2, 0),)
    )
    found = chain(of(HOLD), fronted(half.hold, _front(half.hold), _ORDER))
    return step(
        "Fixed ends: an equal moment $M_F$ at each takes $M_F$ off $M$ all along. Neither the end nor, by "
        "symmetry, midspan rotates.",
        zero,
        found,
    )


def _response(criterion: EquivalentKind, half: HalfSpan) -> Value:
    return {
        "shear": half.reaction,
        "moment": half.moment,
        "deflection": half.deflection,
        "fixed-end moment": half.hold,
        "total": half.total,
    }[criterion]


def uniform_response(criterion: EquivalentKind) -> Form:
    """What a uniform load w_eq does, derived the same way."""
    value = _response(criterion, half_span("uniform")).subs(PEAK, SAME)
    return of(value)


def _same_response(kind: SymmetricKind, criterion: EquivalentKind, half: HalfSpan) -> tuple[Step, Value]:
    """Set the uniform load's response equal to the actual one and solve; return w_eq in w_0 and m."""
    names = {
        "shear": named("R", "R", None),
        "moment": named(r"M_{\max}", "M max", None),
        "deflection": named(r"EI\,v_{\max}", "E I v max", None),
        "fixed-end moment": named("M_F", "M F", None),
        "total": named("W", "W", None),
    }
    words = {
        "shear": "the reaction (the largest shear)",
        "moment": "the largest moment",
        "deflection": "the largest deflection",
        "fixed-end moment": "the fixed-end moment",
        "total": "the total",
    }
    response = _response(criterion, half)
    uniform = uniform_response(criterion)
    equal = chain(uniform, named(names[criterion].body, names[criterion].spoken_body, response))
    value = sympy.expand(_solved(uniform.value - response, SAME))
    says = (
        f"The same steps for a uniform load ${of(SAME).latex}$ give {words[criterion]} on the left; "
        "the two are equal."
    )
    if kind != "trapezoid":
        return step(says, equal, chain(of(SAME), of(value))), value
    in_ratio = sympy.expand(value.subs(RISE, RATIO * SPAN / 2))
    return (
        step(
            f"{says} For short, $m = 2a/L$.",
            beside(equal, chain(of(SAME), times(of(PEAK), neat(value / PEAK, RISE)))),
            chain(of(SAME), times(of(PEAK), neat(in_ratio / PEAK, RATIO))),
        ),
        in_ratio,
    )


def _panel(kind: SymmetricKind, value: Value) -> tuple[Step, Value]:
    peak = PRESSURE * SHORT / 2
    result = sympy.expand(value.subs(PEAK, peak))
    if kind == "triangle":
        says = (
            "Under the short side of a panel with pressure $q$, the dividing lines at 45°, the span is that "
            r"side, $L = S$, and the peak $w_0 = q \cdot S/2$."
        )
        return step(says, chain(of(SAME), of(result))), result
    says = (
        "Under the long side of a panel with pressure $q$, the dividing lines at 45°, the load rises "
        r"over $a = S/2$ to $w_0 = q \cdot S/2$, so that $m = S/L$."
    )
    return step(says, chain(of(SAME), times(of(peak), neat(value / PEAK, RATIO)))), result
