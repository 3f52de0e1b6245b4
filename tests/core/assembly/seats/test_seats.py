"""Seated lines: where they stand, that they follow, and what is refused."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation
from seating import ABOVE, ANGLES, BELOW, OFFSETS, chain, part, plate_and_hub, resized, spot, standing
from strategies import LENGTHS, poses

from core.assembly import Assembly, Cut, DriveAxis, Group, ShapeBody
from core.assembly.copies import taken_apart
from core.assembly.fields import kind_of, typed_for, with_typed, with_value, words_of
from core.assembly.following import axis_of_part
from core.assembly.names import NameEntry
from core.assembly.naming import with_entries, with_entry
from core.assembly.seat import Anchor, Seat
from core.assembly.seats import datum_named, seat_as_it_stands, seated, with_seat, without_seat
from core.assembly.seats.seating import moved_to
from core.errors import EditRefused
from core.history import History
from core.machine import Machine
from core.placement import Pose, Ring, Row
from core.quantity import Kind
from core.shapes import Box, Cylinder, Sphere


@settings(max_examples=60)
@given(poses, poses, OFFSETS, OFFSETS, OFFSETS, ANGLES, st.sampled_from(["against", "along"]))
def test_a_seat_brings_two_faces_together_wherever_the_parts_stand(plate, hub, offset, u, v, turn, facing):
    before = plate_and_hub(plate, hub)
    after = with_seat(before, "hub", Seat(BELOW, ABOVE, facing, offset, (u, v), turn))
    own, own_way = spot(after, "hub", "face −z")
    target, way = spot(after, "plate", "face +z")
    scale = 1 + np.abs(plate.position).max()
    assert own_way == pytest.approx(-way if facing == "against" else way, abs=1e-12)
    # The plate's own x and y axes are u and v of its face +z.
    across = Rotation.from_matrix(standing(after, "plate").turn).apply([(1, 0, 0), (0, 1, 0)])
    assert own - target == pytest.approx(offset * way + u * across[0] + v * across[1], abs=1e-12 * scale)


@given(poses, OFFSETS, ANGLES)
def test_a_seated_part_is_turned_as_scipy_turns_it(plate, offset, turn):
    after = with_seat(plate_and_hub(plate), "hub", Seat(BELOW, ABOVE, "against", offset, turn=turn))
    of_plate = Rotation.from_matrix(standing(after, "plate").turn)
    assert standing(after, "hub").turn == pytest.approx((of_plate * Rotation.from_euler("z", turn)).as_matrix(), abs=1e-12)


@given(poses, poses, OFFSETS, ANGLES)
def test_any_rigid_motion_of_the_target_carries_the_seated_part_along(first, second, offset, turn):
    seat = Seat(BELOW, ABOVE, "against", offset, (0.1, -0.2), turn)
    one = with_seat(plate_and_hub(first), "hub", seat)
    other = seated(one.replaced(replace(one.node("plate"), pose=second)), one)
    relative = [standing(each, "plate").inverse() @ standing(each, "hub") for each in (one, other)]
    scale = 1 + np.abs([first.position, second.position]).max()
    assert relative[0].turn == pytest.approx(relative[1].turn, abs=1e-12)
    assert relative[0].shift == pytest.approx(relative[1].shift, abs=1e-12 * scale)


@given(poses, poses, LENGTHS, OFFSETS, ANGLES)
def test_seat_then_change_then_undo_is_where_it_was(plate, hub, length, offset, turn):
    history = History(Machine(plate_and_hub(plate, hub)))
    start = history.present
    steps = [lambda before: with_seat(before, "hub", Seat(BELOW, ABOVE, "against", offset, turn=turn))]
    steps.append(lambda before: before.replaced(with_value(before.node("plate"), "dimension.length", length)))
    for change in steps:
        history = history.edited("x", history.present.with_assembly(change(history.present.assembly)))
    assert history.undone().undone().present is start
    assert history.undone().redone().present is history.present


@given(poses, poses, OFFSETS, ANGLES)
def test_a_change_and_the_change_back_leave_the_part_where_it_was(plate, hub, offset, turn):
    one = with_seat(plate_and_hub(plate, hub), "hub", Seat(BELOW, ABOVE, "against", offset, turn=turn))
    back = resized(resized(one, "plate", length=0.3), "plate", length=0.02)
    scale = 1 + np.abs(plate.position).max()
    assert back.node("hub").pose.position == pytest.approx(one.node("hub").pose.position, abs=1e-11 * scale)
    assert standing(back, "hub").turn == pytest.approx(standing(one, "hub").turn, abs=1e-12)


def test_an_edit_that_moves_no_seated_line_keeps_every_object():
    one = with_seat(plate_and_hub(), "hub", Seat(BELOW, ABOVE))
    assert seated(one, one) is one
    renamed = one.replaced(replace(one.node("plate"), name="disc"))
    assert seated(renamed, one) is renamed
    bare = plate_and_hub()
    assert seated(bare, bare) is bare


def test_a_hub_on_a_plate_stands_at_its_height():
    after = with_seat(plate_and_hub(), "hub", Seat(BELOW, ABOVE, offset=0.003, turn=math.pi / 2))
    assert after.node("hub").pose == Pose((0, 0, pytest.approx(0.023, rel=1e-15)), (0, 0, pytest.approx(math.pi / 2)))


def test_a_chain_of_three_seats_follows_a_named_dimension():
    assembly = with_entry(chain(), NameEntry("height", "200 mm"))
    column = with_typed(with_value(assembly.node("column"), "dimension.length", 0.2), "dimension.length", "height")
    assembly = seated(assembly.replaced(column), assembly)
    tall = seated(with_entries(assembly, (NameEntry("height", "350 mm"),)), assembly)
    turn = Rotation.from_euler("xyz", (0.4, -0.5, 0.6))
    for each, height in ((assembly, 0.2), (tall, 0.35)):
        for key, up, aside in (("column", 0.02, 0.0), ("table", 0.02 + height, 0.0), ("lamp", 0.018 + height - 0.04, 0.05)):
            expected = turn.apply([aside, 0, up]) + np.array([0.1, 0.2, 0.3])
            assert standing(each, key).shift == pytest.approx(expected, abs=1e-14), key
            assert standing(each, key).turn == pytest.approx(turn.as_matrix(), abs=1e-14)


def test_offset_and_turn_of_a_seat_are_numbers_that_follow_named_dimensions():
    assembly = with_entry(with_seat(plate_and_hub(), "hub", Seat(BELOW, ABOVE)), NameEntry("gap", "5 mm"))
    hub = assembly.node("hub")
    for path, kind, words in (
        ("seat.offset", Kind.LENGTH, "offset of the seat"), ("seat.aside.1", Kind.LENGTH, "seat aside along v"),
        ("seat.turn", Kind.ANGLE, "turn of the seat"),
    ):
        assert (kind_of(hub, path), words_of(hub, path)) == (kind, words)
    hub = with_typed(with_value(hub, "seat.offset", 0.005), "seat.offset", "gap")
    hub = with_value(with_value(hub, "seat.aside.1", 0.04), "seat.turn", 0.3)
    assembly = seated(assembly.replaced(hub), assembly)
    wide = seated(with_entries(assembly, (NameEntry("gap", "8 mm"),)), assembly)
    assert wide.node("hub").pose.position == pytest.approx((0, 0.04, 0.028), abs=1e-15)
    assert wide.node("hub").pose.turns == pytest.approx((0, 0, 0.3), abs=1e-15)
    assert typed_for(wide.node("hub"), "seat.offset") == "gap"


def test_a_number_of_a_seat_that_is_not_there_is_refused():
    with pytest.raises(EditRefused, match=r"^hub: this line has no such number; read seat\.offset\.$"):
        with_value(plate_and_hub().node("hub"), "seat.offset", 0.1)


@given(poses, poses, poses, poses)
@settings(max_examples=40)
def test_seats_hold_across_turned_nested_groups_and_rings(outer, inner, other, target):
    """The pin, in a ring two groups deep, on the plate in a ring of another group: their first copies meet."""
    pin = part("pin", Cylinder(0.02, 0.1), inner, copies=Ring(5, (0.1, 0.0, 0.2), (1.0, 2.0, -1.0), start=0.7))
    plate = part("plate", Cylinder(0.4, 0.02), target, copies=Row(3, (0.1, 0.2, 0.3)))
    nested = Group("g", "g", (Group("h", "h", (pin,), inner, Row(2, (0.0, 0.5, 0.1))),), outer, Ring(4, start=-0.4))
    holder = Group("k", "k", (plate,), other, Ring(3, (0.0, 1.0, 0.0), (0.0, 1.0, 1.0), start=1.1))
    seat = Seat(Anchor("pin", "face −z"), Anchor("plate", "face +z"), "against", 0.01, turn=0.5)
    for members in ((nested, holder), (Group("all", "all", (nested, holder), outer),)):
        after = with_seat(Assembly("t", members), "pin", seat)
        own, own_way = spot(after, "pin", "face −z")
        at, way = spot(after, "plate", "face +z")
        scale = 1 + np.abs([outer.position, inner.position, other.position, target.position]).max()
        assert own_way == pytest.approx(-way, abs=1e-11)
        assert own - at == pytest.approx(0.01 * way, abs=1e-11 * scale)
        again = seated(after)
        assert again is after


def test_the_copies_of_a_ring_that_keep_their_orientation_are_seated_by_the_first():
    ring = Ring(4, (0.3, 0.0, 0.0), start=1.2, turning=False)
    after = with_seat(Assembly("t", (part("plate", Cylinder(0.4, 0.02)), part("hub", Cylinder(0.1, 0.05), copies=ring))), "hub", Seat(BELOW, ABOVE))
    assert spot(after, "hub", "face −z")[0] == pytest.approx([0, 0, 0.02], abs=1e-15)
    assert standing(after, "hub").turn == pytest.approx(np.eye(3), abs=1e-15)


def test_a_group_is_seated_by_a_part_in_it():
    arm = Group("arm", "arm", (part("rod", Cylinder(0.02, 0.3), Pose((0.1, 0.2, 0.3), (0.4, 0.5, 0.6))),), Pose((9.0, 9.0, 9.0)))
    assembly = Assembly("t", (part("plate", Cylinder(0.4, 0.02)), arm))
    after = with_seat(assembly, "arm", Seat(Anchor("rod", "face −z"), ABOVE))
    assert after.node("rod").pose == arm.members[0].pose
    assert spot(after, "rod", "face −z")[0] == pytest.approx([0, 0, 0.02], abs=1e-15)
    assert spot(after, "rod", "face −z")[1] == pytest.approx([0, 0, -1], abs=1e-15)


def test_a_part_may_be_seated_on_the_group_that_holds_it():
    group = Group("g", "g", (part("hub", Cylinder(0.1, 0.05)),), Pose((1.0, 2.0, 3.0), (0.3, 0.2, 0.1)))
    after = with_seat(Assembly("t", (group,)), "hub", Seat(Anchor("hub", "axis z"), Anchor("g", "axis x"), "along"))
    assert after.node("hub").pose.placement.turn[:, 2] == pytest.approx([1, 0, 0], abs=1e-15)


def test_a_bore_is_seated_on_a_shaft_and_a_pin_in_a_hole():
    bore = Cut("bore", "bore", Cylinder(0.03, 0.02), Pose((0.05, 0.0, 0.0)))
    wheel = part("wheel", Cylinder(0.2, 0.02), Pose((0.3, 0.3, 0.3)), cuts=(bore,))
    shaft, pin = part("shaft", Cylinder(0.03, 0.4), Pose((1.0, 0.0, 0.0))), part("pin", Cylinder(0.01, 0.1))
    assembly = Assembly("t", (wheel, shaft, pin))
    after = with_seat(assembly, "wheel", Seat(Anchor("bore", "axis z"), Anchor("shaft", "axis z"), "along", 0.1))
    assert after.node("wheel").pose == Pose((pytest.approx(0.95), 0, pytest.approx(0.1)))
    after = with_seat(after, "pin", Seat(Anchor("pin", "axis z"), Anchor("bore", "rim +z"), "against"))
    assert standing(after, "pin").shift == pytest.approx([1.0, 0.0, 0.12], abs=1e-15)
    assert standing(after, "pin").turn[:, 2] == pytest.approx([0, 0, 1], abs=1e-15)


def tilted(hub=Pose()):
    axes = (DriveAxis(), DriveAxis("Tilt", (0.1, 0.2, 0.3), (0.0, 2.0, 0.0)))
    return replace(plate_and_hub(hub=hub), axes=axes)


def test_a_part_is_seated_on_an_axis_of_the_document_and_follows_its_name():
    group = Group("g", "g", (part("rod", Cylinder(0.02, 0.3)),), Pose((0.5, 0.0, 0.0), (0.3, 0.2, 0.1)))
    assembly = replace(tilted(), members=(group,))
    after = with_seat(assembly, "rod", Seat(Anchor("rod", "axis z"), Anchor("", "Tilt"), "along", 0.25))
    assert standing(after, "rod").shift == pytest.approx([0.1, 0.45, 0.3], abs=1e-15)
    assert standing(after, "rod").turn[:, 2] == pytest.approx([0, 1, 0], abs=1e-15)
    renamed = seated(replace(after, axes=(after.axes[0], replace(after.axes[1], name="Swing"))), after)
    assert renamed.node("rod").seat.target == Anchor("", "Swing")
    gone = seated(replace(after, axes=after.axes[:1]), after)
    assert gone.node("rod").seat is None
    assert gone.node("rod").pose == after.node("rod").pose


def test_a_loop_of_seats_is_refused_with_the_chain():
    assembly = chain()
    with pytest.raises(EditRefused) as refusal:
        with_seat(assembly, "base", Seat(Anchor("base", "face −z"), Anchor("lamp", "face −z")))
    assert str(refusal.value) == (
        "base: the seats depend on one another in a loop; read base → lamp → table → column → base. "
        "Remove one of these seats."
    )


def test_a_loop_through_a_group_is_refused_with_the_chain():
    """The part in the group is seated outside it, and the group is seated by that part."""
    group = Group("g", "arm", (part("hub", Cylinder(0.1, 0.05)),))
    assembly = Assembly("t", (part("plate", Cylinder(0.4, 0.02)), group))
    assembly = with_seat(assembly, "hub", Seat(BELOW, ABOVE))
    with pytest.raises(EditRefused, match="read arm → hub → arm"):
        with_seat(assembly, "g", Seat(BELOW, ABOVE))


def test_what_a_seat_cannot_be_on_is_refused():
    group = Group("g", "arm", (part("hub", Cylinder(0.1, 0.05)), part("cap", Sphere(0.1))))
    assembly = Assembly("t", (part("plate", Cylinder(0.4, 0.02)), group))
    for seat, sentence in (
        (Seat(BELOW, Anchor("cap", "axis z")), 'arm: a line cannot be seated on itself; read "axis z" of cap.'),
        (Seat(ABOVE, BELOW), 'arm: a line is seated by a place of its own; read "face +z" of plate.'),
        (Seat(Anchor("hub", "face +x"), ABOVE), 'arm: its seat is on a place that is not there; read "face +x" of hub.'),
        (Seat(BELOW, Anchor("plate", "lid")), 'arm: its seat is on a place that is not there; read "lid" of plate.'),
    ):
        with pytest.raises(EditRefused) as refusal:
            with_seat(assembly, "g", seat)
        assert str(refusal.value).startswith(sentence)


def test_a_body_that_no_longer_has_the_place_is_refused_with_both_names():
    assembly = with_seat(plate_and_hub(), "hub", Seat(BELOW, ABOVE))
    ball = assembly.replaced(replace(assembly.node("plate"), body=ShapeBody(Sphere(0.3))))
    with pytest.raises(EditRefused) as refusal:
        seated(ball, assembly)
    assert str(refusal.value) == (
        'hub: its seat is on a place that is not there; read "face +z" of plate. '
        "Remove the seat first, or seat the line on another place."
    )


def test_a_seated_line_cannot_be_moved_by_hand():
    assembly = with_seat(plate_and_hub(), "hub", Seat(BELOW, ABOVE))
    moved = assembly.replaced(replace(assembly.node("hub"), pose=Pose((0.0, 0.0, 1.0))))
    with pytest.raises(EditRefused) as refusal:
        seated(moved, assembly)
    assert str(refusal.value) == (
        "hub: a seated line stands where its seat says. Change the offset or turn of its seat, or remove the seat first."
    )


@given(poses, poses)
def test_removing_a_seat_or_its_target_leaves_the_part_where_it_is(plate, hub):
    assembly = with_seat(plate_and_hub(plate, hub), "hub", Seat(BELOW, ABOVE, turn=0.4))
    pose = assembly.node("hub").pose
    for after in (without_seat(assembly, "hub"), seated(assembly.removed(("plate",)), assembly)):
        assert after.node("hub").seat is None
        assert after.node("hub").pose is pose
    free = resized(without_seat(assembly, "hub"), "plate", length=0.5)
    assert free.node("hub").pose is pose


def test_a_seated_line_stays_where_it_is_when_it_is_put_into_a_group():
    group = Group("g", "g", (), Pose((1.0, 2.0, 3.0), (0.3, -0.2, 0.8)), Ring(3, start=0.4))
    assembly = with_seat(replace(plate_and_hub(), members=(*plate_and_hub().members, group)), "hub", Seat(BELOW, ABOVE))
    inside = seated(assembly.moved("hub", "g"), assembly)
    assert standing(inside, "hub").shift == pytest.approx(standing(assembly, "hub").shift, abs=1e-14)
    assert inside.node("hub").seat == assembly.node("hub").seat


def test_seating_lets_go_of_what_was_typed_for_the_place():
    typed = with_typed(with_typed(plate_and_hub().node("hub"), "position.0", "1/2 in"), "dimension.length", "2 in")
    after = with_seat(plate_and_hub().replaced(typed), "hub", Seat(BELOW, ABOVE))
    assert after.node("hub").typed == (("dimension.length", "2 in"),)
    free = without_seat(after.replaced(with_typed(after.node("hub"), "seat.offset", "0 in")), "hub")
    assert free.node("hub").typed == (("dimension.length", "2 in"),)


@given(poses, poses)
def test_a_fresh_seat_turns_the_part_no_more_than_it_has_to(plate, hub):
    before = plate_and_hub(plate, hub)
    after = with_seat(before, "hub", seat_as_it_stands(before, "hub", BELOW, ABOVE))

    def turned(assembly):
        return (Rotation.from_matrix(standing(before, "hub").turn).inv() * Rotation.from_matrix(standing(assembly, "hub").turn)).magnitude()

    seat = after.node("hub").seat
    for more in (0.05, -0.05):
        other = with_seat(after, "hub", replace(seat, turn=seat.turn + more))
        assert turned(after) <= turned(other) + 1e-9


@given(poses, poses)
def test_a_fresh_seat_of_an_axis_keeps_height_and_sense(plate, hub):
    before = plate_and_hub(plate, hub)
    after = with_seat(before, "hub", seat_as_it_stands(before, "hub", Anchor("hub", "axis z"), Anchor("plate", "axis z")))
    axis = standing(before, "plate").turn[:, 2]
    scale = 1 + np.abs([plate.position, hub.position]).max()
    assert standing(after, "hub").turn[:, 2] @ standing(before, "hub").turn[:, 2] >= -1e-12
    moved = standing(after, "hub").shift - standing(before, "hub").shift
    assert moved @ axis == pytest.approx(0, abs=1e-11 * scale)
    assert np.cross(standing(after, "hub").shift - standing(after, "plate").shift, axis) == pytest.approx(np.zeros(3), abs=1e-11 * scale)


def test_another_place_keeps_offset_and_turn():
    assembly = with_seat(plate_and_hub(), "hub", Seat(BELOW, ABOVE, "against", 0.004, (0.01, 0.02), 0.3))
    seat = moved_to(assembly, "hub", BELOW, Anchor("plate", "rim −z")).node("hub").seat
    assert (seat.offset, seat.aside, seat.turn, seat.target.datum) == (0.004, (0.01, 0.02), 0.3, "rim −z")


def test_a_copy_taken_apart_is_seated_no_longer():
    row = part("hub", Cylinder(0.1, 0.05), copies=Row(4, (0.2, 0.0, 0.0)))
    assembly = with_seat(Assembly("t", (part("plate", Cylinder(0.4, 0.02)), row)), "hub", Seat(BELOW, ABOVE))
    apart = taken_apart(assembly, "hub", 2)
    assert seated(apart, assembly) is apart
    assert [node.seat is not None for node in apart.members] == [False, True, False, False]
    first = taken_apart(assembly, "hub", 0)
    assert all(node.seat is None for node in first.members)
    assert seated(first, assembly) is first


def test_a_thousand_seats_one_on_the_other_follow():
    members = [part("p0", Cylinder(0.1, 0.01))]
    members += [
        part(f"p{at}", Cylinder(0.1, 0.01), seat=Seat(Anchor(f"p{at}", "face −z"), Anchor(f"p{at - 1}", "face +z")))
        for at in range(1, 1000)
    ]
    tower = seated(Assembly("tower", tuple(reversed(members))))
    assert tower.node("p999").pose.position[2] == pytest.approx(9.99, rel=1e-12)


# --- what an edit leaves alone is not looked at again ---------------------------------------------------------------


def busy():
    """A pin in a ring in a group, seated in a bore of the base; a cap on the pin; a lid on the axis Tilt; an arm on the pin's axis."""
    bore = Cut("bore", "bore", Cylinder(0.02, 0.05), Pose((0.1, 0.05, 0.0), (0.3, 0.0, 0.0)), Ring(3))
    base = part("base", Box(0.4, 0.3, 0.05), Pose((0.1, 0.2, 0.3), (0.4, -0.5, 0.6)), cuts=(bore,))
    pin = part("pin", Cylinder(0.02, 0.1), copies=Ring(5, (0.1, 0.0, 0.2), (1.0, 2.0, -1.0), start=0.7))
    group = Group("g", "g", (pin, part("cap", Sphere(0.05))), Pose((1.0, 0.0, 0.0), (0.1, 0.0, 0.2)), Row(2, (0.0, 0.5, 0.1)))
    members = (base, Group("k", "k", (group,), Pose((0.0, 0.0, 1.0))), part("lid", Cylinder(0.2, 0.01)), part("arm", Box(0.3, 0.02, 0.02)))
    assembly = Assembly("t", members, (DriveAxis(), DriveAxis("Tilt", (0.1, 0.2, 0.3), (0.0, 2.0, 0.5))))
    assembly = replace(assembly, axes=(*assembly.axes, axis_of_part(assembly, "pin", "Pin")))
    for key, seat in (
        ("pin", Seat(Anchor("pin", "face −z"), Anchor("bore", "rim +z"), "against", 0.01, turn=0.2)),
        ("cap", Seat(Anchor("cap", "centre of mass"), Anchor("pin", "face +z"), "along")),
        ("lid", Seat(Anchor("lid", "axis z"), Anchor("", "Tilt"), "along", 0.3)),
        ("arm", Seat(Anchor("arm", "face −z"), Anchor("", "Pin"), "along", 0.1)),
    ):
        assembly = with_seat(assembly, key, seat)
    return assembly


