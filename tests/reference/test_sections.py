"""Area and strong-axis inertia of the rolled sections against published tables.

The sources, both recalled from memory:

EN    producers' tables of IPE, HE A and HE B sections to EN 10365 (formerly EN 10034 and DIN 1025), A in cm2
      and Iy in cm4. Dimensions and properties there follow from one another, root fillets included, so what
      is left is the rounding of the printed figures: 0.25 % of A, 0.1 % of Iy.
AISC  AISC Steel Construction Manual, 15th ed., Table 1-1, A in in2 and Ix in in4. Depths are printed to
      0.1 in and k to 0.01 in, so 0.7 % of A and 1.0 % of Ix. The nominal weight of the designation, in
      lb/ft, is met to 1.1 % at 490 lb/ft3.
"""

from __future__ import annotations

import pytest

from calcpack.job.library import rolled_area_and_inertia, rolled_sections

INCH = 0.0254

# size: IPE A, Iy
IPE = {
    80: (7.64, 80.1),
    100: (10.3, 171),
    120: (13.2, 318),
    140: (16.4, 541),
    160: (20.1, 869),
    180: (23.9, 1317),
    200: (28.5, 1943),
    220: (33.4, 2772),
    240: (39.1, 3892),
    270: (45.9, 5790),
    300: (53.8, 8356),
    330: (62.6, 11770),
    360: (72.7, 16270),
    400: (84.5, 23130),
    450: (98.8, 33740),
    500: (115.5, 48200),
    550: (134.4, 67120),
    600: (156.0, 92080),
}

# size: HE A A, Iy, HE B A, Iy
HE = {
    100: (21.2, 349, 26.0, 449.5),
    120: (25.3, 606, 34.0, 864.4),
    140: (31.4, 1033, 43.0, 1509),
    160: (38.8, 1673, 54.3, 2492),
    180: (45.3, 2510, 65.3, 3831),
    200: (53.8, 3692, 78.1, 5696),
    220: (64.3, 5410, 91.0, 8091),
    240: (76.8, 7763, 106.0, 11260),
    260: (86.8, 10450, 118.4, 14920),
    280: (97.3, 13670, 131.4, 19270),
    300: (112.5, 18260, 149.1, 25170),
    320: (124.4, 22930, 161.3, 30820),
    340: (133.5, 27690, 170.9, 36660),
    360: (142.8, 33090, 180.6, 43190),
    400: (159.0, 45070, 197.8, 57680),
    450: (178.0, 63720, 218.0, 79890),
    500: (197.5, 86970, 238.6, 107200),
    550: (211.8, 111900, 254.1, 136700),
    600: (226.5, 141200, 270.0, 171000),
}

