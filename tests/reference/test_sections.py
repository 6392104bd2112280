"""Area and strong-axis inertia of the rolled sections: shared/verification/sections.toml."""

from __future__ import annotations

import pytest
from published import published, wrong

from calcpack.job.library import rolled_area_and_inertia, rolled_sections
from calcpack.verification.comparison import Comparison
from calcpack.verification.reckon import compare_row, rows

EUROPEAN = ("IPE", "HE A", "HE B")


@pytest.mark.parametrize("row", published("sections", *EUROPEAN))
def test_european_sections(row) -> None:
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("sections", "W"))
def test_w_shapes(row) -> None:
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("sections", "W"))
def test_w_shapes_weigh_what_they_are_called(row) -> None:
    assert row.text("weight") == row.text("designation").partition("X")[2]


def test_every_section_is_compared() -> None:
    known = {each.designation for each in rolled_sections().values()}
    compared = [row.text("designation") for table in (*EUROPEAN, "W") for row in rows("sections", table)]
    assert sorted(compared) == sorted(known)
    assert len(rows("sections", "W")) >= 60


@pytest.mark.parametrize("size", ["depth", "width", "web", "flange"])
def test_the_tolerances_can_fail(size: str) -> None:
    """A slip of 3 % in one dimension is out of tolerance, in the area or in the inertia."""
    for table, designation, units in (
        ("IPE", "IPE 300", (1e-4, 1e-8)),
        ("W", "W18X50", (0.0254**2, 0.0254**4)),
    ):
        row = next(row for row in rows("sections", table) if row.text("designation") == designation)
        sizes = rolled_sections()["".join(designation.split()).casefold()].dimensions
        slipped = rolled_area_and_inertia(**sizes | {size: 1.03 * sizes[size]})
        comparisons = [
            Comparison(row, each.quantity, value / unit)
            for each, value, unit in zip(compare_row(row), slipped, units, strict=False)
        ]
        assert len(comparisons) == 2
        assert not all(each.holds for each in comparisons)


def test_integration_against_slices() -> None:
    """The formula with its fillets against a sum over slices of the section."""
    depth, width, web, flange, radius = 0.3, 0.15, 0.0071, 0.0107, 0.015
    slices = 15_000  # of 0.01 mm, so that none straddles the flange's face
    area = inertia = 0.0
    for number in range(slices):
        height = depth / 2 * (number + 0.5) / slices
        inside = depth / 2 - flange - height  # distance to the flange's inner face
        breadth = width if inside < 0 else web
        if 0 <= inside < radius:
            breadth += 2 * (radius - (radius**2 - (radius - inside) ** 2) ** 0.5)
        area += 2 * breadth * depth / 2 / slices
        inertia += 2 * breadth * height**2 * depth / 2 / slices
    assert rolled_area_and_inertia(depth, width, web, flange, radius) == pytest.approx(
        (area, inertia), rel=1e-5
    )
