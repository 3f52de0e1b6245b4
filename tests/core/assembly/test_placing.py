"""Moving lines as they stand in the document: in turned groups, rings and mirror images, far from the origin."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation
from strategies import placements, poses, several_copies

from core.assembly import Assembly, Cut, Group, Part, ShapeBody
from core.assembly.fields import typed_for
from core.assembly.placing import (
    frame_of,
    mass_centre_of,
    moved,
    outermost,
    pose_in_document,
    posed,
    posed_in_document,
    standing_of,
    standing_rows,
)
from core.errors import EditRefused
from core.material import ByDensity, NotSet
from core.placement import Mirrored, Placement, Pose, Ring, Row, Several
from core.shapes import SHAPES

CLOSE = {"rtol": 0, "atol": 2e-12}


def wedge(key="wedge", pose=Pose(), copies=Several(1), **more) -> Part:
    return Part(key, key, ShapeBody(SHAPES["wedge"].of({})), ByDensity(2700.0), pose, copies, **more)


def nested(inner: Part, *groups: Group) -> Assembly:
    node = inner
    for group in reversed(groups):
        node = replace(group, members=(node,))
    return Assembly("d", (node,))


OUTER = Group("outer", "outer", pose=Pose((30.0, -20.0, 7.0), (0.3, -0.8, 2.0)), copies=Row(3, (1.0, 0.5, 0)))
INNER = Group("inner", "inner", pose=Pose((0.2, 0.1, -0.3), (-1.0, 0.4, 0.2)), copies=Ring(4, (1, 0, 0), (0, 1, 1), 0.7))


def scipy_placement(pose: Pose) -> tuple[np.ndarray, np.ndarray]:
    return Rotation.from_euler("xyz", pose.turns).as_matrix(), np.array(pose.position)


def first_row(assembly: Assembly, key: str) -> Placement:
    rows = standing_rows(assembly, key)[key]
    return Placement(rows.turn[0], rows.shift[0])


def same(one: Placement, other: Placement) -> None:
    np.testing.assert_allclose(one.turn, other.turn, **CLOSE)
    np.testing.assert_allclose(one.shift, other.shift, rtol=0, atol=2e-12 * max(1, np.abs(other.shift).max()))


def test_the_frame_of_a_line_is_that_of_its_groups_one_in_the_other():
    plain = replace(INNER, copies=Several(1))
    assembly = nested(wedge(pose=Pose((1, 2, 3))), OUTER, plain)
    (turn_a, shift_a), (turn_b, shift_b) = scipy_placement(OUTER.pose), scipy_placement(plain.pose)
    found = frame_of(assembly, "wedge")
    np.testing.assert_allclose(found.turn, turn_a @ turn_b, **CLOSE)
    np.testing.assert_allclose(found.shift, turn_a @ shift_b + shift_a, rtol=0, atol=1e-13)
    same(frame_of(assembly, "outer"), Placement.identity())


@given(poses, several_copies, poses, several_copies)
def test_a_line_stands_where_the_first_row_of_the_totals_has_it(pose, copies, outer, outers):
    assembly = nested(wedge(pose=pose, copies=copies), Group("g", "g", (), outer, outers))
    same(standing_of(assembly, "wedge"), first_row(assembly, "wedge"))


@given(poses, several_copies, poses, several_copies, placements())
def test_a_moved_line_stands_where_the_motion_carries_its_first_copy(pose, copies, outer, outers, motion):
    assembly = nested(wedge(pose=pose, copies=copies), Group("g", "g", (), outer, outers))
    after = moved(assembly, ["wedge"], motion)
    same(first_row(after, "wedge"), motion @ first_row(assembly, "wedge"))
    assert after.node("wedge").copies == copies


@given(poses, several_copies, placements())
def test_a_group_moves_as_one(pose, copies, motion):
    group = Group("g", "g", (wedge("a", Pose((0.1, 0, 0))), wedge("b", Pose((0, 0.2, 0), (1, 0, 0)))), pose, copies)
    before, after = Assembly("d", (group,)), moved(Assembly("d", (group,)), ["g"], motion)
    for key in "ab":
        same(first_row(after, key), motion @ first_row(before, key))
    assert after.node("g").members is group.members


@given(placements())
def test_what_is_moved_and_moved_back_stands_where_it_was(motion):
    assembly = nested(wedge(pose=Pose((0.1, 0.2, 0.3), (0.4, 0.5, 0.6)), copies=Ring(3, start=0.3)), OUTER, INNER)
    back = moved(moved(assembly, ["wedge"], motion), ["wedge"], motion.inverse())
    same(standing_of(back, "wedge"), standing_of(assembly, "wedge"))


def test_a_shift_leaves_the_turns_as_they_were_typed_to_the_last_digit():
    turns = (0.1, np.pi / 2, -0.7)
    assembly = nested(wedge(pose=Pose((0, 0, 0), turns)), OUTER, INNER)
    after = moved(assembly, ["wedge"], Placement(np.eye(3), [0.1, 0.2, 0.3]))
    assert after.node("wedge").pose.turns == turns


def test_of_lines_within_one_another_only_the_outer_one_is_moved():
    assembly = nested(wedge(), OUTER, INNER)
    assert outermost(assembly, ["wedge", "inner", "inner"]) == ("inner",)
    step = Placement(np.eye(3), [0.0, 0.0, 0.5])
    after = moved(assembly, ["wedge", "inner"], step)
    same(first_row(after, "wedge"), step @ first_row(assembly, "wedge"))


def cut_part() -> Part:
    bore = Cut("bore", "bore", SHAPES["cylinder"].of({"diameter": 0.01, "length": 0.3}), Pose((0.02, 0.02, -0.1)), Row(2, (0.01, 0, 0)))
    return replace(wedge(pose=Pose((0.5, 0, 0), (0, 0, np.pi / 2))), cuts=(bore,))


def test_a_cut_stands_in_the_frame_of_its_part_and_moves_in_it():
    assembly = nested(cut_part(), Group("g", "g", pose=Pose((0, 0, 1))))
    np.testing.assert_allclose(standing_of(assembly, "bore").shift, [0.48, 0.02, 0.9], rtol=0, atol=1e-15)
    after = moved(assembly, ["bore"], Placement(np.eye(3), [0, 0.01, 0]))
    np.testing.assert_allclose(after.cut("bore").pose.position, [0.03, 0.02, -0.1], rtol=0, atol=1e-15)
    assert outermost(assembly, ["bore", "wedge"]) == ("wedge",)
    assert outermost(assembly, ["bore", "g"]) == ("g",)


@given(poses, poses)
def test_a_pose_in_the_document_is_shown_and_taken_back(pose, other):
    assembly = nested(wedge(pose=pose, copies=Ring(5, start=1.0)), OUTER, INNER)
    shown = pose_in_document(assembly, "wedge")
    same(shown.placement, frame_of(assembly, "wedge") @ pose.placement)
    back = posed_in_document(posed_in_document(assembly, "wedge", other), "wedge", shown)
    same(back.node("wedge").pose.placement, pose.placement)
    same(pose_in_document(posed_in_document(assembly, "wedge", other), "wedge").placement, other.placement)


def test_an_outermost_line_has_the_same_pose_in_both_frames():
    pose = Pose((0.1, 0.2, 0.3), (0.4, -0.5, 0.6))
    found = pose_in_document(Assembly("d", (wedge(pose=pose),)), "wedge")
    np.testing.assert_allclose(found.turns, pose.turns, rtol=1e-15)
    assert found.position == pose.position


def test_what_was_typed_is_dropped_for_the_numbers_that_change_alone():
    typed = (("position.0", "plate_d/2"), ("position.1", "2 in"), ("turn.2", "360/7"), ("copies.count", "n"))
    assembly = Assembly("d", (wedge(pose=Pose((0.1, 0.0508, 0), (0, 0, 0.9)), typed=typed),))
    after = moved(assembly, ["wedge"], Placement(np.eye(3), [0.0, 0.01, 0.0])).node("wedge")
    assert [typed_for(after, path) for path, _ in typed] == ["plate_d/2", "", "360/7", "n"]
    turned = posed(assembly, "wedge", Pose((0.1, 0.0508, 0), (0, 0, 1.0))).node("wedge")
    assert [typed_for(turned, path) for path, _ in typed] == ["plate_d/2", "2 in", "", "n"]


def test_the_centre_of_mass_is_that_of_the_first_copy_after_its_cuts():
    assembly = nested(cut_part(), Group("g", "g", pose=Pose((0, 0, 1), (0.2, 0, 0)), copies=Mirrored()))
    moments = assembly.table.moments
    np.testing.assert_allclose(mass_centre_of(assembly, "wedge"), moments.centre[0], rtol=0, atol=1e-15)
    np.testing.assert_allclose(mass_centre_of(assembly, "g"), moments.centre[0], rtol=0, atol=1e-15)
    assert mass_centre_of(assembly, "bore") is None


def test_the_centre_of_mass_of_a_group_is_of_what_it_holds_with_all_copies_in_it():
    members = (wedge("a", Pose((0.1, 0, 0)), Ring(5)), wedge("b", Pose((0, 0.2, 0), (1, 0, 0))))
    assembly = Assembly("d", (Group("g", "g", members, Pose((5, 6, 7), (0.1, 0.2, 0.3))),))
    np.testing.assert_allclose(mass_centre_of(assembly, "g"), assembly.total.centre, rtol=1e-15)


def test_without_a_mass_there_is_no_centre():
    assembly = Assembly("d", (Group("g", "g", (replace(wedge(), driver=NotSet()),)), Group("empty", "empty")))
    assert [mass_centre_of(assembly, key) for key in ("g", "wedge", "empty")] == [None] * 3


def test_a_line_that_is_not_there_is_refused():
    with pytest.raises(EditRefused, match="no such line"):
        moved(Assembly(), ["gone"], Placement.identity())


@given(st.permutations(["a", "b", "c"]))
def test_moving_several_lines_in_any_order_gives_the_same_total(order):
    members = tuple(wedge(key, Pose((at, 0.1 * at, 0), (0, at, 0)), Ring(3)) for at, key in enumerate("abc"))
    assembly = Assembly("d", members)
    motion = Placement.about([0.3, 0.2, 0.1], [1, 2, 3], 0.8)
    one, other = (moved(assembly, keys, motion).total for keys in (order, "abc"))
    np.testing.assert_allclose(one.centre, other.centre, rtol=0, atol=1e-15)
    np.testing.assert_allclose(one.spread, other.spread, rtol=1e-12)