# designation: A, Ix
W = {
    "W8X10": (2.96, 30.8),
    "W8X13": (3.84, 39.6),
    "W8X15": (4.44, 48.0),
    "W8X18": (5.26, 61.9),
    "W8X21": (6.16, 75.3),
    "W8X24": (7.08, 82.7),
    "W8X28": (8.24, 98.0),
    "W8X31": (9.12, 110),
    "W8X35": (10.3, 127),
    "W8X40": (11.7, 146),
    "W8X48": (14.1, 184),
    "W10X12": (3.54, 53.8),
    "W10X15": (4.41, 68.9),
    "W10X17": (4.99, 81.9),
    "W10X19": (5.62, 96.3),
    "W10X22": (6.49, 118),
    "W10X26": (7.61, 144),
    "W10X30": (8.84, 170),
    "W10X33": (9.71, 171),
    "W10X39": (11.5, 209),
    "W10X45": (13.3, 248),
    "W10X49": (14.4, 272),
    "W12X14": (4.16, 88.6),
    "W12X16": (4.71, 103),
    "W12X19": (5.57, 130),
    "W12X22": (6.48, 156),
    "W12X26": (7.65, 204),
    "W12X30": (8.79, 238),
    "W12X35": (10.3, 285),
    "W12X40": (11.7, 307),
    "W12X45": (13.1, 348),
    "W12X50": (14.6, 391),
    "W12X53": (15.6, 425),
    "W12X58": (17.0, 475),
    "W12X65": (19.1, 533),
    "W14X22": (6.49, 199),
    "W14X26": (7.69, 245),
    "W14X30": (8.85, 291),
    "W14X34": (10.0, 340),
    "W14X38": (11.2, 385),
    "W14X43": (12.6, 428),
    "W14X48": (14.1, 484),
    "W14X53": (15.6, 541),
    "W14X61": (17.9, 640),
    "W16X26": (7.68, 301),
    "W16X31": (9.13, 375),
    "W16X36": (10.6, 448),
    "W16X40": (11.8, 518),
    "W16X45": (13.3, 586),
    "W16X50": (14.7, 659),
    "W16X57": (16.8, 758),
    "W18X35": (10.3, 510),
    "W18X40": (11.8, 612),
    "W18X46": (13.5, 712),
    "W18X50": (14.7, 800),
    "W18X55": (16.2, 890),
    "W18X60": (17.6, 984),
    "W18X65": (19.1, 1070),
    "W18X71": (20.8, 1170),
    "W21X44": (13.0, 843),
    "W21X50": (14.7, 984),
    "W21X57": (16.7, 1170),
    "W21X62": (18.3, 1330),
    "W21X68": (20.0, 1480),
    "W21X73": (21.5, 1600),
    "W24X55": (16.2, 1350),
    "W24X62": (18.2, 1550),
    "W24X68": (20.1, 1830),
    "W24X76": (22.4, 2100),
    "W24X84": (24.7, 2370),
    "W27X84": (24.7, 2850),
    "W27X94": (27.6, 3270),
    "W30X90": (26.3, 3610),
    "W30X99": (29.0, 3990),
    "W33X118": (34.7, 5900),
    "W36X135": (39.7, 7800),
}

PUBLISHED_EN = {f"IPE {size}": values for size, values in IPE.items()}
PUBLISHED_EN |= {f"HE {size} A": values[:2] for size, values in HE.items()}
PUBLISHED_EN |= {f"HE {size} B": values[2:] for size, values in HE.items()}


def section(designation: str) -> tuple[float, float]:
    found = rolled_sections()["".join(designation.split()).casefold()]
    assert found.designation == designation
    return found.area, found.inertia


@pytest.mark.parametrize("designation", PUBLISHED_EN)
def test_european_sections(designation: str) -> None:
    area, inertia = section(designation)
    assert area * 1e4 == pytest.approx(PUBLISHED_EN[designation][0], rel=2.5e-3)
    assert inertia * 1e8 == pytest.approx(PUBLISHED_EN[designation][1], rel=1e-3)


@pytest.mark.parametrize("designation", W)
def test_w_shapes(designation: str) -> None:
    area, inertia = section(designation)
    assert area / INCH**2 == pytest.approx(W[designation][0], rel=7e-3)
    assert inertia / INCH**4 == pytest.approx(W[designation][1], rel=1e-2)
    nominal = float(designation.partition("X")[2])
    assert area / INCH**2 / 144 * 490 == pytest.approx(nominal, rel=1.1e-2)


def test_every_section_is_compared() -> None:
    known = {each.designation for each in rolled_sections().values()}
    assert known == {*PUBLISHED_EN, *W}
    assert len(W) >= 60


@pytest.mark.parametrize("size", ["depth", "width", "web", "flange"])
def test_the_tolerances_can_fail(size: str) -> None:
    """A slip of 3 % in one dimension is out of tolerance, in the area or in the inertia."""
    for designation, (area, inertia), close in (
        ("IPE 300", (53.8e-4, 8356e-8), (2.5e-3, 1e-3)),
        ("W18X50", (14.7 * INCH**2, 800 * INCH**4), (7e-3, 1e-2)),
    ):
        sizes = rolled_sections()["".join(designation.split()).casefold()].dimensions
        wrong = rolled_area_and_inertia(**sizes | {size: 1.03 * sizes[size]})
        assert wrong[0] != pytest.approx(area, rel=close[0]) or wrong[1] != pytest.approx(
            inertia, rel=close[1]
        )


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
