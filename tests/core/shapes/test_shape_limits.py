"""What makes no body is refused in one sentence with the shape, both lengths and a way out; its limits are allowed."""

from __future__ import annotations

import numpy as np
import pytest
from oracles import directed_edges_cancel, moments_of_facets

from core.errors import ShapeError
from core.shapes import SHAPES, HollowFrustum, RegularPrism, SphericalCap, SpokedWheel, ToothedWheel, Torus

REFUSED = [
    (
        "hollow frustum", {"base_bore": 0.12},
        ("the bore 120 mm at the base is wider than the base diameter 100 mm. Make the bore smaller, or the diameter "
        "larger."),
    ),
    (
        "hollow frustum", {"top_diameter": 0.03},
        "the bore 40 mm at the top is wider than the top diameter 30 mm. Make the bore smaller, or the diameter larger.",
    ),
    (
        "hollow frustum", {"base_bore": 0.1, "top_bore": 0.06},
        "the bores 100 mm and 60 mm leave no wall. Make the bore smaller, or the diameter larger.",
    ),
    (
        "hollow sphere", {"inner_diameter": 0.06},
        ("the inner diameter 60 mm leaves no wall within the outer diameter 60 mm. Make the inner diameter smaller, or "
        "the outer one larger."),
    ),
    (
        "spherical cap", {"height": 0.11},
        "the height 110 mm is more than the sphere's diameter 100 mm. Make the cap lower, or the sphere larger.",
    ),
    (
        "domed shell", {"height": 0.11},
        "the height 110 mm is more than the sphere's diameter 100 mm. Make the cap lower, or the sphere larger.",
    ),
    (
        "torus", {"section_diameter": 0.11},
        ("a section of 110 mm on a mean diameter of 100 mm passes through itself. Make the section smaller, or the mean "
        "diameter larger."),
    ),
    (
        "regular prism", {"sides": 2},
        "the number of sides has to be a whole number from 3 to 1000; read 2. Give a whole number within these limits.",
    ),
    (
        "regular prism", {"sides": 4.5},
        "the number of sides has to be a whole number from 3 to 1000; read 4.5. Give a whole number within these limits.",
    ),
    (
        "spoked wheel", {"spokes": 1},
        "the number of spokes has to be a whole number from 2 to 500; read 1. Give a whole number within these limits.",
    ),
    (
        "spoked wheel", {"bore": 0.08},
        "the bore 80 mm is not less than the outer diameter of the hub 80 mm. Make the one smaller or the other larger.",
    ),
    (
        "spoked wheel", {"rim_inner_diameter": 0.41},
        ("the inner diameter of the rim 410 mm is not less than the outer diameter of the rim 400 mm. Make the one smaller "
        "or the other larger."),
    ),
    (
        "spoked wheel", {"spoke_width": 0.055},
        "a spoke 55 mm along the axis is wider than the hub or the rim (50 mm). Make the spokes narrower.",
    ),
    (
        "spoked wheel", {"spokes": 24},
        ("spokes 20 mm thick pass through each other at the hub, where there is room for 10.5322 mm. Make them thinner or "
        "fewer, or the hub larger."),
    ),
    (
        "toothed wheel", {"teeth": 5},
        "the number of teeth has to be a whole number from 6 to 2000; read 5. Give a whole number within these limits.",
    ),
    (
        "toothed wheel", {"pressure_angle": np.radians(40)},
        "the pressure angle has to be from 10° to 30°; read 40°. Give an angle within these limits.",
    ),
    (
        "toothed wheel", {"bore": 0.0645},
        "the bore 64.5 mm leaves nothing within the root circle 64.5 mm. Make the bore smaller, or the wheel larger.",
    ),
    (
        "thin disc", {"bore": 0.2},
        "the bore 200 mm leaves nothing of the diameter 200 mm. Make the bore smaller, or the disc larger.",
    ),
]


@pytest.mark.parametrize(("key", "changed", "sentence"), REFUSED)
def test_what_makes_no_body_is_refused_in_one_sentence(key, changed, sentence):
    with pytest.raises(ShapeError) as refusal:
        SHAPES[key].of(changed)
    assert str(refusal.value) == f"{SHAPES[key].title}: {sentence}"


def test_the_refusal_shows_the_shape_of_a_batch_that_makes_no_body():
    with pytest.raises(ShapeError, match="a section of 90 mm on a mean diameter of 80 mm passes through itself"):
        Torus(np.array([0.1, 0.08]), np.array([0.1, 0.09]))


