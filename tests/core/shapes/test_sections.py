"""Section families: limits, symmetry, batches, and the sentence for each one that is none."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from oracles import assert_same_body, directed_edges_cancel
from strategies import SECTION_STRATEGIES

from core.errors import ShapeError
from core.shapes import (
    SHAPES,
    Box,
    Cylinder,
    Extruded,
    ISection,
    Outline,
    RectangularHollowSection,
    RoundBar,
    SquareBar,
    SquareHollowSection,
    TaperedISection,
    Tube,
)

every_section = pytest.mark.parametrize("key", sorted(SECTION_STRATEGIES))


@every_section
@settings(max_examples=25)
@given(data=st.data())
def test_any_section_is_drawn_closed_and_its_outline_passes_the_checks_of_one(key, data):
    section = data.draw(SECTION_STRATEGIES[key])
    assert directed_edges_cancel(section.facets(24))
    # The loops as fine polygons make an outline that shapely finds sound.
    fine = Outline.of(*(loop.line(480) for loop in section.loops()))
    expected = Extruded(fine, section.single("length")).moments()
    assert_same_body(section.moments(), expected, rel=2e-3)


@every_section
def test_a_batch_of_any_dimension_is_the_sections_one_by_one(key):
    section = SHAPES[key].of({})
    for dimension in section.dimensions:
        values = section.single(dimension.name) * np.array([1.0, 0.999, 0.998])
        batch = section.moments() if not values[0] else type(section).of({**section.values(), dimension.name: values})
        if not values[0]:
            continue
        moments = batch.moments()
        for k, value in enumerate(values):
            one = section.resized({dimension.name: value}).moments()
            assert float(moments.mass[k]) == pytest.approx(float(one.mass), rel=1e-14)
            np.testing.assert_allclose(moments.spread[k], one.spread, rtol=0, atol=1e-14 * np.abs(one.spread).max())


def test_without_roundings_the_sections_are_boxes_and_tubes():
    assert_same_body(
        SquareBar(0.02, 0.0, 0.5).moments(), Box(0.02, 0.02, 0.5).moments(), rel=1e-14
    )
    assert_same_body(RoundBar(0.02, 0.5).moments(), Cylinder(0.02, 0.5).moments(), rel=1e-14)
    # Roundings that meet make a square bar round, and a square tube a round one.
    assert_same_body(SquareBar(0.02, 0.01, 0.5).moments(), Cylinder(0.02, 0.5).moments(), rel=1e-14)
    assert_same_body(
        SquareHollowSection(0.05, 0.005, 0.025, 0.02, 0.5).moments(), Tube(0.05, 0.04, 0.5).moments(), rel=1e-13
    )


def test_a_taper_of_nothing_is_the_section_with_parallel_flanges():
    tapered = TaperedISection(0.1, 0.05, 0.004, 0.006, 0.007, 0.0, 0.0, 0.5).moments()
    assert_same_body(tapered, ISection(0.1, 0.05, 0.004, 0.006, 0.007, 0.5).moments(), rel=1e-14)


@pytest.mark.parametrize("key", ["I section", "tapered I section", "rectangular hollow section", "flat bar"])
def test_a_section_with_two_planes_of_symmetry_is_centred_exactly(key):
    moments = SHAPES[key].of({}).moments()
    assert moments.centre[:2].tolist() == [0.0, 0.0]
    assert moments.spread[0, 1] == 0.0


@pytest.mark.parametrize(
    ("key", "values", "sentence"),
    [
        (
            "I section", {"web": 0.06},
            ("I section: the web thickness 60 mm is as wide as the flanges of 55 mm, or wider. "
            "Make the web thinner, or the flanges wider."),
        ),
        (
            "I section", {"flange": 0.05},
            ("I section: two flanges of 50 mm leave no web in a height of 100 mm. "
            "Make the flanges thinner, or the section higher."),
        ),
        (
            "I section", {"root_radius": 0.03},
            "I section: the radii 0 mm and 30 mm do not fit on an edge of 25.45 mm. Make a radius smaller.",
        ),
        (
            "channel section", {"slope": 0.35},
            ("channel section: with this slope nothing is left of a flange of 8.5 mm at its tip. "
            "Make the slope smaller."),
        ),
        (
            "angle section", {"thickness": 0.05},
            ("angle section: the thickness 50 mm leaves nothing of a leg of 50 mm. "
            "Make the thickness smaller, or the legs longer."),
        ),
        (
            "angle section", {"toe_radius": 0.006},
            "angle section: the radii 0 mm and 6 mm do not fit on an edge of 5 mm. Make a radius smaller.",
        ),
        (
            "T section", {"flange": 0.05},
            ("T section: a flange of 50 mm leaves no stem in a height of 50 mm. "
            "Make the flange thinner, or the section higher."),
        ),
        (
            "T section", {"web": 0.05},
            ("T section: the stem thickness 50 mm is as wide as the flange of 50 mm, or wider. "
            "Make the stem thinner, or the flange wider."),
        ),
        (
            "circular hollow section", {"wall": 0.03},
            ("circular hollow section: a wall of 30 mm leaves nothing hollow in a width of 48.3 mm. "
            "Make the wall thinner, or take a solid bar."),
        ),
        (
            "rectangular hollow section", {"outer_radius": 0.021},
            ("rectangular hollow section: two outer corner radii of 21 mm do not fit on a width of 40 mm. "
            "Make the outer corner radius smaller."),
        ),
        (
            "square hollow section", {"inner_radius": 0.022},
            ("square hollow section: two inner corner radii of 22 mm do not fit on an inner width of 42 mm. "
            "Make the inner corner radius smaller."),
        ),
        (
            "square hollow section", {"outer_radius": 0.02, "inner_radius": 0.0},
            ("square hollow section: with corner radii of 20 mm outside and 0 mm inside nothing is left of a wall of "
            "4 mm at the corners. Make the inner corner radius larger, or the outer one smaller."),
        ),
        (
            "flat bar", {"corner_radius": 0.005},
            "flat bar: two corner radii of 5 mm do not fit on a side of 8 mm. Make the corner radius smaller.",
        ),
        (
            "square bar", {"corner_radius": 0.011},
            "square bar: two corner radii of 11 mm do not fit on a side of 20 mm. Make the corner radius smaller.",
        ),
    ],
)  # fmt: skip
def test_dimensions_that_leave_no_section_are_refused(key, values, sentence):
    with pytest.raises(ShapeError) as refusal:
        SHAPES[key].of(values)
    assert str(refusal.value) == sentence


def test_the_corners_of_a_hole_just_inside_the_rounding_are_taken():
    wall = 0.004
    limit = wall * np.sqrt(2) / (np.sqrt(2) - 1)
    just = RectangularHollowSection(0.08, 0.05, wall, 0.999 * limit, 0.0, 0.5)
    assert directed_edges_cancel(just.facets(96))
    with pytest.raises(ShapeError, match="at the corners"):
        RectangularHollowSection(0.08, 0.05, wall, 1.001 * limit, 0.0, 0.5)
