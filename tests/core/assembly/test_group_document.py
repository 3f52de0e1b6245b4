"""A group as a document of its own: the same bodies in the group's frame, with all that its lines speak of."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from scipy.spatial.transform import Rotation
from strategies import poses, rings

from core.assembly import Assembly, Cut, DriveAxis, Group, Part, ShapeBody, ledger_of
from core.assembly.assembly import MeantOverlap
from core.assembly.following import axis_of_part
from core.assembly.group_document import document_of_group
from core.assembly.names import NameEntry
from core.assembly.naming import with_entries
from core.errors import EditRefused
from core.material import ByDensity
from core.placement import Pose, Ring
from core.shapes import Box, Cylinder

STEEL = ByDensity(7850.0)
NAMES = [
    NameEntry("unused", "3 mm"), NameEntry("w", "2*rise"), NameEntry("rise", "30 mm"), NameEntry("bore_d", "12 mm"),
]


def machine() -> Assembly:
    """A turned and repeated arm in a turned carriage; its lines use names, a variant, and a mark."""
    bore = Cut("c", "bore", Cylinder(0.012, 0.02), typed=(("dimension.diameter", "bore_d"),))
    block = Part("a", "block", ShapeBody(Box(0.06, 0.05, 0.03)), STEEL, typed=(("dimension.length_x", "w"),), cuts=(bore,))
    pin = Part("b", "pin", ShapeBody(Cylinder(0.01, 0.04)), STEEL, Pose((0.0, 0.02, 0.03)), only_in=("full",))
    arm = Group("arm", "arm", (block, pin), Pose((0.1, 0.2, 0.3), (0.3, -1.1, 2.0)), Ring(4))
    carriage = Group("carriage", "carriage", (arm,), Pose((-0.4, 0.0, 0.7), (1.0, 0.2, -0.5)))
    plate = Part("plate", "plate", ShapeBody(Cylinder(0.4, 0.02)), STEEL)
    axes = (DriveAxis("Swing", (0.01, 0.02, 0.03), (1.0, 2.0, 2.0)), DriveAxis("Other"))
    meant = (MeantOverlap("a", "b"), MeantOverlap("a", "plate"))
    made = Assembly("machine", (plate, carriage), axes, "Swing", meant, variants=("bare", "full"), variant="full")
    return with_entries(made, NAMES)


def test_the_document_holds_the_groups_lines_in_the_groups_frame() -> None:
    made = document_of_group(machine(), "arm")
    assert made.members == machine().node("arm").members
    assert made.name == "arm"
    alone = Assembly("x", machine().node("arm").members, variants=("bare", "full"), variant="full")
    assert made.total.centre.tobytes() == alone.total.centre.tobytes()


def test_its_drive_axis_is_the_machines_as_it_lies_in_the_groups_frame() -> None:
    """Against SciPy's rotations: turns about fixed x, y, z are "xyz" there; the ring's first copy stands as placed."""
    arm, carriage = Rotation.from_euler("xyz", (0.3, -1.1, 2.0)), Rotation.from_euler("xyz", (1.0, 0.2, -0.5))
    back = (carriage * arm).inv()
    origin = np.add(carriage.apply((0.1, 0.2, 0.3)), (-0.4, 0.0, 0.7))
    (axis,) = document_of_group(machine(), "arm").axes
    assert axis.name == "Swing"
    np.testing.assert_allclose(axis.point, back.apply(np.array((0.01, 0.02, 0.03)) - origin), atol=1e-15)
    np.testing.assert_allclose(axis.direction, back.apply((1.0, 2.0, 2.0)), atol=1e-15)


@given(poses, poses, rings)
def test_j_about_the_drive_axis_is_that_of_the_groups_first_copy(inner: Pose, outer: Pose, ring: Ring) -> None:
    before = machine()
    before = before.replaced(replace(before.node("carriage"), pose=outer))
    before = before.replaced(replace(before.node("arm"), pose=inner, copies=ring))
    first = before.node("arm").copies.placements(inner.placement)
    alone = before.replaced(replace(before.node("arm"), pose=Pose(tuple(first.shift[0].tolist()), turns_of(first.turn[0])), copies=Ring(1)))
    line = next(line for line in ledger_of(alone).lines if line.key == "arm")
    total = ledger_of(document_of_group(before, "arm")).total
    assert total.inertia == pytest.approx(line.inertia, rel=1e-12)
    assert total.mass == pytest.approx(line.mass, rel=1e-14)


def turns_of(turn: np.ndarray) -> tuple[float, float, float]:
    x, y, z = Rotation.from_matrix(turn).as_euler("xyz").tolist()
    return x, y, z


def test_what_its_lines_speak_of_goes_along_and_nothing_else() -> None:
    made = document_of_group(machine(), "arm")
    assert [one.name for one in made.names] == ["w", "rise", "bore_d"]
    assert made.names == tuple(one for one in machine().names if one.name != "unused")
    assert (made.variants, made.variant) == (("bare", "full"), "full")
    assert made.meant == (MeantOverlap("a", "b"),)
    longer = with_entries(made, [NameEntry("w", "2*rise"), NameEntry("rise", "40 mm"), NameEntry("bore_d", "12 mm")])
    assert longer.node("a").body.shape.values()["length_x"] == pytest.approx(0.08)


def test_variants_that_no_line_inside_names_stay_behind() -> None:
    bare = machine().removed(("b",))
    assert document_of_group(bare, "arm").variants == ()


def test_a_part_is_no_group() -> None:
    with pytest.raises(EditRefused, match="plate: only a group becomes a document of its own"):
        document_of_group(machine(), "plate")


def test_an_axis_of_a_part_inside_follows_it_there_and_one_of_a_part_outside_stands_by_itself() -> None:
    at_pin = axis_of_part(machine(), "b", "Swing")
    inside = replace(machine(), axes=(at_pin, machine().axes[1]))
    (axis,) = document_of_group(inside, "arm").axes
    assert axis.part == "b"
    np.testing.assert_allclose(axis.point[:2], (0.0, 0.02), atol=1e-15)
    outside = replace(machine(), axes=(axis_of_part(machine(), "plate", "Swing"), machine().axes[1]))
    assert document_of_group(outside, "arm").axes[0].part == ""
