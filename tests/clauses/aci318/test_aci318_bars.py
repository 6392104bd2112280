"""Bar sizes: read as a job writes them, refused with the nearest, true to their own geometry."""

import math

import pytest

from calcpack.clauses.bars import bar, bar_sizes
from calcpack.job.errors import CalcpackError


@pytest.mark.parametrize("text", ["20 mm", "20", "20mm", " 20 MM ", "Ø20", "20.0 mm"])
def test_metric_sizes_are_diameters(text):
    found = bar(text)
    assert (found.name, found.diameter) == ("20 mm", 0.020)
    assert found.area == pytest.approx(314.16e-6, rel=1e-5)


@pytest.mark.parametrize("text", ["#8", "No. 8", "no 8", "# 8", "NO.8"])
def test_us_sizes_are_numbers(text):
    found = bar(text)
    assert (found.name, found.diameter) == ("#8", pytest.approx(0.0254))
    assert found.area == pytest.approx(0.79 * 0.0254**2)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("21 mm", "there is no bar '21 mm'; the nearest is '20 mm'"),
        ("#12", "there is no bar '#12'; the nearest is '#11'"),
        ("#17", "there is no bar '#17'; the nearest is '#18'"),
        ("#999999", "there is no bar '#999999'; the nearest is '#18'"),
        ("T20", "'T20' is not a bar size; write a diameter ('20 mm') or a number ('#8')"),
    ],
)
def test_unknown_sizes_name_the_nearest(text, message):
    with pytest.raises(CalcpackError) as caught:
        bar(text)
    assert str(caught.value) == message


@pytest.mark.parametrize("system", ["metric", "us"])
def test_sizes_grow_and_areas_are_circles_to_the_tables_rounding(system):
    sizes = bar_sizes(system)
    assert [each.diameter for each in sizes] == sorted(each.diameter for each in sizes)
    for each in sizes:
        assert each.area == pytest.approx(math.pi * each.diameter**2 / 4, rel=0.025)
        assert bar(each.name) is each


def test_numbers_up_to_eight_are_eighths_of_an_inch():
    for each in bar_sizes("us"):
        number = int(each.name[1:])
        if number <= 8:
            assert each.diameter == pytest.approx(number / 8 * 0.0254)
