"""Seats in the file, beside axes of parts, in groups that become documents, and beside links."""

from __future__ import annotations

from dataclasses import replace

import pytest
from seating import ABOVE, BELOW, chain, part, plate_and_hub, resized, standing

from core.assembly import Assembly, Group
from core.assembly.following import axis_of_part
from core.assembly.group_document import document_of_group
from core.assembly.seat import Anchor, Seat
from core.assembly.seats import with_seat
from core.document import read_document_bytes, save_document
from core.errors import DocumentError, EditRefused
from core.machine import Machine
from core.placement import Pose
from core.shapes import Box, Cylinder, Sphere

# --- in a document -----------------------------------------------------------------------------------------------


def saved(tmp_path, assembly):
    save_document(Machine(assembly), tmp_path / "x.masswright")
    return (tmp_path / "x.masswright").read_bytes()


def test_seats_are_in_the_document(tmp_path):
    assembly = chain()
    group = Group("g", "g", (part("rod", Cylinder(0.02, 0.3)),), Pose((0.5, 0.0, 0.0), (0.3, 0.2, 0.1)))
    assembly = with_seat(replace(assembly, members=(*assembly.members, group)), "g", Seat(Anchor("rod", "axis z"), Anchor("", "Spindle"), "along", 0.25, (0.1, 0.2), 0.3))
    read = read_document_bytes(saved(tmp_path, assembly)).assembly
    assert read == assembly


def test_a_pose_that_does_not_agree_with_the_seat_follows_it_when_read(tmp_path):
    assembly = with_seat(plate_and_hub(), "hub", Seat(BELOW, ABOVE))
    wrong = assembly.replaced(replace(assembly.node("hub"), pose=Pose((0.0, 0.0, 1.0))))
    assert read_document_bytes(saved(tmp_path, wrong)).assembly == assembly


def test_documents_with_seats_that_cannot_be_are_refused(tmp_path):
    hub = replace(plate_and_hub().node("hub"), seat=Seat(BELOW, ABOVE))
    plate = replace(plate_and_hub().node("plate"), seat=Seat(Anchor("plate", "face −z"), Anchor("hub", "face +z")))
    with pytest.raises(DocumentError, match="plate → hub → plate"):
        read_document_bytes(saved(tmp_path, Assembly("t", (plate, hub))))
    with pytest.raises(DocumentError, match="hub: the seat is on a line or axis that is not there"):
        read_document_bytes(saved(tmp_path, Assembly("t", (hub,))))




# --- beside axes of parts, groups as documents, and links ----------------------------------------------------------


def test_a_seat_on_the_axis_of_a_part_follows_that_part_which_follows_its_seat():
    """The arm lies on the shaft's axis, the shaft is seated on the plate, and the plate grows by 30 mm."""
    shaft = part("shaft", Cylinder(0.03, 0.4), Pose((1.0, 0.0, 0.0), (0.3, 0.0, 0.0)))
    arm = part("arm", Box(0.3, 0.02, 0.02), Pose((0.0, 1.0, 0.0)))
    assembly = Assembly("t", (part("plate", Cylinder(0.4, 0.02)), arm, shaft))
    axis = axis_of_part(assembly, "shaft", "Shaft")
    assembly = replace(assembly, axes=(*assembly.axes, axis))
    assembly = with_seat(assembly, "arm", Seat(Anchor("arm", "face −z"), Anchor("", "Shaft"), "along", 0.1))
    assembly = with_seat(assembly, "shaft", Seat(Anchor("shaft", "face −z"), ABOVE, "against", 0.05))
    for after, height in ((assembly, 0.07), (resized(assembly, "plate", length=0.05), 0.1)):
        assert after.node("shaft").pose == Pose((0, 0, pytest.approx(height, rel=1e-14)))
        assert standing(after, "arm").turn[:, 2] == pytest.approx([0, 0, -1], abs=1e-15)
        assert after.axes[1].point == pytest.approx((0, 0, height), abs=1e-15)
        assert standing(after, "arm").shift == pytest.approx([0, 0, height + 0.1], abs=1e-15)
    with pytest.raises(EditRefused, match="arm → shaft → arm"):
        with_seat(assembly, "shaft", Seat(Anchor("shaft", "face −z"), Anchor("arm", "face +z")))


def test_a_line_cannot_be_seated_on_its_own_axis_in_the_document():
    assembly = plate_and_hub()
    assembly = replace(assembly, axes=(*assembly.axes, axis_of_part(assembly, "hub", "Hub")))
    with pytest.raises(EditRefused, match='a line cannot be seated on itself; read the axis "Hub"'):
        with_seat(assembly, "hub", Seat(BELOW, Anchor("", "Hub")))


def test_a_group_as_a_document_keeps_the_seats_inside_it_and_lets_go_of_the_others():
    cap = part("cap", Sphere(0.1), Pose((0.5, 0.0, 0.0)))
    group = Group("g", "arm", (part("hub", Cylinder(0.1, 0.05)), cap), Pose((1.0, 2.0, 3.0), (0.1, 0.2, 0.3)))
    assembly = Assembly("t", (part("plate", Cylinder(0.4, 0.02)), group))
    assembly = with_seat(assembly, "hub", Seat(BELOW, ABOVE))
    assembly = with_seat(assembly, "cap", Seat(Anchor("cap", "origin"), Anchor("hub", "face +z"), "along"))
    alone = document_of_group(assembly, "g")
    assert alone.node("hub").seat is None
    assert alone.node("hub").pose == assembly.node("hub").pose
    assert alone.node("cap") == assembly.node("cap")
