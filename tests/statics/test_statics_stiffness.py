from __future__ import annotations

import ast
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from random_beams import QUICK, loaded_lines

from calcpack.statics import BeamLine, LineLoad, PointLoad, analyse, stiffness
from calcpack.statics.stiffness import stiffness_check


def test_the_second_road_shares_nothing_with_the_first_but_beam_and_loads():
    tree = ast.parse(Path(stiffness.__file__).read_text(encoding="utf-8"))
    imported = {node.module for node in ast.walk(tree) if isinstance(node, ast.ImportFrom)}
    own = {module for module in imported if module and module.startswith("calcpack")}
    assert own == {"calcpack.statics.line", "calcpack.statics.loads"}


def test_a_cantilever_by_hand():
    result = stiffness_check(BeamLine(2.0, (0.0,), fixed_start=True), [PointLoad(2.0, 3.0)])
    assert result.deflections[-1] == pytest.approx(3 * 2**3 / 3)
    assert result.rotations[-1] == pytest.approx(-3 * 2**2 / 2)
    assert result.end_moments == pytest.approx([-6.0, 0.0])
    assert result.reactions == pytest.approx([3.0])


def test_nothing_can_move():
    result = stiffness_check(
        BeamLine(2.0, (0.0, 2.0), fixed_start=True, fixed_end=True), [LineLoad(0.0, 2.0, 6.0, 6.0)]
    )
    assert result.reactions == pytest.approx([6.0, 6.0])
    assert result.support_moments == pytest.approx([-2.0, -2.0])


@QUICK
@given(loaded_lines(most_spans=8))
def test_both_roads_agree(case):
    line, (loads,) = case
    response, other = analyse(line, [loads]), stiffness_check(line, loads)
    force = 1e-9 + sum(
        abs(load.force) if isinstance(load, PointLoad) else (abs(load.first) + abs(load.last)) * line.length
        for load in loads
    )
    np.testing.assert_allclose(response.reactions[0], other.reactions, atol=1e-7 * force)
    np.testing.assert_allclose(
        response.support_moments[0], other.support_moments, atol=1e-7 * force * line.length
    )
    np.testing.assert_allclose(
        response.curve("deflection").values(other.nodes),
        other.deflections,
        atol=1e-7 * force * line.length**3,
    )
