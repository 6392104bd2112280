"""Published live loads and worked reductions against the tables and the rules.

All are quoted from memory, with the rounding they are printed in.
"""

import pytest

from calcpack.actions import occupancy_tables
from calcpack.actions.reduction import FOOT, asce_factor, en_factor

USES = {(table.name, use.key): use for table in occupancy_tables() for use in table.uses}
PSF = 0.04788025898

# R. C. Hibbeler, Structural Analysis, 8th edition (from memory): interior columns, K_LL = 4.
# place, spacing of the columns both ways, L0, printed L, half a unit of its last digit
COLUMNS = [
    ("Example 1.3", 22 * FOOT, 50.0, 29.55, 0.005),  # ft, psf
    ("Problem 1-13", 5.0, 2.4, 1.70, 0.005),  # m, kN/m²
    ("Problem 1-14", 6.0, 1.92, 1.2112, 0.0005),  # with the metric form's 4.57
]


@pytest.mark.parametrize(("place", "spacing", "load", "printed", "rounding"), COLUMNS)
def test_worked_columns(place, spacing, load, printed, rounding):
    found = load * asce_factor(spacing**2, 4.0, floors=2)
    assert found == pytest.approx(printed, abs=rounding)


# The formula at round influence areas, as ASCE 7's commentary plots it (from memory): K_LL A_T in ft², L/L0.
@pytest.mark.parametrize(
    ("influence", "printed"), [(400, 1.00), (900, 0.75), (1600, 0.63), (2500, 0.55), (3600, 0.50)]
)
def test_the_reduction_curve(influence, printed):
    assert asce_factor(influence * FOOT**2, 1.0) == pytest.approx(printed, abs=0.0051)


# H. Gulvanessian, P. Formichi, J.-A. Calgaro, Designers' Guide to Eurocode 1 (from memory): ψ0 = 0.7.
@pytest.mark.parametrize(("area", "printed"), [(40, 0.75), (80, 0.63), (120, 0.58), (160, 0.56), (240, 0.54)])
def test_the_eurocode_table_of_areas(area, printed):
    assert en_factor(float(area), 0.7, "A") == pytest.approx(printed, abs=0.0051)


@pytest.mark.parametrize(
    ("key", "uniform", "point"),
    # EN 1991-1-1:2002, Table 6.2, recommended (underlined) values; 6.4, 6.8, 6.10
    [
        ("A floors", 2.0, 2.0),
        ("A stairs", 2.0, 2.0),
        ("A balconies", 2.5, 2.0),
        ("B", 3.0, 4.5),
        ("C1", 3.0, 4.0),
        ("C2", 4.0, 4.0),
        ("C3", 5.0, 4.0),
        ("C4", 5.0, 7.0),
        ("C5", 5.0, 4.5),
        ("D1", 4.0, 4.0),
        ("D2", 5.0, 7.0),
        ("E1", 7.5, 7.0),
        ("F", 2.5, 20.0),
        ("G", 5.0, 90.0),
        ("H", 0.4, 1.0),
    ],
)
def test_imposed_loads_of_en_1991(key, uniform, point):
    use = USES["EN 1991-1-1", key]
    assert (use.uniform, use.point) == (uniform, point)


@pytest.mark.parametrize(
    ("key", "pounds", "point"),
    # ASCE/SEI 7-22, Table 4.3-1: psf and lb; kPa and kN beside them in the standard, rounded
    [
        ("office", 50, 2000),
        ("office, lobby", 100, 2000),
        ("dwelling", 40, None),
        ("dwelling, sleeping", 30, None),
        ("school, classroom", 40, 1000),
        ("library, stacks", 150, 1000),
        ("storage, light", 125, None),
        ("storage, heavy", 250, None),
        ("store, upper floors", 75, 1000),
        ("hospital, patients", 40, 1000),
        ("garage", 40, None),
    ],
)
def test_live_loads_of_asce_7(key, pounds, point):
    use = USES["ASCE 7-22", key]
    assert use.uniform == pytest.approx(pounds * PSF, rel=1e-6)
    assert use.point == (None if point is None else pytest.approx(point * 0.0044482216, rel=1e-6))


@pytest.mark.parametrize(
    ("key", "printed"),
    [("office", 2.40), ("office, lobby", 4.79), ("library, stacks", 7.18), ("dwelling", 1.92)],
)
def test_the_standards_own_metric_values(key, printed):
    # the standard's 50 psf is 2.40 kN/m², 0.25 % more than it is
    assert USES["ASCE 7-22", key].uniform == pytest.approx(printed, rel=3e-3)
