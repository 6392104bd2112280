"""Beams and loads drawn by hypothesis, for the tests of the statics."""

from __future__ import annotations

from hypothesis import HealthCheck, settings
from hypothesis import strategies as st

from calcpack.statics import BeamLine, LineLoad, Load, PointLoad

QUICK = settings(
    max_examples=100,
    deadline=None,
    derandomize=True,
    database=None,
    suppress_health_check=[HealthCheck.too_slow],
)

_lengths = st.floats(0.4, 12.0).map(lambda value: round(value, 3))
_forces = st.floats(-20.0, 60.0).map(lambda value: round(value, 2))


@st.composite
def lines(draw: st.DrawFn, most_spans: int = 5) -> BeamLine:
    """Cantilevers, single and continuous beams, with or without overhangs and fixed ends."""
    if draw(st.integers(0, 9)) == 0:
        length = draw(_lengths)
        start = draw(st.booleans())
        return BeamLine(length, (0.0 if start else length,), fixed_start=start, fixed_end=not start)
    spans = draw(st.lists(_lengths, min_size=1, max_size=most_spans))
    first = draw(st.sampled_from(["free", "pinned", "fixed"]))
    last = draw(st.sampled_from(["free", "pinned", "fixed"]))
    places = [draw(_lengths) if first == "free" else 0.0]
    for span in spans:
        places.append(places[-1] + span)
    length = places[-1] + (draw(_lengths) if last == "free" else 0.0)
    return BeamLine(length, tuple(places), first == "fixed", last == "fixed")


@st.composite
def load_lists(draw: st.DrawFn, line: BeamLine, least: int = 1, most: int = 5) -> list[Load]:
    """Loads anywhere, often exactly at supports and tips."""
    special = st.sampled_from([0.0, line.length, *line.supports])
    anywhere = st.floats(0.0, 1.0).map(lambda part: part * line.length)
    places = st.one_of(special, anywhere)
    loads: list[Load] = []
    for _ in range(draw(st.integers(least, most))):
        if draw(st.booleans()):
            loads.append(PointLoad(draw(places), draw(_forces)))
            continue
        start, end = sorted((draw(places), draw(places)))
        if start < end:
            loads.append(LineLoad(start, end, draw(_forces), draw(_forces)))
    return loads


@st.composite
def loaded_lines(draw: st.DrawFn, sets: int = 1, most_spans: int = 5) -> tuple[BeamLine, list[list[Load]]]:
    """A beam with its load sets."""
    line = draw(lines(most_spans))
    return line, [draw(load_lists(line)) for _ in range(sets)]
