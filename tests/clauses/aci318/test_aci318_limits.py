"""Bounds of validity and of formulas, materials, flanges: at the bound, beside it, worked by hand."""

import pytest
from aci_samples import KSI, PSI, begin, bounded

from calcpack.clauses.aci318.flange import Wing, state_flange, state_given_flange, wing_width
from calcpack.clauses.aci318.limits import LIMITS, bound, guard, limit_words
from calcpack.clauses.aci318.materials import root, shared, state_materials
from calcpack.clauses.aci318.strength import Block, beta_1, grade_factor, phi_bending
from calcpack.clauses.aci318.strength import root as root_of
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Material
from calcpack.sheet import Sheet

# key, side, bound [psi], clause
TABLE = [
    ("f'_c", "least", 2500, "Table 19.2.1.1"),
    ("f_y", "most", 100_000, "Table 20.2.2.4(a)"),
    ("f_y", "least", 40_000, "20.2.1.3, ASTM A615"),
    ("root f'_c", "most", 100, "22.5.3.1, 22.7.2.1"),
    ("root f'_c", "most", 100, "25.4.1.4"),
    ("f_yt", "most", 60_000, "Table 20.2.2.4(a)"),
    ("f_y least steel", "most", 80_000, "9.6.1.2"),
]


def test_the_table_of_bounds():
    assert [(each.key, each.side, each.value, each.cite) for each in LIMITS] == TABLE
    assert {each.unit for each in LIMITS} == {"psi"}
    for key, psi in (("root f'_c", 100), ("f_yt", 60_000), ("f_y least steel", 80_000)):
        assert bound(key) == pytest.approx(psi * PSI)
    with pytest.raises(KeyError):
        bound("f_y")


def test_a_sheet_says_the_bounds_in_its_own_units():
    """1000 psi are 6.895 MPa: 2500 psi 17.2, 40 ksi 275.8, 60 ksi 413.7, 80 ksi 551.6, 100 ksi 689.5 MPa."""
    said = limit_words("SI").replace("\u00a0", " ")
    for value in ("17.2 MPa", "689.5 MPa", "275.8 MPa", "0.689 MPa", "413.7 MPa", "551.6 MPa"):
        assert value in said
    said = limit_words("US").replace("\u00a0", " ")
    for value in ("2500 psi", "100000 psi", "40000 psi", "100 psi", "60000 psi", "80000 psi"):
        assert f" {value} (" in said


@pytest.mark.parametrize(
    ("key", "psi", "words"),
    [("f'_c", 2490, "2490 psi is below 2500 psi"), ("f_y", 100_500, "100500 psi is above 100000 psi"),
     ("f_y", 39_800, "39800 psi is below 40000 psi")],
)  # fmt: skip
def test_what_is_refused_is_said_with_its_bound(key, psi, words):
    with pytest.raises(CalcpackError) as caught:
        guard({key: psi * PSI}, "US", "beam B1")
    assert words in str(caught.value)


def test_a_bound_itself_is_allowed():
    guard({"f'_c": 2500 * PSI, "f_y": 100 * KSI}, "SI")
    guard({"f_y": 40 * KSI}, "SI")


@pytest.mark.parametrize(("fc", "value", "capped"), [(9900, 99.498744, False), (10_050, 100.0, True),
                                                     (12_000, 100.0, True)])  # fmt: skip
def test_the_root_counts_up_to_100(fc, value, capped):
    """22.5.3.1: √9900 = 99.4987; the bound is written only where it counts."""
    sheet, materials, _ = begin(fc)
    line = sheet.hence("r", root(materials.fc), "1", "Root", "test")
    assert line.value == pytest.approx(value, rel=1e-8)
    assert bounded(line) is capped
    assert root_of(fc * PSI) / PSI == pytest.approx(value, rel=1e-8)


@pytest.mark.parametrize(
    ("fc", "value", "capped"),
    [(3980, 0.85, True), (4020, 0.849, False), (5000, 0.80, False), (7980, 0.651, False), (8040, 0.65, True)],
)
def test_stress_block(fc, value, capped):
    """Table 22.2.2.4.3: 0.85 up to 4000 psi, less 0.05 for each 1000 psi above, 0.65 from 8000 psi on."""
    _, materials, _ = begin(fc)
    assert materials.beta.value == pytest.approx(value, rel=1e-9)
    assert bounded(materials.beta) is capped
    assert beta_1(fc * PSI) == pytest.approx(value, rel=1e-9)


