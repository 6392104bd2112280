"""The key plan and the panel: what is marked, hatched, measured and said."""

import math

import numpy as np
import pytest
from figure_cases import bays, crowded_grid, divided, drawn, sixty, small_floor, triangle_panel, with_region
from svg_reading import crossed, inks, strokes, words

from calcpack.figures import key_plan, panel_drainage
from calcpack.figures.drawing import HAIR, INK, THICK


def directions(figure, weight=HAIR, tone=INK):
    """The angles [degrees] of the straight lines of a weight, and how many there are of each."""
    found = {}
    for stroke in strokes(figure):
        if stroke.weight == weight and stroke.tone == tone:
            for line in stroke.lines:
                if len(line) == 2:
                    (x1, y1), (x2, y2) = line
                    angle = round(math.degrees(math.atan2(y1 - y2, x2 - x1))) % 180
                    found[angle] = found.get(angle, 0) + 1
    return found


def test_the_marked_beam_alone_is_thick():
    figure = drawn("plan")
    (thick,) = [stroke for stroke in strokes(figure) if stroke.weight == THICK]
    (line,) = thick.lines
    assert line[0][1] == line[1][1]  # B5 runs along grid line 2
    label = next(item for item in inks(figure) if item.text == "B5")
    assert line[0][0] < label.corners[:, 0].min() < label.corners[:, 0].max() < line[1][0]


def test_the_plan_keeps_its_proportions():
    (thick,) = [stroke for stroke in strokes(drawn("plan, upright beam")) if stroke.weight == THICK]
    tall = sum(abs(line[1][1] - line[0][1]) for line in thick.lines)  # 9.0 m
    (thick,) = [stroke for stroke in strokes(drawn("plan")) if stroke.weight == THICK]
    wide = abs(thick.lines[0][1][0] - thick.lines[0][0][0])  # 6.0 m
    assert tall / wide == pytest.approx(9.0 / 6.0, rel=1e-3)


def test_two_panels_are_hatched_in_two_directions():
    found = directions(drawn("plan"))
    assert found[45] > 5
    assert found[135] > 5


def test_regions_of_panels_that_are_not_in_the_plan_differ_too():
    found = directions(drawn("plan, hostile"))
    assert found[45] > 5
    assert found[135] > 5


def test_a_continuous_beams_four_panels_differ_from_their_neighbours():
    plan = small_floor()
    corners = {"P1": (0, 0), "P2": (6, 0), "P3": (0, 4.5), "P4": (6, 4.5)}
    plan["regions"] = [
        {"panel": mark, "outline": [[x + 1, y + 1], [x + 3, y + 1], [x + 3, y + 3], [x + 1, y + 3]]}
        for mark, (x, y) in corners.items()
    ]
    found = directions(key_plan(plan, "B5"))
    assert found[45] == found[135] > 5


def test_all_beams_are_labelled():
    plan = bays(6, 4)
    shown = words(drawn("plan, many bays"))
    assert {beam["mark"] for beam in plan["beams"]} <= set(shown)
    assert {panel["mark"] for panel in plan["panels"]} <= set(shown)


def test_labels_of_upright_beams_stand_upright():
    label = next(item for item in inks(drawn("plan, all beams")) if item.text == "B9")
    width, height = np.ptp(label.corners, axis=0)
    assert height > width


def test_no_beam_runs_through_a_label_in_a_whole_plan():
    assert crossed(drawn("plan, all beams"), 0.9) == []
    assert crossed(drawn("plan, many bays"), 0.9) == []


def test_dimensions_and_grid_names():
    shown = words(drawn("plan"))
    assert [word for word in shown if word.endswith("\u00a0m")] == [
        "6.00\u00a0m",
        "5.00\u00a0m",
        "4.50\u00a0m",
        "4.50\u00a0m",
    ]
    assert {"A", "B", "C", "1", "2", "3"} <= set(shown)
    assert not any("\u00a0m" in word for word in words(key_plan(small_floor(), "B5", dimensions=False)))
    assert "16.40\u00a0ft" in words(drawn("plan, continuous beam, feet"))


