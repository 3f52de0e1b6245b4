"""Every cut against the boolean library's own difference of finely faceted solids, integrated by an independent route."""

from __future__ import annotations

import itertools

import manifold3d
import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from oracles import assert_same_body, moments_of_facets
from strategies import ANGLES

from core.assembly import Cut, Part, ShapeBody
from core.errors import EditRefused
from core.facets import Facets
from core.material import NotSet
from core.placement import Mirrored, Pose, Ring, Row, Several
from core.shapes import Box, Cone, Cylinder, Frustum, RegularPrism, Sphere, Torus, Tube, Wedge

STEPS = 480
# The facets of a full circle in STEPS steps fall short of its area by 2π²/(3·STEPS²) = 2.9e-5, of a ball's volume by
# about twice that, and of second moments by about twice those.
FACETED = 2e-4
FLAT = 1e-11

SIZES = st.floats(0.02, 0.1)
PLACES = st.tuples(*[st.floats(-0.04, 0.04)] * 3)
TURNS = st.one_of(
    st.just((0.0, 0.0, 0.0)), st.just((np.pi, 0.0, 0.0)), st.just((-np.pi / 2, 0.0, 0.0)), st.tuples(ANGLES, ANGLES, ANGLES)
)
COPIES = st.one_of(
    st.just(Several(1)), st.builds(Ring, st.integers(2, 5)), st.builds(Row, st.integers(2, 4), PLACES),
    st.just(Mirrored((0.0, 0.0, 0.0), (1.0, 0.3, 0.0))),
)
FLAT_SHAPES = st.one_of(
    st.builds(Box, SIZES, SIZES, SIZES), st.builds(RegularPrism, st.integers(3, 8), SIZES, SIZES),
)
ROUND_SHAPES = st.one_of(
    st.builds(Cylinder, SIZES, SIZES), st.builds(lambda d, share, length: Tube(d, share * d, length), SIZES, st.floats(0.1, 0.8), SIZES),
    st.builds(Cone, SIZES, SIZES), st.builds(Frustum, SIZES, SIZES, SIZES),
)


def cuts_of(shapes, copies=COPIES):
    return st.lists(st.builds(lambda shape, at, turns, copy: ("", shape, Pose(at, turns), copy), shapes, PLACES, TURNS, copies), min_size=1, max_size=2)


def part_with(body, drawn):
    cuts = tuple(Cut(str(i), f"cut {i}", shape, pose, copies) for i, (_, shape, pose, copies) in enumerate(drawn))
    return Part("p", "p", ShapeBody(body), NotSet(), cuts=cuts)


def solid_of(facets):
    return manifold3d.Manifold(manifold3d.Mesh64(np.array(facets.points), np.array(facets.corners, dtype=np.uint64)))


def difference(part, steps):
    """Return what the boolean library leaves of the body, integrated by the quadrature of the oracles."""
    solid = solid_of(part.body.shape.facets(steps))
    for cut in part.cuts:
        for turn, shift in zip(cut.standing.turn, cut.standing.shift, strict=True):
            matrix = np.concatenate([turn, shift[:, None]], axis=1)
            solid = solid - solid_of(cut.shape.facets(steps)).transform(matrix)
    mesh = solid.to_mesh64()
    return moments_of_facets(Facets(mesh.vert_properties[:, :3], mesh.tri_verts.astype(np.int64)))


def left_of(part):
    """Return what is left of a part; draws that take nothing or leave nothing are refused, and drawn again."""
    try:
        return part.solid
    except EditRefused:
        assume(False)  # hypothesis' own signature


@settings(deadline=None, max_examples=60)
@given(FLAT_SHAPES, cuts_of(FLAT_SHAPES))
def test_flat_sided_cuts_agree_to_round_off(body, drawn):
    part = part_with(body, drawn)
    left = left_of(part)
    assume(left.mass > 0.05 * part.body.solid.mass)
    assert_same_body(left, difference(part, 8), rel=FLAT, size=0.1)


@settings(deadline=None, max_examples=40)
@given(st.one_of(FLAT_SHAPES, ROUND_SHAPES), cuts_of(ROUND_SHAPES))
def test_round_cuts_agree_to_the_facets_of_the_solids(body, drawn):
    part = part_with(body, drawn)
    left = left_of(part)
    assume(left.mass > 0.05 * part.body.solid.mass)
    # What is left may be a small part of the body, whose facets fall short by its size.
    scale = float(part.body.solid.mass / left.mass)
    assert_same_body(left, difference(part, STEPS), rel=FACETED * scale, size=0.1)


@pytest.mark.parametrize(
    ("body", "shape", "pose"),
    [
        (Sphere(0.1), Cylinder(0.03, 0.2), Pose((0.02, 0.0, -0.1))),
        (Torus(0.1, 0.04), Box(0.05, 0.05, 0.05), Pose((0.05, 0.0, -0.025))),
        (Sphere(0.1), Sphere(0.06), Pose((0.05, 0.0, 0.0))),
        (Wedge.of({}), Cylinder(0.02, 0.2), Pose((0.02, 0.01, -0.05))),
        (Cone(0.1, 0.1), Cylinder(0.02, 0.2), Pose((0.0, -0.1, 0.03), (-np.pi / 2, 0.0, 0.0))),
    ],
    ids=lambda value: getattr(value, "title", ""),
)
def test_doubly_curved_bodies_agree_better_the_finer_the_facets(body, shape, pose):
    part = part_with(body, [("", shape, pose, Several(1))])
    errors = [abs(float(difference(part, steps).mass / part.solid.mass) - 1) for steps in (48, 96, 192)]
    # Quartered with every doubling, as inscribed facets are; a wrong answer would leave a constant behind.
    assert errors[2] < 1e-3
    for coarse, fine in itertools.pairwise(errors):
        assert fine < 0.27 * coarse or fine < FLAT
