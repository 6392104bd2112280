"""What holds for every figure: nothing overlaps or is cut off, nothing reaches outside, same bytes."""

import hashlib
import os
import re
import subprocess
import sys
from pathlib import Path

import pytest
from figure_cases import CASES, drawn
from svg_reading import inks, outside, overlapping, root, words

from calcpack.figures import key_plan

every = pytest.mark.parametrize("name", CASES)


@every
def test_no_text_lies_on_another(name):
    assert overlapping(drawn(name)) == []


@every
def test_no_text_is_cut_off(name):
    assert outside(drawn(name)) == []


@every
def test_twice_the_same(name):
    assert CASES[name]() == drawn(name)


@every
def test_stands_alone(name):
    figure = drawn(name)
    bare = figure.svg.replace('xmlns="http://www.w3.org/2000/svg"', "")
    assert figure.svg.startswith("<svg ")
    assert root(figure).attrib["width"] == f"{figure.width_mm:g}mm"
    for word in ("://", "href", "url(", "<style", "<!", "<?", " id=", "matplotlib", ".ttf", str(Path.home())):
        assert word not in bare
    assert not re.search(r"20\d\d-\d\d", bare)


@every
def test_is_spoken(name):
    figure = drawn(name)
    assert figure.alt.endswith(".")
    assert "\n" not in figure.alt
    assert root(figure).attrib["aria-label"] == figure.alt


def test_the_check_for_overlaps_can_fail():
    from calcpack.figures.drawing import Drawing

    drawing = Drawing()
    drawing.text(10.0, 5.0, "moment")
    drawing.text(11.0, 5.5, "shear", angle=30.0)
    drawing.text(29.0, 5.0, "beyond")
    figure = drawing.finish(30.0, "Two words.")
    assert overlapping(figure) == [("moment", "shear")]
    assert outside(figure) == ["beyond"]


def test_the_same_bytes_in_another_process():
    names = ["plan, large floor", "loads, crowded", "response, five spans", "panel", "plan, hostile"]
    program = (
        "import hashlib\nfrom figure_cases import CASES\n"
        f"print(hashlib.sha256(''.join(CASES[n]().svg for n in {names!r}).encode()).hexdigest())"
    )
    paths = os.pathsep.join([str(Path(__file__).parent), *sys.path])
    environment = {**os.environ, "PYTHONHASHSEED": "77", "PYTHONPATH": paths, "TZ": "Asia/Tokyo"}
    found = subprocess.run(
        [sys.executable, "-c", program], env=environment, capture_output=True, text=True, check=True
    )
    here = hashlib.sha256("".join(CASES[name]().svg for name in names).encode()).hexdigest()
    assert found.stdout.strip() == here


def test_hostile_marks_are_shown_as_they_are():
    figure = CASES["plan, hostile"]()
    shown = words(figure)
    assert "P$1$" in shown
    assert {"$A$", "<B>", "&C"} <= set(shown)
    assert "$x$ <b> & 'q' \"z\"" in figure.alt
    assert not any("\x07" in word or "\n" in word for word in shown)


def test_long_marks_are_shortened():
    long = "the beam over the old boat shed's southern door, as strengthened"
    figure = key_plan({"beams": [{"mark": long, "points": [[0, 0], [6, 0]]}]}, long)
    (shown,) = [word for word in words(figure) if word.startswith("the beam")]
    assert shown.endswith("…")
    assert long.startswith(shown[:-1].rstrip())
    assert outside(figure) == []
    assert long in figure.alt


def test_text_is_text_in_the_pages_face():
    figure = CASES["loads"]()
    assert "Libertinus Serif" in root(figure).attrib["style"]
    assert len(inks(figure)) > 10