def test_every_distance_of_a_crowded_grid_is_written():
    shown = [word for word in words(key_plan(crowded_grid(), "B5")) if word.endswith("\u00a0m")]
    distances = ["0.40", "0.40", "5.20", "0.30", "4.70", "0.30", "4.20", "0.20", "0.20", "4.10"]
    assert shown == [f"{text}\u00a0m" for text in distances]


def test_a_large_floor_shows_the_bays_about_the_beam_and_the_whole():
    figure = drawn("plan, large floor")
    shown = words(figure)
    assert "B54" in shown
    assert "P54" in shown
    assert "P1" not in shown
    assert "framed: the part shown" in shown
    assert "framed: the part shown" not in words(drawn("plan"))
    assert "72.00 m by 40.00 m" in figure.alt


def test_a_long_plan_says_that_it_is_drawn_out():
    assert "height drawn 1.2 times as large" in words(drawn("plan, long floor, all beams"))
    assert not any("drawn" in word for word in words(drawn("plan, many bays")))


def test_the_plan_in_words():
    assert drawn("plan").alt == (
        "Framing plan, 11.00 m by 9.00 m: beam B5, 6.00 m long; "
        "panels P1 (5.50 kPa) and P3 (6.10 kPa) drain to it."
    )
    assert drawn("plan, one beam").alt == (
        "Framing plan, 6.00 m by 0.00 m: beam B1, 6.00 m long; no panel drains to it."
    )
    assert drawn("plan, many bays").alt.startswith(
        "Framing plan, 36.00 m by 20.00 m: beams B1, B2, B3, B4, B5, B6, B7, B8, B9, B10, B11, B12 "
        "and 46 more; panels P1 (5.50 kPa)"
    )


def test_an_unknown_beam_is_refused():
    with pytest.raises(ValueError, match="no beam 'B99' in the plan"):
        key_plan(with_region(bays(2, 2), "B1"), "B99")


def test_a_panel_names_areas_and_half_sides():
    shown = words(drawn("panel"))
    assert shown.count("8.44\u00a0m²") == shown.count("5.06\u00a0m²") == 2
    assert {"B1", "B5", "B9", "W1", "45°"} <= set(shown)
    assert shown.count("S/2 = 2.25\u00a0m") == 4
    assert "1.50\u00a0m" in shown
    assert drawn("panel").alt == ("Panel P1 drains to B1 8.44 m², B9 5.06 m², B5 8.44 m² and W1 5.06 m².")


def test_a_continuous_edge_has_its_lines_at_sixty_degrees():
    shown = words(panel_drainage(sixty()))
    assert {"60°", "45°"} <= set(shown)
    assert not any("S/2" in word for word in shown)
    assert {"1.65\u00a0m", "2.85\u00a0m", "2.71\u00a0m"} <= set(shown)


def test_angles_of_a_triangle():
    corners = np.array(triangle_panel()["corners"])
    halves = set()
    for n in range(3):
        a, b = corners[(n + 1) % 3] - corners[n], corners[n - 1] - corners[n]
        whole = math.degrees(math.acos(float(a @ b) / float(np.hypot(*a) * np.hypot(*b))))
        halves.add(f"{round(whole / 2, 1):g}°")
    assert halves <= set(words(drawn("panel, triangle")))


def test_a_free_edge_is_dashed_and_a_one_way_panel_has_no_half_side():
    panel = divided(transfer="one-way", direction=[0, 1])
    panel["shares"] = [
        {**panel["shares"][0], "region": [[0, 0], [6, 0], [6, 2.25], [0, 2.25]], "area": 13.5},
        {**panel["shares"][2], "region": [[6, 4.5], [0, 4.5], [0, 2.25], [6, 2.25]], "area": 13.5},
    ]
    figure = panel_drainage(panel)
    dashed = [line for stroke in strokes(figure) if stroke.dashed for line in stroke.lines]
    assert len(dashed) == 2
    shown = words(figure)
    assert shown.count("13.50\u00a0m²") == 2
    assert not any("S/2" in word or "°" in word for word in shown)


def test_a_turned_panel_is_drawn_along_its_edges():
    assert sorted(words(drawn("panel, turned"))) == sorted(words(drawn("panel")))


def test_a_panel_nothing_drains_from():
    figure = panel_drainage(divided(shares=[]))
    assert figure.alt == "Panel P1 drains nowhere."
