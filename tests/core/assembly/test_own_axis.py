"""A line's own axis laid on a tilted drive axis away from the origin, against SciPy's smallest rotation."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from scipy.spatial.transform import Rotation
from strategies import directions, mesh_body, points, poses, several_copies

from core.assembly import Assembly, Cut, DataSheet, DriveAxis, Group, KnownAxial, KnownTensor, MeshBody, Part, ShapeBody
from core.assembly.own_axis import laid_on_axis, own_axis_of
from core.assembly.placing import standing_of
from core.errors import EditRefused
from core.material import ByDensity, NotSet, Weighed
from core.mesh import MeshAsset
from core.placement import Pose, Ring, Row, Several
from core.shapes import SHAPES

AXIS = DriveAxis("Spindle", (4.0, -3.0, 2.0), (1.0, 2.0, -2.0))
UNIT = np.array([1.0, 2.0, -2.0]) / 3
POINT = np.array([4.0, -3.0, 2.0])


def part(shape="cylinder", pose=Pose(), copies=Several(1), cuts=(), **dimensions) -> Part:
    return Part("part", "part", ShapeBody(SHAPES[shape].of(dimensions)), ByDensity(7850.0), pose, copies, cuts=cuts)


def document(*members) -> Assembly:
    return Assembly("d", members, (AXIS,), "Spindle")


def from_axis(point) -> float:
    lever = np.asarray(point) - POINT
    return float(np.linalg.norm(lever - (lever @ UNIT) * UNIT))


def along(point) -> float:
    return float((np.asarray(point) - POINT) @ UNIT)


@given(poses, several_copies, poses, points, directions)
def test_a_round_part_in_a_turned_group_lands_on_any_axis_by_the_smallest_move(pose, copies, outer, point, direction):
    axis = DriveAxis("Spindle", tuple(point), tuple(direction))
    group = Group("g", "g", (part(pose=pose, copies=copies),), outer, Row(2))
    before = Assembly("d", (group,), (axis,), "Spindle")
    after = laid_on_axis(before, "part", axis)
    was, stands = standing_of(before, "part"), standing_of(after, "part")
    unit = direction / np.linalg.norm(direction)
    np.testing.assert_allclose(np.cross(stands.turn[:, 2], unit), 0, atol=1e-11)
    lever = stands.shift - point
    np.testing.assert_allclose(lever - (lever @ unit) * unit, 0, atol=1e-11)
    assert lever @ unit == pytest.approx((was.shift - point) @ unit, abs=1e-11)
    turned = Rotation.from_matrix(stands.turn @ was.turn.T).magnitude()
    assert turned == pytest.approx(np.arccos(min(abs(was.turn[:, 2] @ unit), 1)), abs=3e-8)
    assert turned <= np.pi / 2 + 1e-9


def test_what_leans_the_other_way_is_laid_opposite_and_not_turned_over():
    before = document(part(pose=Pose((1, 1, 1), (np.pi, 0, 0))))
    stands = standing_of(laid_on_axis(before, "part", AXIS), "part")
    np.testing.assert_allclose(stands.turn[:, 2], UNIT, rtol=0, atol=1e-14)
    over = document(part(pose=Pose((1, 1, 1), (0, 0, 0))))
    np.testing.assert_allclose(standing_of(laid_on_axis(over, "part", AXIS), "part").turn[:, 2], -UNIT, atol=1e-14)


def test_laying_it_again_changes_nothing():
    once = laid_on_axis(document(part(pose=Pose((1, 1, 1), (0.3, 0.2, 0.1)))), "part", AXIS)
    assert laid_on_axis(once, "part", AXIS) is once


def test_a_bore_beside_the_axis_does_not_move_a_turned_part_off_its_axis():
    bore = Cut("bore", "bore", SHAPES["cylinder"].of({"diameter": 0.01, "length": 0.2}), Pose((0.02, 0, -0.05)))
    after = laid_on_axis(document(part(cuts=(bore,))), "part", AXIS)
    assert from_axis(standing_of(after, "part").shift) == pytest.approx(0, abs=1e-14)
    assert own_axis_of(after, "part", AXIS).words == "its axis z"


@pytest.mark.parametrize("shape", ["toothed wheel", "spoked wheel", "square bar"])
def test_a_shape_of_many_folds_has_its_axis_along_z(shape):
    own = own_axis_of(document(part(shape)), "part", AXIS)
    np.testing.assert_allclose(np.abs(own.direction), [0, 0, 1], rtol=0, atol=1e-12)
    np.testing.assert_allclose(own.point[:2], 0, atol=1e-15)


@pytest.mark.parametrize("turns", [(0.1, 0.0, 0.0), (0.0, 1.3, 0.0), (1.5, 0.4, 0.0)])
def test_a_box_is_laid_by_the_principal_axis_that_is_nearest(turns):
    before = document(part("box", Pose((0.5, 0, 0), turns), length_x=0.1, length_y=0.2, length_z=0.4))
    own = own_axis_of(before, "part", AXIS)
    after = laid_on_axis(before, "part", AXIS)
    edges = standing_of(before, "part").turn
    nearest = int(np.abs(edges.T @ UNIT).argmax())
    np.testing.assert_allclose(np.abs(own.direction), np.eye(3)[nearest], rtol=0, atol=1e-14)
    # Ascending moments of a box: about its longest edge the least.
    assert own.words == f"its principal axis {3 - nearest}, through its centre of mass"
    centre = after.table.moments.centre[0]
    assert from_axis(centre) == pytest.approx(0, abs=1e-14)
    assert along(centre) == pytest.approx(along(before.table.moments.centre[0]), abs=1e-14)


def prism_mesh(sides: int, length: float) -> MeshBody:
    """Return a regular prism along z as a mesh in mm, its axis through (100, 50)."""
    facets = SHAPES["cylinder"].of({"diameter": 80.0, "length": length}).facets(sides)
    triangles = (facets.points + np.array([100, 50, 0]))[facets.corners]
    rows = np.zeros(len(triangles), dtype=[("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])
    rows["corners"] = triangles
    data = b"prism".ljust(80) + np.uint32(len(triangles)).tobytes() + rows.tobytes()
    return MeshBody(MeshAsset.of_bytes(data, "prism.stl"), 1e-3)


@pytest.mark.parametrize("length", [20.0, 300.0])
@pytest.mark.parametrize("turns", [(0.2, 0.1, 0), (1.4, 0.3, 0), (0, 1.5, 1)])
def test_a_mesh_of_a_round_part_finds_its_axis_however_it_is_turned(turns, length):
    mesh = replace(part(pose=Pose((1, 0, 0), turns)), body=prism_mesh(24, length))
    after = laid_on_axis(document(mesh), "part", AXIS)
    stands = standing_of(after, "part")
    np.testing.assert_allclose(np.cross(stands.turn[:, 2], UNIT), 0, atol=1e-6)
    for height in (0, length / 1000):
        assert from_axis(stands.apply([0.1, 0.05, height])) == pytest.approx(0, abs=1e-6)


def test_a_known_part_with_one_inertia_is_laid_by_the_axis_that_its_sheet_speaks_of():
    known = KnownAxial(2.0, (0.01, 0, 0.05), 0.003, 0.1)
    after = laid_on_axis(document(replace(part(), body=known, driver=DataSheet())), "part", AXIS)
    assert from_axis(standing_of(after, "part").shift) == pytest.approx(0, abs=1e-14)


def test_a_known_tensor_is_laid_by_the_moment_that_stands_apart():
    known = KnownTensor(2.0, (0.1, 0.2, 0.3), (0.01, 0.05, 0.01, 0, 0, 0))
    own = own_axis_of(document(replace(part(), body=known, driver=DataSheet())), "part", AXIS)
    np.testing.assert_allclose(np.abs(own.direction), [0, 1, 0], rtol=0, atol=1e-14)
    np.testing.assert_array_equal(own.point, [0.1, 0.2, 0.3])
    assert own.words == "its principal axis 3, through its centre of mass"


def test_a_group_is_laid_as_one_by_what_it_holds():
    ring = replace(part(pose=Pose((0.15, 0, 0)), copies=Ring(6), diameter=0.02, length=0.03), key="pins")
    plate = replace(part(diameter=0.4, length=0.02), key="plate")
    group = Group("g", "g", (plate, ring), Pose((1, 2, 3), (0.4, 0.3, 0.2)))
    before = document(Group("outer", "outer", (group,), Pose((0, 0, 5), (0, 1, 0))))
    after = laid_on_axis(before, "g", AXIS)
    assert after.node("plate") is plate
    assert from_axis(standing_of(after, "plate").shift) == pytest.approx(0, abs=1e-12)
    total = after.total
    assert total.inertia_about_axis(POINT, UNIT) == pytest.approx(
        before.total.principal.moments[2], rel=1e-12
    )


def test_a_cut_is_laid_by_its_own_shape():
    bore = Cut("bore", "bore", SHAPES["cylinder"].of({"diameter": 0.01, "length": 0.3}), Pose((0.02, 0.01, 0)))
    axis = DriveAxis("Spindle", (0.0, 0.0, 0.0), (0.0, 0.0, 1.0))
    before = Assembly("d", (part(cuts=(bore,)),), (axis,))
    assert laid_on_axis(before, "bore", axis).cut("bore").pose == Pose()


def test_of_a_ring_the_first_copy_is_laid_and_the_others_follow():
    before = document(part(pose=Pose((0.3, 0, 0)), copies=Ring(4, start=0.5)))
    after = laid_on_axis(before, "part", AXIS)
    assert from_axis(after.table.standing.shift[0]) == pytest.approx(0, abs=1e-13)
    assert after.node("part").copies == before.node("part").copies


def test_a_point_mass_is_only_shifted():
    pose = Pose((3.0, 0, 0), (0.1, 0.2, 0.3))
    before = document(replace(part(pose=pose), body=ShapeBody(SHAPES["point mass"].of({})), driver=Weighed(2.0)))
    after = laid_on_axis(before, "part", AXIS)
    assert after.node("part").pose.turns == pytest.approx((0.1, 0.2, 0.3), rel=1e-12)
    assert from_axis(standing_of(after, "part").shift) == pytest.approx(0, abs=1e-14)


@pytest.mark.parametrize("member", [Group("part", "empty"), Group("part", "g", (replace(part(), key="p", driver=NotSet()),))])
def test_what_has_no_mass_is_refused_in_words(member):
    with pytest.raises(EditRefused, match="no axis of its own") as refused:
        laid_on_axis(document(member), "part", AXIS)
    assert member.name in str(refused.value)


def test_a_shape_whose_mass_is_not_set_has_its_axis_all_the_same():
    before = document(replace(part("box"), driver=NotSet()))
    assert from_axis(standing_of(laid_on_axis(before, "part", AXIS), "part").apply(before.node("part").body.solid.centre)) == pytest.approx(0, abs=1e-14)


def test_a_mesh_of_three_different_moments_takes_the_nearest():
    mesh = replace(part(), body=mesh_body((30, 50, 90), "corner", 1e-3))
    own = own_axis_of(document(mesh), "part", AXIS)
    axes = mesh.body.solid.principal.axes
    np.testing.assert_array_equal(own.direction, axes[np.abs(axes @ UNIT).argmax()])