AT_THE_LIMIT = {
    "the hole of a torus closes to a point": Torus(0.1, 0.1),
    "a cap is the whole ball": SphericalCap(0.1, 0.1),
    "a cap is a thin lens": SphericalCap(0.1, 1e-6),
    "the wall of a frustum runs out at the top": HollowFrustum(0.1, 0.06, 0.08, 0.06, 0.08),
    "the wall of a frustum runs out at the base": HollowFrustum(0.1, 0.06, 0.1, 0.04, 0.08),
    "a hollow frustum ends in a tip": HollowFrustum(0.1, 0.0, 0.08, 0.0, 0.08),
    "a hollow frustum has no bore at its base": HollowFrustum(0.1, 0.06, 0.0, 0.04, 0.08),
    "a prism has three sides": RegularPrism(3, 0.05, 0.1),
    "a wheel has two spokes": SpokedWheel(0.4, 0.34, 0.05, 0.08, 0.0, 0.06, 2, 0.03, 0.02),
    "a wheel has six teeth and no bore": ToothedWheel(0.003, 6, np.radians(20), 0.01, 0.0),
    "a wheel has hundreds of teeth": ToothedWheel(0.001, 400, np.radians(20), 0.01, 0.3),
    "teeth are as steep as they can be": ToothedWheel(0.003, 18, np.radians(30), 0.01, 0.0),
}


@pytest.mark.parametrize("shape", AT_THE_LIMIT.values(), ids=AT_THE_LIMIT)
def test_at_its_limits_a_shape_is_drawn_closed_and_near_its_closed_form(shape):
    surface, exact = shape.facets(96), shape.moments()
    assert directed_edges_cancel(surface)
    assert len(np.unique(surface.points.round(13), axis=0)) == len(surface.points)
    drawn = moments_of_facets(surface)
    assert float(drawn.mass) == pytest.approx(float(exact.mass), rel=5e-3)
    np.testing.assert_allclose(np.diagonal(drawn.spread), np.diagonal(exact.spread), rtol=1e-2)


def test_a_wheel_with_two_spokes_has_more_inertia_across_them_than_along():
    about = SpokedWheel(0.4, 0.34, 0.05, 0.08, 0.0, 0.06, 2, 0.03, 0.02).moments().inertia_about_centre
    assert about[1, 1] > about[0, 0]


def test_a_toothed_wheel_reaches_from_its_bore_to_its_tip_circle():
    wheel = ToothedWheel(0.003, 24, np.radians(20), 0.03, 0.02)
    radius = np.hypot(*wheel.facets(48).points[:, :2].T)
    assert radius.min() == pytest.approx(0.01, rel=1e-14)
    assert radius.max() == pytest.approx(0.003 * 26 / 2, rel=1e-14)


def test_a_tooth_is_half_a_pitch_wide_on_the_pitch_circle_and_lies_over_x():
    wheel = ToothedWheel(0.003, 24, np.radians(20), 0.03, 0.02)
    points = wheel.facets(192).points
    radius, angle = np.hypot(*points[:, :2].T).round(9), np.arctan2(points[:, 1], points[:, 0])
    on_tooth = (radius > 0.0345) & (np.abs(angle) < np.pi / 24)
    levels = np.unique(radius[on_tooth])
    ends = [angle[on_tooth & (radius == level)] for level in levels]
    assert np.interp(0.036, levels, [end.max() for end in ends]) == pytest.approx(np.pi / 2 / 24, rel=1e-3)
    assert np.interp(0.036, levels, [end.min() for end in ends]) == pytest.approx(-np.pi / 2 / 24, rel=1e-3)


WANTED = (
    "box, cylinder, tube, cone, frustum, hollow frustum, sphere, hollow sphere, hemisphere, spherical cap, ellipsoid, "
    "torus, regular prism, pyramid, wedge, tetrahedron, spoked wheel, toothed wheel, thin rod, thin ring, thin disc, "
    "thin sheet, cylindrical shell, conical shell, spherical shell, domed shell, toroidal shell, point mass"
)


def test_the_whole_family_is_there():
    assert set(WANTED.split(", ")) <= set(SHAPES)


@pytest.mark.parametrize("key", sorted(SHAPES))
def test_a_shape_says_what_it_idealises_in_whole_sentences_and_starts_within_its_limits(key):
    family = SHAPES[key]
    assert family.key == key
    assert not family.note or (family.note[0].isupper() and family.note.endswith("."))
    for one in family.dimensions:
        assert one.least is None or one.default >= one.least
        assert one.most is None or one.default <= one.most


def test_no_two_shapes_have_the_same_title():
    titles = [family.title for family in SHAPES.values()]
    assert len(set(titles)) == len(titles)
