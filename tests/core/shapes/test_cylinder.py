"""Bar and tube against adaptive quadrature, and their limits."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from oracles import assert_same_body, revolved_by_quadrature
from strategies import LENGTHS, cylinders, tubes

from core.errors import ShapeError
from core.shapes import Cylinder, Tube


@given(cylinders)
def test_a_cylinder_has_the_moments_of_its_slices(bar):
    radius, length = bar.single("diameter") / 2, bar.single("length")
    assert_same_body(bar.moments(), revolved_by_quadrature(lambda _z: radius, 0, length), rel=1e-12)


@given(tubes())
def test_a_tube_is_the_bar_with_its_bore_cut_out(tube):
    outer, bore, length = tube.values().values()
    bar = Cylinder(outer, length).moments()
    expected = bar - Cylinder(bore, length).moments() if bore > 0 else bar
    # A thin wall is the small difference of two bars: the cut loses what the closed form keeps.
    lost = float(bar.mass / expected.mass)
    assert_same_body(tube.moments(), expected, rel=1e-13 * lost, size=max(outer, length))


@given(LENGTHS, LENGTHS)
def test_a_tube_without_a_bore_is_the_cylinder(diameter, length):
    assert_same_body(Tube(diameter, 0.0, length).moments(), Cylinder(diameter, length).moments(), rel=0)
    tube, bar = Tube(diameter, 0.0, length).facets(12), Cylinder(diameter, length).facets(12)
    assert len(tube.corners) == len(bar.corners) == 4 * 12


@given(LENGTHS, LENGTHS)
def test_a_hair_thin_tube_tends_to_the_cylinder_shell(diameter, length):
    wall = 1e-9 * diameter
    moments = Tube(diameter, diameter - 2 * wall, length).moments()
    radius = diameter / 2
    # Thin shell: J = m r² about the axis, m (r²/2 + L²/12) across it; the wall's own share is 1e-9.
    assert float(moments.mass) == pytest.approx(2 * np.pi * radius * length * wall, rel=1e-6)
    axial, across = moments.inertia_about_centre[2, 2], moments.inertia_about_centre[0, 0]
    assert axial == pytest.approx(float(moments.mass) * radius**2, rel=1e-8)
    assert across == pytest.approx(float(moments.mass) * (radius**2 / 2 + length**2 / 12), rel=1e-8)


def test_a_cylinder_as_high_as_its_radius_times_root_three_is_isotropic():
    principal = Cylinder(0.2, 0.1 * 3**0.5).moments().principal
    assert principal.tie == "123"


@pytest.mark.parametrize(
    ("bore", "relation"),
    [(0.042, "42 mm is wider than"), (0.04, "40 mm is as wide as")],
    ids=["wider", "equal"],
)
def test_a_bore_that_leaves_no_wall_is_refused(bore, relation):
    with pytest.raises(ShapeError) as refusal:
        Tube(0.04, bore, 0.1)
    assert str(refusal.value) == (
        f"tube: the bore {relation} the tube's outer diameter 40 mm. Make the bore smaller, or the outer diameter larger."
    )


def test_the_refusal_shows_the_tube_of_a_batch_that_has_no_wall():
    with pytest.raises(ShapeError, match="bore 30 mm is wider than the tube's outer diameter 20 mm"):
        Tube(np.array([0.04, 0.02]), 0.03, 0.1)
