"""Hypothesis strategies that every property test draws from: bodies that can exist, placements, shapes."""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from core.moments import Moments
from core.placement import Placement
from core.shapes import SHAPES, Box, Cone, Cylinder, Frustum, Shape, Sphere, Tube

# Sizes of machine parts in m, masses in kg; every drawn body is about a metre across at most.
LENGTHS = st.floats(1e-3, 1.0)
MASSES = st.floats(1e-3, 1e3)
ANGLES = st.floats(-np.pi, np.pi)
COORDINATES = st.floats(-1.0, 1.0)

points = st.tuples(COORDINATES, COORDINATES, COORDINATES).map(np.array)
directions = points.filter(lambda vector: np.linalg.norm(vector) > 1e-2)


@st.composite
def rotations(draw: st.DrawFn) -> np.ndarray:
    """A rotation matrix (3, 3) from a unit quaternion (Euler–Rodrigues parameters)."""
    numbers = np.array(draw(st.tuples(*[COORDINATES] * 4).filter(lambda q: np.linalg.norm(q) > 1e-2)))
    w, x, y, z = numbers / np.linalg.norm(numbers)
    return np.array([
        [1 - 2 * (y * y + z * z), 2 * (x * y - w * z), 2 * (x * z + w * y)],
        [2 * (x * y + w * z), 1 - 2 * (x * x + z * z), 2 * (y * z - w * x)],
        [2 * (x * z - w * y), 2 * (y * z + w * x), 1 - 2 * (x * x + y * y)],
    ])


@st.composite
def placements(draw: st.DrawFn) -> Placement:
    """A rigid placement without a mirror, shift within a metre."""
    return Placement(draw(rotations()), draw(points))


@st.composite
def mirrored_placements(draw: st.DrawFn) -> Placement:
    """A placement that turns left into right."""
    return Placement(draw(rotations()) @ np.diag([1.0, 1.0, -1.0]), draw(points))


@st.composite
def realisable_moments(draw: st.DrawFn) -> Moments:
    """The moments of a single body that can exist; flat bodies, rods and points among them."""
    mass = draw(MASSES)
    radii = np.array(draw(st.tuples(*[st.one_of(st.just(0.0), LENGTHS)] * 3)))
    turn = draw(rotations())
    return Moments(mass, draw(points), mass * turn @ np.diag(radii**2) @ turn.T)


@st.composite
def tubes(draw: st.DrawFn) -> Tube:
    outer = draw(LENGTHS)
    return Tube(outer, outer * draw(st.floats(0.0, 0.99)), draw(LENGTHS))


boxes = st.builds(Box, LENGTHS, LENGTHS, LENGTHS)
cylinders = st.builds(Cylinder, LENGTHS, LENGTHS)
cones = st.builds(Cone, LENGTHS, LENGTHS)
frusta = st.builds(Frustum, LENGTHS, st.one_of(st.just(0.0), LENGTHS), LENGTHS)
spheres = st.builds(Sphere, LENGTHS)
solids: st.SearchStrategy[Shape] = st.one_of(boxes, cylinders, tubes(), cones, frusta, spheres)

# Every registered shape, whoever added it, with the dimensions the gallery starts from.
registered_shapes: st.SearchStrategy[Shape] = st.sampled_from(sorted(SHAPES)).map(lambda key: SHAPES[key].of({}))