def test_materials_of_a_metric_job():
    """f'c 35, f_y 420, E_s 200 000 MPa: 35 MPa are 5076.32 psi, β1 = 0.85 - 0.05 x 1.07632."""
    sheet = Sheet("B1")
    sheet.section("Materials")
    values = {"fc": 35e3, "fy": 420e3, "Es": 200e6}
    found = state_materials(
        sheet, Material(key="c", kind="concrete", modulus=28e6, unit_weight=24.0, values=values)
    )
    assert (found.fc.value, found.fy.value, found.es.value) == pytest.approx((35.0, 420.0, 200e3))
    assert (found.ec.value, found.lightweight.value) == pytest.approx((28e3, 1.0))
    assert found.beta.value == pytest.approx(0.796184, rel=1e-6)
    assert found.yield_strain.value == pytest.approx(0.0021)
    assert found.fyt.value == pytest.approx(413.685, rel=1e-5)


def test_a_count_of_one_is_not_written():
    sheet, *_ = begin()
    length = sheet.take("x", 100, "mm", "Length", "test").as_expression()
    assert shared(length, 1) is length
    assert sheet.hence("y", shared(length, 4), "mm", "Part", "test").value == pytest.approx(25.0)


@pytest.mark.parametrize(("strain", "phi"), [(0.001, 0.65), (0.0020, 0.65), (0.0035, 0.775), (0.005, 0.90),
                                             (0.006, 0.90)])  # fmt: skip
def test_strength_reduction(strain, phi):
    """Table 21.2.2 with ε_ty = 0.002: 0.65 + 0.25 (ε_t - ε_ty) / 0.003 between 0.65 and 0.90."""
    assert phi_bending(strain, 0.002) == pytest.approx(phi, rel=1e-12)


@pytest.mark.parametrize(
    ("mpa", "factor"),
    [
        (275.79, 1.0),
        (413.69, 1.0),
        (420, 1.0),
        (424, 1.15),
        (550, 1.15),
        (551.58, 1.15),
        (561, 1.3),
        (690, 1.3),
    ],
)
def test_grade_factor(mpa, factor):
    """Table 25.4.2.5, ψg: 1.0 for Grades 40 and 60 (420 in MPa), 1.15 for 80 (550), 1.3 for 100 (690)."""
    assert grade_factor(mpa * 1000) == factor


# Flanges: h_f = 4 in; clear distance to the next web, clear span [in]


@pytest.mark.parametrize(
    ("both", "clear", "span", "reach"),
    [(True, 100, 400, 32), (True, 50, 400, 25), (True, 100, 200, 25),
     (False, 100, 400, 24), (False, 40, 400, 20), (False, 100, 240, 20)],
)  # fmt: skip
def test_each_bound_of_a_flange(both, clear, span, reach):
    """Table 6.3.2.1: the least of 8 h, s_w/2, l_n/8 on each side; of 6 h, s_w/2, l_n/12 on one."""
    assert wing_width(4, clear, span, both=both) == pytest.approx(reach)
    sheet, _, size = begin(flange=(60, 4))
    line = sheet.take("ell_n", span * 0.0254, "m", "", "test")
    wings = (Wing(clear * 0.0254, "beam"),) * (2 if both else 1)
    found = state_flange(sheet, size, wings, line, size.flange, "b_e")
    assert found.value / 25.4 == pytest.approx(12 + reach * len(wings))


def test_sides_that_differ_are_added_one_by_one():
    """50 / 2 = 25 in and 50.2 / 2 = 25.1 in: 12 + 25 + 25.1; equal ones are written as twice one of them."""
    sheet, _, size = begin(flange=(60, 4))
    line = sheet.take("ell_n", 400 * 0.0254, "m", "", "test")
    for other, width in ((50.2, 62.1), (50.0, 62.0)):
        wings = (Wing(50 * 0.0254, "beam"), Wing(other * 0.0254, "beam"))
        found = state_flange(sheet, size, wings, line, size.flange, f"b_{round(width)}{round(other)}")
        assert found.value / 25.4 == pytest.approx(width)


@pytest.mark.parametrize(("most", "passes"), [(60.0, True), (59.9, False)])
def test_a_given_width_is_no_more_than_what_acts(most, passes):
    sheet, _, size = begin(flange=(60, 6))
    line = sheet.take("b_max", most * 25.4, "mm", "", "test")
    ((name, found),) = state_given_flange(sheet, size, line)
    assert (name, found.passes) == ("flange width", passes)


def test_a_block_has_a_flange_where_it_is_given_a_depth():
    """A face of 600 mm over a web of 300 mm, 5 mm deep: 0.3 x 0.1 + 0.3 x 0.005 m2; with no depth a rectangle."""
    assert Block(0.6, 0.3, 0.005).flanged
    assert Block(0.6, 0.3, 0.005).area(0.1) == pytest.approx(0.0315)
    assert not Block(0.6, 0.3).flanged
    assert Block(0.6, 0.3).area(0.1) == pytest.approx(0.03)
    assert not Block(0.3, 0.3, 0.1).flanged