def with_line(key, **changes):
    return lambda assembly: assembly.with_line(replace(assembly.line(key), **changes))


@pytest.mark.parametrize(
    "edit",
    [
        with_line("base", pose=Pose((0.5, 0.0, 0.0), (0.0, 0.0, 0.3))), with_line("base", body=ShapeBody(Box(0.4, 0.3, 0.08))),
        with_line("bore", shape=Cylinder(0.02, 0.06)), with_line("bore", pose=Pose((0.05, 0.0, 0.01))),
        with_line("bore", copies=Ring(3, start=0.4)), with_line("pin", body=ShapeBody(Cylinder(0.02, 0.2))),
        with_line("pin", copies=Ring(2, start=-0.3)), with_line("g", pose=Pose((0.0, 2.0, 0.0), (0.5, 0.5, 0.5))),
        with_line("k", copies=Ring(4, start=0.5)), with_line("cap", body=ShapeBody(Sphere(0.08))), with_line("cap", name="knob"),
        lambda assembly: replace(assembly, axes=(assembly.axes[0], replace(assembly.axes[1], point=(0.3, 0.2, 0.1)), assembly.axes[2])),
        lambda assembly: assembly.moved("arm", "g"), lambda assembly: assembly.moved("g", None, 0),
        lambda assembly: assembly.removed(("bore",)), lambda assembly: assembly.removed(("k",)),
        with_line("lid", seat=Seat(Anchor("lid", "axis z"), Anchor("", "Spindle"), "along", 0.1)),
        with_line("arm", seat=Seat(Anchor("arm", "face −z"), Anchor("base", "edge +x +y"), "along")),
    ],
)
def test_what_follows_an_edit_is_what_follows_from_the_whole(edit):
    before = busy()
    edited = edit(before)
    after, anew = seated(edited, before), seated(edited)
    assert after == anew
    assert seated(after) is after


@given(poses, poses, st.sampled_from(["base", "g", "k"]))
@settings(max_examples=30)
def test_moving_what_carries_or_holds_seated_lines_is_followed_as_a_whole(first, second, key):
    before = seated(with_line(key, pose=first)(busy()))
    edited = with_line(key, pose=second)(before)
    after = seated(edited, before)
    assert after == seated(edited)
    scale = 1 + np.abs([first.position, second.position]).max()
    pin, bore = spot(after, "pin", "face −z"), datum_named(after.cut("bore"), "rim +z").placed(standing(after, "base"))
    assert pin[0] - bore.point == pytest.approx(0.01 * bore.direction, abs=1e-11 * scale)
