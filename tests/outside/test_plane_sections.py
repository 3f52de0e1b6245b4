"""Plane sections as printed: rolled and hollow sections, and the composites of textbooks."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

from core.shapes import Outline
from core.shapes.profile import circle_loop, rectangle_loop
from core.shapes.sections import (
    AngleSection,
    ChannelSection,
    CircularHollowSection,
    ISection,
    RectangularHollowSection,
    Section,
    section_named,
)

if TYPE_CHECKING:
    from core.shapes import PlaneMoments

INCH = 0.0254
STEEL = 7850.0


def assert_printed(value: float, printed: str, unit: float) -> None:
    """Hold a value in SI against a printed text in a unit, to half of its last digit or its third."""
    number = float(printed)
    digits = printed.replace(".", "").lstrip("0")
    decimals = len(printed.split(".")[1]) if "." in printed else 0
    # Tables print three digits: the zeros at the end of a whole number say nothing.
    empty = len(digits) - max(3, len(digits.rstrip("0"))) if not decimals else 0
    half = 0.5 * 10.0 ** (max(empty, 0) - decimals)
    assert value / unit == pytest.approx(number, abs=half * (1 + 1e-9)), printed


# Open section tables (steelsnakes, EU data): A cm², Iy and Iz cm⁴, kg/m; in brackets recomputed with fillets from
# the same dimensions by another route.
EN_PRINTED = {
    "IPE 100": ("10.3", "171", "15.9", "8.1"),
    "IPE 200": ("28.5", "1940", "142", "22.4"),
    "IPE 300": ("53.8", "8360", "604", "42.2"),
    "IPE 600": ("156", "92100", "3390", "122"),
    "HE 200 A": ("53.8", "3690", "1340", "42.3"),
    "HE 100 B": ("26.0", "450", "167", "20.4"),
    "HE 200 B": ("78.1", "5700", "2000", "61.3"),
    "HE 300 B": ("149", "25200", "8560", "117"),
    "UPN 200": ("32.2", "1910", "148", "25.3"),
    "SHS 100x100x5 hot": ("18.7", "279", "279", "14.7"),
    "SHS 200x200x10 hot": ("74.9", "4470", "4470", "58.8"),
    "RHS 120x80x5 hot": ("18.7", "365", "193", "14.7"),
    "RHS 120x80x5 cold": ("18.4", "353", "188", "14.4"),
    "RHS 200x100x8 hot": ("44.8", "2230", "739", "35.1"),
    "RHS 100x50x4 cold": ("10.9", "134", "44.9", "8.59"),
    "RHS 80x40x3 cold": ("6.61", "52.3", "17.6", "5.19"),
    "CHS 88.9x5": ("13.2", "116", "116", "10.3"),
    "CHS 114.3x6.3": ("21.4", "313", "313", "16.8"),
    "CHS 42.4x3.2": ("3.94", "7.62", "7.62", "3.09"),
}

EN_WITH_FILLETS = {
    "IPE 100": (10.323, 171.01, 15.919), "IPE 200": (28.484, 1943.17, 142.368),
    "IPE 300": (53.812, 8356.11, 603.778), "IPE 600": (155.984, 92083.46, 3387.342),
    "HE 200 A": (53.831, 3692.16, 1335.509), "HE 200 B": (78.081, 5696.18, 2003.369),
    "SHS 100x100x5 hot": (18.732, 279.43, 279.43), "SHS 200x200x10 hot": (74.927, 4470.92, 4470.92),
    "RHS 120x80x5 hot": (18.732, 365.38, 192.95), "RHS 120x80x5 cold": (18.356, 353.14, 187.78),
    "CHS 88.9x5": (13.179, 116.37, 116.37),
}  # fmt: skip


def section(name: str) -> Section:
    made = section_named(name).section(1.0)
    assert isinstance(made, Section)
    return made


@pytest.mark.parametrize("name", EN_PRINTED)
def test_a_european_section_has_its_printed_area_second_moments_and_mass(name):
    area, strong, weak, mass = EN_PRINTED[name]
    body, plane = section(name), section(name).plane
    assert_printed(float(plane.area), area, 1e-4)
    assert_printed(float(plane.second[1, 1]), strong, 1e-8)
    assert_printed(float(plane.second[0, 0]), weak, 1e-8)
    assert_printed(float(body.moments().times(STEEL).mass), mass, 1.0)


@pytest.mark.parametrize("name", EN_WITH_FILLETS)
def test_with_its_fillets_it_has_the_digits_of_another_route(name):
    plane = section(name).plane
    got = (plane.area * 1e4, plane.second[1, 1] * 1e8, plane.second[0, 0] * 1e8)
    for value, expected in zip(got, EN_WITH_FILLETS[name], strict=True):
        decimals = len(repr(expected).split(".")[1])
        assert float(value) == pytest.approx(expected, abs=0.51 * 10.0**-decimals)


# The same tables; c of the centroid from the heel in cm, Iu and Iv about the principal axes. mass kg/m.
ANGLES = {
    "L 50x5": ("4.80", "11.0", "17.4", "4.55", "1.40", 4.8026),
    "L 100x10": ("19.2", "177", "280", "73.0", "2.82", 19.1545),
    "L 150x15": ("43.0", "898", "1430", "370", "4.25", 43.0247),
}


@pytest.mark.parametrize("name", ANGLES)
def test_an_angle_has_its_printed_area_centroid_and_principal_moments(name):
    area, own, strong, weak, centroid, formula = ANGLES[name]
    plane = section(name).plane
    assert_printed(float(plane.area), area, 1e-4)
    assert float(plane.area) * 1e4 == pytest.approx(formula, abs=0.51e-4)
    assert_printed(float(plane.second[1, 1]), own, 1e-8)
    assert_printed(float(plane.principal[1]), strong, 1e-8)
    assert_printed(float(plane.principal[0]), weak, 1e-8)
    for axis in range(2):
        assert_printed(float(plane.centre[axis]), centroid, 1e-2)


# The same tables, AISC shapes in inches: d, bf, tw, tf, k; A in², Ix and Iy in⁴; recomputed with the fillet k − tf.
AISC = {
    "W8x31": ((8.00, 8.00, 0.285, 0.435, 0.829), (9.13, 110, 37.1), (9.125, 109.91, 37.142)),
    "W12x26": ((12.2, 6.49, 0.230, 0.380, 0.680), (7.65, 204, 17.3), (7.641, 203.50, 17.327)),
    "W14x90": ((14.0, 14.5, 0.440, 0.710, 1.31), (26.5, 999, 362), (26.434, 994.75, 360.886)),
    "W12x50": ((12.2, 8.08, 0.37, 0.64, 1.14), (14.6, 391, 56.3), None),
    "W10x49": ((10.0, 10.0, 0.34, 0.56, 1.06), (14.4, 272, 93.4), None),
}


@pytest.mark.parametrize("name", AISC)
def test_an_american_section_has_its_printed_values(name):
    (height, width, web, flange, k), printed, with_fillets = AISC[name]
    plane = ISection(*(value * INCH for value in (height, width, web, flange, k - flange)), 1.0).plane
    got = (plane.area / INCH**2, plane.second[1, 1] / INCH**4, plane.second[0, 0] / INCH**4)
    # Depth and width are printed to three digits, ±0.05 of 10.0, and the second moment goes with their square.
    np.testing.assert_allclose(got, printed, rtol=1e-2)
    if with_fillets is not None:
        for value, expected in zip(got, with_fillets, strict=True):
            assert float(value) == pytest.approx(expected, abs=0.51 * 10.0 ** -len(repr(expected).split(".")[1]))


# Exact by Green's theorem, an open finite-element code's test agrees: area, first moments about the origin, second
# moments about the origin (∫y², ∫x², ∫xy) and about the centroid, the angle of the principal axes.
POLYGON = (
    (-10, 0), (110, 0), (100, 10), (55, 10), (55, 90), (100, 90), (110, 100),
    (110, 110), (-10, 110), (-10, 100), (0, 90), (45, 90), (45, 10), (-10, 10),
)  # fmt: skip


@pytest.mark.parametrize("turns", ["left", "right"])
def test_a_polygon_by_green_s_theorem(turns):
    plane = Outline.of(POLYGON if turns == "left" else POLYGON[::-1]).plane
    assert float(plane.area) == pytest.approx(4250, rel=1e-14)
    np.testing.assert_allclose(plane.area * plane.centre, [209666.667, 276333.333], atol=0.0005)
    about_origin = plane.second_about([0, 0])
    np.testing.assert_allclose(
        [about_origin[1, 1], about_origin[0, 0], about_origin[0, 1]],
        [25672500, 14185833.33, 13797916.67], atol=0.005,
    )
    np.testing.assert_allclose(plane.centre, [49.33333, 65.01961], atol=5e-6)
    (xx, xy), (_, yy) = plane.second
    np.testing.assert_allclose([yy, xx, xy], [7705415.033, 3842277.778, 165472.222], atol=0.0005)
    np.testing.assert_allclose(plane.principal[::-1], [7712489.853, 3835202.957], atol=0.0005)
    assert np.degrees(0.5 * np.arctan2(-2 * xy, yy - xx)) == pytest.approx(-2.4482093, abs=5e-8)


def plane_of(outer, *holes) -> PlaneMoments:
    return Outline.of(outer, *holes).plane


def rectangles(*boxes) -> Outline:
    """The union of rectangles (x, y, width, height), which may touch: an outline from shapely."""
    import shapely

    whole = shapely.union_all([shapely.box(x, y, x + w, y + h) for x, y, w, h in boxes])
    return Outline.of(*(ring.coords[:-1] for ring in (whole.exterior, *whole.interiors)))


def test_an_i_of_rectangles():
    # Peery, Aircraft Structures (1950), Ex 6.2.1: flanges 3 × 1 in, web 1, depth 6.
    plane = ISection(6.0, 3.0, 1.0, 1.0, 0.0, 1.0).plane
    assert_printed(float(plane.second[1, 1]), "43.3", 1.0)


def test_a_z_of_rectangles():
    # Peery, Ex 7.2.1: web 2 × 12, flanges 4 × 2 at opposite sides.
    plane = rectangles((-1, -6, 2, 12), (-5, 4, 4, 2), (1, -6, 4, 2)).plane
    assert float(plane.area) == pytest.approx(40, rel=1e-14)
    np.testing.assert_allclose(
        [plane.second[1, 1], plane.second[0, 0], plane.second[0, 1]], [693.3, 173.3, -240], atol=0.05
    )
    np.testing.assert_allclose(plane.principal, [79.5, 787], atol=0.5)
    angle = np.degrees(0.5 * np.arctan2(-2 * plane.second[0, 1], plane.second[1, 1] - plane.second[0, 0]))
    assert angle == pytest.approx(21.35, abs=0.005)


def test_a_z_with_its_principal_axes():
    # Hibbeler, Statics, Ex 10.6 and 10.8: 100 × 300 at (∓250, ±200), 600 × 100 in the middle, mm.
    plane = rectangles((-300, 50, 100, 300), (-300, -50, 600, 100), (200, -350, 100, 300)).plane
    np.testing.assert_allclose(
        [plane.second[1, 1], plane.second[0, 0], plane.second[0, 1]], [2.90e9, 5.60e9, -3.00e9], atol=0.005e9
    )
    # The principal values as remembered, to three digits.
    np.testing.assert_allclose(plane.principal, [0.960e9, 7.54e9], rtol=6e-4)


def test_another_z():
    # Tayal, Ex 12-15: flanges 12 × 3 at (∓5, ±4.5), web 2 × 6, cm.
    plane = rectangles((-11, 3, 12, 3), (-1, -3, 2, 6), (-1, -6, 12, 3)).plane
    np.testing.assert_allclose(
        [plane.second[1, 1], plane.second[0, 0], plane.second[0, 1]], [1548, 2668, -1620], atol=0.5
    )
    np.testing.assert_allclose(plane.principal, [394, 3822], atol=0.5)


def test_an_angle_with_unequal_legs():
    # Pytel & Kiusalaas, Ex A.4 and A.5: L 200 × 160 × 30 mm, sharp corners.
    plane = AngleSection(200.0, 160.0, 30.0, 0.0, 0.0, 1.0).plane
    np.testing.assert_allclose(
        [plane.second[1, 1], plane.second[0, 0], plane.second[0, 1]], [37.37e6, 21.07e6, -16.07e6], atol=0.006e6
    )
    # The book goes on with rounded values.
    np.testing.assert_allclose(plane.principal, [11_198_811, 47_240_734], rtol=5e-4)


def test_more_angles():
    # McLean, Ex 15-24 (8 × 6 × 1 in) and Ex 15-25 (125 × 125 × 25 mm; the book rounds the centroid).
    plane = AngleSection(8.0, 6.0, 1.0, 0.0, 0.0, 1.0).plane
    np.testing.assert_allclose(
        [plane.second[1, 1], plane.second[0, 0], plane.second[0, 1]], [80.8, 38.8, -32.3], atol=0.06
    )
    np.testing.assert_allclose(plane.principal, [21.2, 98.3], atol=0.06)
    plane = AngleSection(125.0, 125.0, 25.0, 0.0, 0.0, 1.0).plane
    np.testing.assert_allclose(plane.second[1, 1], 7_671_443.75, rtol=1e-6)
    np.testing.assert_allclose(-plane.second[0, 1], 4_340_275, rtol=1e-6)
    np.testing.assert_allclose(plane.principal, [3_331_168.75, 12_011_719], rtol=2e-6)


def test_a_t_about_its_edges():
    # Baker & Haynes, Engineering Statics, ch. 10: a stem 30 × 60 mm under a flange 90 × 20, about base and left edge.
    second = rectangles((30, 0, 30, 60), (0, 60, 90, 20)).plane.second_about([0, 0])
    assert_printed(float(second[1, 1]), "11.04", 1e6)
    assert_printed(float(second[0, 0]), "8.64", 1e6)


def test_a_ring_beside_an_axis():
    # Baker & Haynes: a ring 30/45 mm whose edge is 80 mm from the axis: 2.58e6 of its own and 55.2e6 mm⁴.
    plane = plane_of(circle_loop(90.0, 125.0, 0.0), circle_loop(60.0, 125.0, 0.0))
    assert_printed(float(plane.second[0, 0]), "2.58", 1e6)
    assert_printed(float(plane.area * plane.centre[0] ** 2), "55.2", 1e6)
    assert_printed(float(plane.second_about([0, 0])[0, 0]), "57.8", 1e6)


def test_planks_on_edge_and_as_an_i():
    # Baker & Haynes: three planks 1.5 × 5.5 in, side by side and as an I.
    side_by_side = plane_of(rectangle_loop(4.5, 5.5)).second[1, 1]
    as_i = rectangles((0, 0, 5.5, 1.5), (2, 1.5, 1.5, 5.5), (0, 7, 5.5, 1.5)).plane.second[1, 1]
    assert_printed(float(side_by_side), "62.4", 1.0)
    assert_printed(float(as_i), "226", 1.0)
    # The book divides rounded values.
    assert float(as_i / side_by_side) == pytest.approx(3.61, abs=0.02)


def test_a_casing_with_a_bore():
    # Baker & Haynes: rectangle 14 × 10 at (7, −3), triangle 8 wide and 10 high at (16.67, −4.67), hole r 3 at (7, −3).
    corners = ((0, -8), (22, -8), (14, 2), (0, 2))
    second = plane_of(corners, circle_loop(6.0, 7.0, -3.0)).second_about([0, 0])
    np.testing.assert_allclose([second[1, 1], second[0, 0]], [3202, 18951], rtol=5e-4)


def test_a_quarter_circle_less_its_triangle():
    # Baker & Haynes: J about the centre 0.226·r⁴, radius of gyration 0.890·r (0.226032, 0.889938).
    plane = plane_of(((1, 0, 0, 1), (0, 1)))
    second = plane.second_about([0, 0])
    polar = float(second[0, 0] + second[1, 1])
    assert polar == pytest.approx(0.226032, abs=5e-7)
    assert np.sqrt(polar / plane.area) == pytest.approx(0.889938, abs=5e-7)


def test_a_rectangle_less_half_a_disc():
    # Beer & Johnston, Sample Problem 9.5: 240 × 120 less a half disc of r 90 at its edge, mm (45 897 330).
    corners = ((0, 0), (240, 0), (240, 120), (210, 120, 0, -90), (30, 120), (0, 120))
    second = plane_of(corners).second_about([0, 0])
    assert float(second[1, 1]) == pytest.approx(45_897_330, abs=2e4)


def test_a_rectangle_less_a_circle():
    # Hibbeler, Statics, Ex 10.5: 100 × 150 less ⌀50 in the middle, about the base.
    second = plane_of(rectangle_loop(100.0, 150.0), circle_loop(50.0, 50.0, 75.0)).second_about([0, 0])
    assert float(second[1, 1]) == pytest.approx(101_148_542, abs=0.5)


def test_a_triangle_with_a_round_end_and_a_hole():
    # Pytel & Kiusalaas, Ex A.2: h 100, R 45, hole r 20; exact 55 376 903 about the vertex, 7 744 722 about the centroid.
    plane = plane_of(((0, 0), (45, 100, 0, 45), (-45, 100)), circle_loop(40.0, 0.0, 100.0))
    assert float(plane.second_about([0, 0])[1, 1]) == pytest.approx(55_376_903, abs=1)
    assert float(plane.second[1, 1]) == pytest.approx(7_744_722, abs=1)
    assert float(plane.centre[1]) == pytest.approx(86.107, abs=0.0005)


def test_a_t_a_t_with_a_bore_and_a_channel():
    # McLean, Ex 15-11; 15-12: 200 × 100 on 100 × 100 with ⌀60 in the middle of that; 15-15: two flanges 75 × 12 at
    # ±75 beside a web 12 × 162.
    assert_printed(float(rectangles((0, 4, 6, 2), (2, 0, 2, 4)).plane.second[1, 1]), "57.9", 1.0)
    stem_and_flange = ((-50, 0), (50, 0), (50, 100), (100, 100), (100, 200), (-100, 200), (-100, 100), (-50, 100))
    bored = plane_of(stem_and_flange, circle_loop(60.0, 0.0, 50.0))
    assert float(bored.second[1, 1]) == pytest.approx(77_156_533.6, abs=0.05)
    channel = ChannelSection(162.0, 87.0, 12.0, 12.0, 0.0, 0.0, 0.0, 1.0).plane
    assert float(channel.second[1, 1]) == pytest.approx(14_398_128, abs=0.5)


def test_tubes_by_wall_and_by_corner_radii_agree_with_plain_differences():
    tube = CircularHollowSection(0.0889, 0.005, 1.0).plane
    assert float(tube.second[0, 0]) == pytest.approx(np.pi / 64 * (0.0889**4 - 0.0789**4), rel=1e-14)
    sharp = RectangularHollowSection(0.12, 0.08, 0.005, 0.0, 0.0, 1.0).plane
    assert float(sharp.second[1, 1]) == pytest.approx((0.08 * 0.12**3 - 0.07 * 0.11**3) / 12, rel=1e-14)
