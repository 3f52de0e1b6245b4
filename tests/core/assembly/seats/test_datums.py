"""The named places of shapes, cuts and meshes: where they are, and that their names outlast a change of size."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation
from strategies import LENGTHS, mesh_body

from core.assembly import Cut, DataSheet, Group, KnownAxial, KnownTensor, MeshBody, Part, ShapeBody
from core.assembly.seats import datum_named, datums_of
from core.assembly.seats.datums import surface_datums
from core.assembly.seats.regions import regions_of
from core.facets import Facets
from core.material import ByDensity, NotSet
from core.mesh import MeshAsset
from core.mesh.stl_writing import stl_of_triangles
from core.mesh.weld import weld_exactly
from core.placement import Pose, Ring
from core.shapes import SHAPES, Box, Cylinder, Extruded, Frustum, Outline, OutlinedShape, RegularPrism, Torus, Tube

FACETS = Path(__file__).resolve().parents[3] / "facets"


def part(shape, **more):
    return Part("p", "part", ShapeBody(shape), ByDensity(2700.0), **more)


def place(line, name):
    found = datum_named(line, name)
    assert found is not None, (name, [datum.name for datum in datums_of(line)])
    return found.point.tolist(), found.direction.tolist()


def names(line):
    return [datum.name for datum in datums_of(line)]


@given(LENGTHS, LENGTHS, LENGTHS)
def test_a_box_has_six_faces_twelve_edges_and_the_axes_of_its_frame(x, y, z):
    line = part(Box(x, y, z))
    assert sorted(names(line)) == sorted([
        *(f"face {sign}{letter}" for sign in "+−" for letter in "xyz"),
        *(f"edge {a}{first} {b}{second}" for first, second in ("xy", "xz", "yz") for a in "+−" for b in "+−"),
        "axis x", "axis y", "axis z", "origin", "centre of mass",
    ])
    point, direction = place(line, "face +x")
    assert point == pytest.approx([x / 2, 0, z / 2], rel=1e-12, abs=1e-12 * max(x, y, z))
    assert direction == [1, 0, 0]
    point, direction = place(line, "edge +x −y")
    assert point == pytest.approx([x / 2, -y / 2, z / 2], rel=1e-12)
    assert direction == [0, 0, 1]


@given(LENGTHS, st.floats(0.05, 0.95), LENGTHS)
def test_a_tube_has_one_rim_at_each_end_and_its_own_axis(outer, share, length):
    line = part(Tube(outer, outer * share, length))
    assert set(names(line)) == {
        "face +z", "face −z", "rim +z", "rim −z", "axis z", "axis x", "axis y", "origin", "centre of mass",
    }
    assert place(line, "rim +z") == (pytest.approx([0, 0, length], abs=1e-12 * max(outer, length)), [0, 0, 1])
    assert place(line, "face −z") == (pytest.approx([0, 0, 0], abs=1e-12 * max(outer, length)), [0, 0, -1])
    assert place(line, "axis z") == ([0, 0, 0], [0, 0, 1])


@pytest.mark.parametrize("key", sorted(SHAPES))
def test_the_places_of_every_shape_keep_their_names_where_they_are_when_it_grows(key):
    shape = SHAPES[key].of({})
    if not isinstance(shape, OutlinedShape):
        lengths = [one.name for one in shape.dimensions if one.kind == "length"]
        grown = shape.resized({name: 1.25 * shape.single(name) for name in lengths})
        old, new = (surface_datums(ShapeBody(each)) for each in (shape, grown))
        size = np.ptp(old.facets.points, axis=0).max(initial=1.0)
        found = {datum.name: datum for datum in new.datums}
        assert set(found) == {datum.name for datum in old.datums}
        for datum in old.datums:
            assert found[datum.name].point == pytest.approx(1.25 * datum.point, abs=1e-9 * size), datum.name
            assert found[datum.name].direction == pytest.approx(datum.direction, abs=1e-9), datum.name


@pytest.mark.parametrize("key", sorted(SHAPES))
def test_names_are_all_different_directions_unit_and_frames_turns(key):
    found = datums_of(part(SHAPES[key].of({})) if SHAPES[key].measure == "volume" else Part("p", "p", ShapeBody(SHAPES[key].of({}))))
    assert len({datum.name for datum in found}) == len(found)
    for datum in found:
        turn = datum.frame.turn
        assert turn.T @ turn == pytest.approx(np.eye(3), abs=1e-14)
        assert np.linalg.det(turn) == pytest.approx(1, rel=1e-14)
        assert (turn[:, 2] == datum.direction).all()


def test_a_slanted_side_of_a_prism_lies_where_geometry_says():
    line = part(RegularPrism(6, 0.2, 0.1))
    slanted = [datum for datum in datums_of(line) if datum.name.startswith("slanted face")]
    assert len(slanted) == 4
    for datum in slanted:
        apothem = math.hypot(*datum.point[:2])
        assert datum.direction == pytest.approx([*(datum.point[:2] / apothem), 0], abs=1e-12)


def test_the_largest_of_several_rounds_and_all_coaxial_ones_share_the_axis():
    line = part(Frustum(0.2, 0.1, 0.3))
    datum = datum_named(line, "axis z")
    # Every facet of the cone, none of the two ends.
    assert len(datum.facets) == 96


def test_a_round_away_from_the_frame_has_an_axis_of_its_own():
    """A cylinder of 60 mm along y through (0.1, 0.2, 0.3), as facets turned by an independent rotation."""
    bar = Cylinder(0.06, 0.2).facets(64)
    turn = Rotation.from_euler("x", -90, degrees=True).as_matrix()
    found = regions_of(Facets(*weld_exactly(bar.triangles @ turn.T + (0.1, 0.2, 0.3))))
    (axis,) = [region for region in found.regions if not region.is_plane]
    assert axis.direction.tolist() == [0, 1, 0]
    assert axis.point == pytest.approx([0.1, 0.3, 0.3], rel=1e-12)
    rims = sorted(border.point[1] for border in found.borders)
    assert rims == pytest.approx([0.2, 0.4], rel=1e-12)


@pytest.mark.parametrize("shape", [Frustum(0.2, 0.08, 0.15), Torus(0.3, 0.05), Cylinder(0.1, 0.2)])
def test_the_axis_of_a_turned_surface_is_found_wherever_it_lies(shape):
    turn = Rotation.from_rotvec([0.7, -0.4, 1.1])
    facets = shape.facets(60)
    found = regions_of(Facets(facets.points @ turn.as_matrix().T + (3.0, -2.0, 5.0), facets.corners))
    axis = next(region for region in found.regions if not region.is_plane)
    expected = turn.apply([0, 0, 1])
    assert abs(axis.direction @ expected) == pytest.approx(1, rel=1e-12)
    assert np.cross(axis.point - (3.0, -2.0, 5.0), expected) == pytest.approx(np.zeros(3), abs=1e-9)


def test_an_ellipsoid_has_no_axis_but_those_of_its_frame():
    assert names(part(SHAPES["ellipsoid"].of({}))) == ["axis z", "axis x", "axis y", "origin", "centre of mass"]


def test_a_flat_that_runs_tangent_into_roundings_is_a_face():
    section = part(SHAPES["rectangular hollow section"].of({}))
    assert {"face +x", "face +x (2)", "face −y", "face +z"} <= set(names(section))


def test_the_floor_of_a_pocket_points_out_of_the_material():
    pocket = Cut("c", "pocket", Box(0.04, 0.02, 0.03), Pose((0.05, 0.01, 0.02), (0.0, 0.0, math.pi / 2)))
    assert place(pocket, "face −z") == ([0.05, 0.01, 0.02], [0, 0, 1])
    point, direction = place(pocket, "edge +x +y")
    assert point == pytest.approx([0.04, 0.03, 0.035], rel=1e-12)
    assert direction == pytest.approx([0, 0, 1], abs=1e-15)


def test_of_a_ring_of_holes_the_first_one_counts():
    ring = Ring(6, start=math.pi / 2)
    hole = Cut("c", "hole", Cylinder(0.01, 0.03), Pose((0.06, 0.0, 0.0)), ring)
    assert place(hole, "axis z")[0] == pytest.approx([0, 0.06, 0], abs=1e-15)


def test_a_known_part_and_a_group_have_their_frame_only():
    frame = ["axis z", "axis x", "axis y", "origin"]
    axial = Part("k", "rotor", KnownAxial(2.0, (0.01, 0.02, 0.03), 0.004, 0.1), DataSheet())
    tensor = Part("k", "rotor", KnownTensor(2.0, (0.01, 0.02, 0.03), (1e-2, 1e-2, 1e-2, 0, 0, 0)), DataSheet())
    for known in (axial, tensor):
        assert names(known) == [*frame, "centre of mass"]
        assert place(known, "centre of mass")[0] == [0.01, 0.02, 0.03]
    assert names(Group("g", "group", (axial,))) == frame


def test_a_part_without_a_mass_has_the_centre_of_its_volume():
    assert place(part(Cylinder(0.1, 0.3)), "centre of mass")[0] == pytest.approx([0, 0, 0.15])
    assert place(Part("p", "p", ShapeBody(Cylinder(0.1, 0.3)), NotSet()), "centre of mass")[0] == pytest.approx([0, 0, 0.15])


def test_a_mesh_offers_its_planes_and_rounds_in_metres():
    triangles = Cylinder(60.0, 200.0).facets(48).triangles + np.array([100.0, 0.0, 0.0])
    asset = MeshAsset.of_bytes(stl_of_triangles(triangles.astype(np.float32), "bar"), "bar.stl")
    line = Part("m", "bar", MeshBody(asset, 1e-3), ByDensity(7850.0))
    assert place(line, "face +z") == (pytest.approx([0.1, 0, 0.2], abs=1e-8), [0, 0, 1])
    assert place(line, "round axis z") == (pytest.approx([0.1, 0, 0.1], abs=1e-8), [0, 0, 1])
    assert place(line, "rim −z") == (pytest.approx([0.1, 0, 0], abs=1e-8), [0, 0, -1])


def test_the_places_of_a_mesh_follow_its_unit():
    for unit in (1e-3, 0.0254):
        line = Part("m", "wedge", mesh_body((10, 20, 30), "wedge.stl", unit), NotSet())
        # The face at z = 0 is a right triangle: its centroid lies at a third of its legs.
        assert place(line, "face −z") == (pytest.approx([10 / 3 * unit, 20 / 3 * unit, 0], rel=1e-6, abs=1e-9), [0, 0, -1])


def test_a_tessellated_flange_offers_its_axis_and_those_of_its_six_bolt_holes():
    asset = MeshAsset.read(FACETS / "flange_coarse.stl")
    line = Part("m", "flange", MeshBody(asset, 1e-3), NotSet())
    holes = [datum for datum in datums_of(line) if datum.name.startswith("round axis z")]
    assert len(holes) == 6
    assert all(datum.direction.tolist() == [0, 0, 1] for datum in holes)
    across = np.array([datum.point[:2] for datum in holes])
    radii = np.hypot(*across.T)
    assert radii == pytest.approx(radii.mean(), rel=1e-5)
    angles = np.sort(np.arctan2(across[:, 1], across[:, 0]))
    assert np.diff(angles) == pytest.approx(math.pi / 3, rel=1e-5)


@pytest.mark.parametrize("steps", [24, 36, 48, 50, 60, 90])
def test_a_torus_is_one_round_however_it_is_cut_into_facets(steps):
    """With a multiple of four steps around the section, bands at top and bottom are plane rings of facets."""
    for shape in (Torus(0.3, 0.05), Torus(0.3, 0.25)):
        (region,) = regions_of(shape.facets(steps)).regions
        assert not region.is_plane
        assert region.direction.tolist() == [0, 0, 1]
        assert len(region.facets) == len(shape.facets(steps).corners)


def test_a_shallow_bevel_is_a_face_and_two_of_them_are_no_round():
    """A bar of 100 × 20 mm with a roof of slopes of 15° and 5 mm, extruded by 0.2 m."""
    rise = 0.005 * math.tan(math.radians(15))
    corners = [(-0.05, 0.0), (0.05, 0.0), (0.05, 0.02), (0.045, 0.02 + rise), (-0.045, 0.02 + rise), (-0.05, 0.02)]
    line = part(Extruded.of({"length": 0.2}, Outline.of([(x, y, 0.0, 0.0) for x, y in corners])))
    assert {"slanted face", "slanted face (2)", "face +y", "face −y", "face +x", "face −x"} <= set(names(line))
    assert not [name for name in names(line) if "round" in name]


@given(st.integers(0, 2**32 - 1), st.sampled_from([1, 2, 3, 5, 12, 60]), st.sampled_from(["soup", "grid", "flat", "folded"]))
@settings(max_examples=60)
def test_any_triangles_give_some_places_or_none_with_names_that_differ(seed, count, kind):
    draw = np.random.default_rng(seed)
    triangles = draw.normal(size=(count, 3, 3))
    if kind == "grid":
        triangles = draw.integers(0, 3, size=(count, 3, 3)).astype(float)
    elif kind == "flat":
        triangles[:, :, 2] = 0.5
    elif kind == "folded":
        triangles = np.concatenate([triangles, triangles[:, ::-1]])
    asset = MeshAsset.of_bytes(stl_of_triangles(triangles.astype(np.float32), "any"), "any.stl")
    found = surface_datums(MeshBody(asset, 1e-3)).datums
    assert len({datum.name for datum in found}) == len(found)
    for datum in found:
        assert np.linalg.norm(datum.direction) == pytest.approx(1, rel=1e-12)
        assert np.isfinite(datum.point).all()
        assert datum.frame.turn.T @ datum.frame.turn == pytest.approx(np.eye(3), abs=1e-12)
