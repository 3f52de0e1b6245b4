"""Pointing: the face, edge or axis under a pixel, of bodies, cuts and copies, however they stand."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from scipy.spatial.transform import Rotation

from app.window.view.camera import Camera
from app.window.view.pointing import pointed_at
from app.window.view.scene import SurfaceStore, scene_of
from core.assembly import Assembly, Cut, DataSheet, Group, KnownAxial, Part
from core.assembly.seat import Anchor
from core.placement import Mirrored, Pose, Ring
from core.shapes import Box, Cylinder

SIZE = (1280.0, 960.0)
TURNS = (0.4, -0.3, 0.9)


def looked_at(assembly, name="iso"):
    scene = scene_of(assembly, SurfaceStore())
    return scene, Camera(np.zeros(3)).looking(name).fitted(scene.fit_points, SIZE, 20)


def at(assembly, point, name="iso"):
    """Return what is pointed at where a point (3,) m of the document is seen."""
    scene, camera = looked_at(assembly, name)
    x, y, _ = camera.project(point, SIZE)
    return pointed_at(assembly, scene, camera, (x, y), SIZE)


def box_assembly(make_solid, **more):
    box = make_solid("box", "box", 1000.0, length_x=0.2, length_y=0.2, length_z=0.2)
    return Assembly("one", (replace(box, **more),))


@pytest.mark.parametrize(
    ("point", "datum"),
    [
        ((0.05, 0.02, 0.2), "face +z"), ((0.1, 0.03, 0.08), "face +x"), ((0.02, -0.1, 0.1), "face −y"),
        ((0.0, -0.1, 0.2), "edge −y +z"), ((0.1, -0.1, 0.1), "edge +x −y"),
    ],
)
def test_faces_and_edges_of_a_box_are_told_apart(make_solid, point, datum):
    assert at(box_assembly(make_solid), point).anchor == Anchor("box", datum)


def test_the_same_places_are_found_on_a_turned_part_in_a_turned_group(make_solid):
    pose = Pose((3.0, -2.0, 1.0), (0.2, 0.3, -0.4))
    assembly = Assembly("t", (Group("g", "g", box_assembly(make_solid, pose=Pose((0.1, 0.2, 0.3), (0.1, 0.0, 0.2))).members, pose),))
    inner = Rotation.from_euler("xyz", (0.1, 0.0, 0.2))
    outer = Rotation.from_euler("xyz", (0.2, 0.3, -0.4))
    inside, outside = np.array([0.1, 0.2, 0.3]), np.array([3.0, -2.0, 1.0])
    spot = outer.apply(inner.apply([0.04, 0.03, 0.2]) + inside) + outside
    found = at(assembly, spot)
    assert found.anchor == Anchor("box", "face +z")
    corners = np.array([[x, y, 0.2] for x in (-0.1, 0.1) for y in (-0.1, 0.1)])
    expected = outer.apply(inner.apply(corners) + inside) + outside
    lit = found.edges.reshape(-1, 3)
    assert all(np.linalg.norm(lit - corner, axis=1).min() < 1e-12 for corner in expected)


def test_the_side_of_a_cylinder_is_its_axis_and_its_end_a_face_with_a_rim(make_solid):
    assembly = Assembly("t", (make_solid("bar", "cylinder", 1000.0, diameter=0.2, length=0.3),))
    side = np.array([0.1 * math.cos(-0.7), 0.1 * math.sin(-0.7), 0.15])
    assert at(assembly, side).anchor == Anchor("bar", "axis z")
    assert at(assembly, (0.02, 0.01, 0.3)).anchor == Anchor("bar", "face +z")
    assert at(assembly, (0.1 * math.cos(-0.7), 0.1 * math.sin(-0.7), 0.3)).anchor == Anchor("bar", "rim +z")


def test_the_lit_axis_runs_through_the_part_and_beyond(make_solid):
    assembly = Assembly("t", (make_solid("bar", "cylinder", 1000.0, (1.0, 0.0, 0.0), diameter=0.2, length=0.3),))
    axis = at(assembly, (1.0 + 0.1 * math.cos(-0.7), 0.1 * math.sin(-0.7), 0.15)).edges[-1]
    assert axis[:, :2] == pytest.approx(np.array([[1.0, 0.0], [1.0, 0.0]]), abs=1e-12)
    assert axis[0, 2] < 0
    assert axis[1, 2] > 0.3


def plate_with_holes(make_solid):
    hole = Cut("hole", "hole", Cylinder(0.06, 0.05), Pose((0.12, 0.0, 0.0)), Ring(4))
    pocket = Cut("pocket", "pocket", Box(0.1, 0.1, 0.02), Pose((0.0, 0.0, 0.03)))
    plate = make_solid("plate", "cylinder", 1000.0, diameter=0.4, length=0.05)
    return Assembly("t", (replace(plate, cuts=(hole, pocket)),))


def test_the_floor_of_a_pocket_and_each_hole_of_a_ring_are_places_of_the_cuts(make_solid):
    assembly = plate_with_holes(make_solid)
    assert at(assembly, (0.01, 0.02, 0.03), "top").anchor == Anchor("pocket", "face −z")
    assert at(assembly, (0.08, 0.06, 0.05), "top").anchor == Anchor("plate", "face +z")
    assert at(assembly, (0.15, 0.0, 0.05), "top").anchor == Anchor("hole", "rim +z")
    assert at(assembly, (-0.15, 0.0, 0.05), "top").anchor == Anchor("hole", "copy 3: rim +z")


def test_the_inside_of_a_bore_is_its_axis(make_solid):
    assembly = plate_with_holes(make_solid)
    # From the isometric look (+x, −y, +z) the far wall of a hole is seen.
    wall = np.array([0.12 + 0.03 * math.cos(2.4), 0.03 * math.sin(2.4), 0.04])
    assert at(assembly, wall).anchor == Anchor("hole", "axis z")


def test_on_a_copy_the_place_is_lit_on_the_first_one(make_solid):
    pin = replace(make_solid("pin", "cylinder", 1000.0, (0.3, 0.0, 0.0), diameter=0.1, length=0.1), copies=Ring(4))
    found = at(Assembly("t", (pin,)), (-0.29, 0.01, 0.1))
    assert found.anchor == Anchor("pin", "face +z")
    assert found.edges.reshape(-1, 3).mean(axis=0) == pytest.approx([0.3, 0.0, 0.1], abs=1e-12)


def test_on_a_mirror_image_the_place_is_that_of_the_body(make_solid):
    box = box_assembly(make_solid, pose=Pose((0.3, 0.0, 0.0)), copies=Mirrored())
    assert at(box, (-0.32, 0.02, 0.2)).anchor == Anchor("box", "face +z")


def test_a_known_part_is_pointed_at_by_its_axis():
    rotor = Part("rotor", "rotor", KnownAxial(2.0, (0.0, 0.0, 0.0), 0.004, 0.1), DataSheet(), Pose((1.0, 2.0, 3.0), TURNS))
    found = at(Assembly("t", (rotor,)), (1.0, 2.0, 3.0))
    assert found.anchor == Anchor("rotor", "axis z")
    way = Rotation.from_euler("xyz", TURNS).apply([0, 0, 1])
    (axis,) = found.edges
    assert np.cross(axis[1] - axis[0], way) == pytest.approx(np.zeros(3), abs=1e-12)


def test_empty_space_and_nameless_surfaces_are_no_places(make_solid):
    assembly = box_assembly(make_solid)
    scene, camera = looked_at(assembly)
    assert pointed_at(assembly, scene, camera, (1.0, 1.0), SIZE) is None
    egg = Assembly("t", (make_solid("egg", "ellipsoid", 1000.0),))
    scene, camera = looked_at(egg)
    assert pointed_at(egg, scene, camera, (SIZE[0] / 2, SIZE[1] / 2), SIZE) is None
