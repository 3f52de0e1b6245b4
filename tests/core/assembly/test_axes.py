"""Axes: by point and direction, through two points, of a part that they follow; renamed, deleted, typed with names."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from documents import packed, unpacked
from hypothesis import given
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation

from core.assembly import Assembly, Cut, DataSheet, DriveAxis, Group, KnownAxial, MeshBody, Part, ShapeBody
from core.assembly.axes import (
    driven_about,
    driven_about_part,
    fresh_axis_name,
    with_axis_added,
    with_axis_changed,
    with_axis_renamed,
    without_axis,
)
from core.assembly.fields import kind_of, with_typed, with_value
from core.assembly.group_document import document_of_group
from core.assembly.names import NameEntry, values_of
from core.assembly.naming import uses_of, with_entries, with_entry, with_name_changed, without_name
from core.document import read_document_bytes, save_document
from core.errors import EditRefused, QuantityError, ValueRefused
from core.machine import Machine
from core.material import ByDensity, NotSet
from core.mesh import MeshAsset
from core.mesh.stl_writing import stl_of_triangles
from core.placement import Mirrored, Pose, Ring
from core.quantity import parse
from core.shapes import Box, Cylinder

angles = st.floats(-3.0, 3.0)
turns = st.tuples(angles, angles, angles)
places = st.tuples(*[st.integers(-5000, 5000).map(lambda mm: mm / 1000)] * 3)


def rod(key: str = "rod", pose: Pose = Pose()) -> Part:
    return Part(key, key, ShapeBody(Cylinder(0.02, 0.5)), ByDensity(2700.0), pose)


# --- through two points ------------------------------------------------------------------------------------------


@given(places, places)
def test_an_axis_through_two_points_runs_from_the_first_to_the_second(first, second):
    if first == second:
        return
    axis = DriveAxis("Hinge", first, second=second)
    way = np.subtract(second, first)
    np.testing.assert_allclose(axis.unit, way / np.linalg.norm(way), atol=1e-14)
    assert axis.point == first


@pytest.mark.parametrize("axis", [
    {"point": (1.0, 2.0, 3.0), "second": (1.0, 2.0, 3.0)}, {"direction": (0.0, 0.0, 0.0)},
    {"direction": (0.0, float("nan"), 1.0)},
])
def test_an_axis_without_a_direction_is_refused(axis):
    with pytest.raises(ValueRefused, match=r"two points that differ|a direction needs a length"):
        DriveAxis("Hinge", **axis)


# --- of a part ---------------------------------------------------------------------------------------------------


@given(places, turns, places, turns)
def test_the_axis_of_a_part_stands_where_its_part_stands_in_its_groups(at, turn, group_at, group_turn):
    group = Group("g", "arm", (rod(pose=Pose(at, turn)),), Pose(group_at, group_turn))
    axis = driven_about_part(Assembly(members=(group,)), "rod").drive_axis
    inner, outer = Rotation.from_euler("xyz", turn), Rotation.from_euler("xyz", group_turn)
    along = (outer * inner).apply([0, 0, 1])
    np.testing.assert_allclose(axis.unit, along if along[2] >= 0 else -along, atol=2e-14)
    np.testing.assert_allclose(axis.point, outer.apply(at) + group_at, atol=5e-14)


@given(places, turns, turns)
def test_the_axis_of_a_part_follows_every_edit_of_it_and_of_its_groups(at, turn, group_turn):
    start = driven_about_part(Assembly(members=(Group("g", "arm", (rod(),)),)), "rod")
    moved = start.replaced(replace(start.node("rod"), pose=Pose(at, turn)))
    moved = moved.replaced(replace(moved.node("g"), pose=Pose((1.0, 0.0, 0.0), group_turn)))
    afresh = driven_about_part(Assembly(members=moved.members), "rod")
    np.testing.assert_allclose(np.cross(moved.axes[1].unit, afresh.axes[1].unit), 0.0, atol=1e-15)
    assert moved.axes[1].point == afresh.axes[1].point
    assert moved.axes[0] is start.axes[0]
    # Its own J about its own axis is that of a rod, wherever it stands.
    assert float(moved.total.inertia_about_axis(moved.drive_axis.point, moved.drive_axis.direction)) == pytest.approx(
        float(moved.total.mass) * 0.02**2 / 8, rel=1e-9
    )


def test_the_axis_of_a_ring_of_parts_is_that_of_the_first_copy():
    ring = Ring(4, start=np.pi / 2)
    assembly = Assembly(members=(replace(rod(pose=Pose((0.3, 0.0, 0.1))), copies=ring),))
    np.testing.assert_allclose(driven_about_part(assembly, "rod").drive_axis.point, [0.0, 0.3, 0.1], atol=1e-15)
    mirrored = Assembly(members=(replace(rod(pose=Pose((0.3, 0.0, 0.1))), copies=Mirrored()),))
    np.testing.assert_allclose(driven_about_part(mirrored, "rod").drive_axis.point, [0.3, 0.0, 0.1], atol=1e-15)


def test_deleting_the_part_leaves_its_axis_where_it_was():
    start = driven_about_part(Assembly(members=(rod(pose=Pose((0.3, 0.2, 0.1), (0.4, 0.0, 0.0))),)), "rod")
    left = start.removed(("rod",))
    assert left.drive_axis == replace(start.drive_axis, part="")
    # A new part with the same key is another part.
    again = left.inserted(rod(pose=Pose((9.0, 0.0, 0.0))))
    assert again.drive_axis == left.drive_axis


def test_moving_a_part_in_the_ledger_keeps_its_axis_on_it():
    start = driven_about_part(Assembly(members=(rod(), Group("g", "arm", pose=Pose((1.0, 0.0, 0.0))))), "rod")
    assert start.moved("rod", "g").drive_axis.part == "rod"
    assert start.moved("rod", "g").drive_axis.point == (1.0, 0.0, 0.0)


def test_a_part_that_another_variant_leaves_out_keeps_its_axis():
    start = driven_about_part(Assembly(members=(rod(), rod("other"))), "rod")
    varied = replace(start, members=(replace(rod(), only_in=("full",)), rod("other")), variants=("full", "empty"))
    assert replace(varied, variant="empty").counted.drive_axis.point == start.drive_axis.point
    assert replace(varied, variant="empty").drive_axis == start.drive_axis


def test_asking_twice_for_the_axis_of_a_part_makes_one_axis():
    once = driven_about_part(Assembly(members=(rod(),)), "rod")
    twice = driven_about_part(driven_about(once, "Spindle"), "rod")
    assert twice == once
    assert [axis.name for axis in once.axes] == ["Spindle", "axis of rod"]


@given(turns, places)
def test_the_axis_of_a_mesh_is_the_one_that_it_is_round_about_and_stays_with_it(turn, at):
    facets = Cylinder(0.1, 0.3).facets(24)
    start = np.array([0.3, -0.2, 0.1])
    asset = MeshAsset.of_bytes(stl_of_triangles((facets.points + start)[facets.corners], "rod"), "rod.stl")
    part = Part("m", "rod", MeshBody(asset, 1.0), NotSet())
    assembly = driven_about_part(Assembly(members=(part,)), "m")
    np.testing.assert_allclose(assembly.drive_axis.unit, [0, 0, 1], atol=1e-6)
    turned = assembly.replaced(replace(part, pose=Pose(at, turn))).drive_axis
    rotation = Rotation.from_euler("xyz", turn)
    along = rotation.apply([0, 0, 1])
    np.testing.assert_allclose(turned.unit, along, atol=1e-6)
    np.testing.assert_allclose(np.cross(turned.point - rotation.apply(start) - at, along), 0.0, atol=1e-6)


@given(turns)
def test_a_body_about_which_no_axis_stands_out_keeps_the_one_that_was_nearest_the_drive_axis(turn):
    box = Part("b", "box", ShapeBody(Box(0.4, 0.2, 0.1)), ByDensity(2700.0), Pose((0.0, 0.0, 0.3)))
    start = driven_about_part(Assembly(members=(box,), axes=(DriveAxis(direction=(0.2, 3.0, -0.1)),)), "b")
    assert start.drive_axis.direction == (0.0, 1.0, 0.0)
    moved = start.replaced(replace(box, pose=Pose((0.0, 0.0, 0.3), turn)))
    np.testing.assert_allclose(moved.drive_axis.unit, Rotation.from_euler("xyz", turn).apply([0, 1, 0]), atol=2e-13)
    # However its edges change, it is that axis, through the centre of mass as it is then.
    flat = start.replaced(replace(box, body=ShapeBody(Box(0.1, 0.1, 0.7)))).drive_axis
    np.testing.assert_allclose(flat.unit, [0, 1, 0], atol=1e-15)
    np.testing.assert_allclose(flat.point, flat_centre(), atol=1e-15)


def flat_centre() -> np.ndarray:
    return np.array([0.0, 0.0, 0.3]) + Box(0.1, 0.1, 0.7).moments().centre


def test_the_axis_of_a_part_points_the_way_of_the_axis_that_was_driven():
    down = Part("a", "rotor", KnownAxial(1.0, (0.01, 0.0, 0.2), 0.01, 0.1), DataSheet(), Pose((1, 0, 0), (np.pi, 0, 0)))
    assembly = driven_about_part(Assembly(members=(down,)), "a")
    np.testing.assert_allclose(assembly.drive_axis.unit, [0, 0, 1], atol=1e-15)
    assert assembly.drive_axis.point == (1.0, 0.0, 0.0)
    back = assembly.replaced(replace(down, pose=Pose((1, 0, 0))))
    np.testing.assert_allclose(back.drive_axis.unit, [0, 0, -1], atol=1e-15)


def test_a_group_has_no_axis_to_follow_and_a_cut_stands_for_its_part():
    with pytest.raises(EditRefused, match="arm: an axis follows a part, and this is a group"):
        driven_about_part(Assembly(members=(Group("g", "arm"),)), "g")
    bored = replace(rod(), cuts=(Cut("c", "bore", Cylinder(0.005, 0.5)),))
    assert driven_about_part(Assembly(members=(bored,)), "c").drive_axis.part == "rod"


def test_an_edit_that_takes_a_part_its_own_axis_is_refused_while_an_axis_follows_it():
    facets = Cylinder(0.1, 0.3).facets(24)
    asset = MeshAsset.of_bytes(stl_of_triangles(facets.triangles, "rod"), "rod.stl")
    mixed = facets.triangles.copy()
    mixed[:30] = mixed[:30, [0, 2, 1]]
    twisted = MeshAsset.of_bytes(stl_of_triangles(mixed, "mixed"), "mixed.stl")
    part = Part("m", "rod", MeshBody(asset, 1.0), NotSet())
    start = driven_about_part(Assembly(members=(part,)), "m")
    assert MeshBody(twisted, 1.0).solid is None, "the test needs a mesh without volume"
    with pytest.raises(EditRefused, match='the axis "axis of rod" is the one of this part, and it has no axis of its'):
        start.replaced(replace(part, body=MeshBody(twisted, 1.0)))


# --- named, added, deleted ---------------------------------------------------------------------------------------


def test_renaming_the_drive_axis_keeps_it_driven():
    two = with_axis_added(Assembly(), DriveAxis(" Tilt ", (0.1, 0.0, 0.0)))
    assert [axis.name for axis in two.axes] == ["Spindle", "Tilt"]
    assert two.drive == "Spindle"
    renamed = with_axis_renamed(driven_about(two, "Tilt"), "Tilt", "Swivel")
    assert renamed.drive == "Swivel"
    assert renamed.drive_axis.point == (0.1, 0.0, 0.0)
    assert with_axis_renamed(renamed, "Spindle", "Main").drive == "Swivel"


@pytest.mark.parametrize(("edit", "sentence"), [
    (lambda two: with_axis_added(two, DriveAxis("Tilt")), "axes: another axis has this name; read 'Tilt'. Choose"),
    (lambda two: with_axis_renamed(two, "Tilt", " Spindle"), "axes: another axis has this name; read 'Spindle'."),
    (lambda two: with_axis_renamed(two, "Tilt", "  "), "axes: an axis needs a name. Type one, such as Spindle."),
    (lambda two: with_axis_renamed(two, "Tlit", "A"), "the document has no such axis; read 'Tlit'. Choose one of Spin"),
    (lambda two: driven_about(two, "A"), "the document has no such axis; read 'A'. Choose one of Spindle, Tilt."),
    (lambda two: without_axis(two, "Spindle"), "Spindle: the drive axis cannot be deleted. Make another one the dri"),
    (lambda two: without_axis(without_axis(two, "Tilt"), "Spindle"), "Spindle: a document keeps one axis at least."),
    (lambda two: Assembly(axes=two.axes, drive="Table"), "drive axis: \"drive\" names an axis that is not there; read 'T"),
    (lambda two: Assembly(axes=(*two.axes, two.axes[0])), "axes: two axes have the same name; read 'Spindle'. Give one"),
])
def test_axes_that_cannot_be_are_refused_in_a_sentence(edit, sentence):
    two = with_axis_added(Assembly(), DriveAxis("Tilt"))
    with pytest.raises(EditRefused) as refused:
        edit(two)
    assert str(refused.value).startswith(sentence)


def test_an_axis_keeps_its_place_in_the_list_when_it_changes():
    two = with_axis_added(Assembly(), DriveAxis("Tilt"))
    changed = with_axis_changed(two, "Spindle", DriveAxis("Main", (0.0, 0.1, 0.0)))
    assert [axis.name for axis in changed.axes] == ["Main", "Tilt"]
    assert changed.drive == "Main"
    assert [axis.name for axis in without_axis(changed, "Tilt").axes] == ["Main"]
    assert fresh_axis_name(changed, "Tilt") == "Tilt 2"


# --- with named dimensions and in a document ----------------------------------------------------------------------


def typed(axis: DriveAxis, assembly: Assembly, **texts: str) -> DriveAxis:
    for key, text in texts.items():
        path = f"axis.{key.replace('_', '.')}"
        value = parse(text, kind_of(axis, path), names=values_of(assembly.names)).value
        axis = with_typed(with_value(axis, path, value), path, text)
    return axis


@pytest.fixture
def crank() -> Assembly:
    named = with_entries(Assembly(members=(rod(),)), (NameEntry("throw", "80 mm"), NameEntry("tilt", "0.25")))
    pin = typed(DriveAxis("Pin"), named, point_0="throw + 2 mm", direction_1="tilt")
    hinge = typed(DriveAxis("Hinge", second=(0.0, 0.0, 1.0)), named, second_0="throw/2")
    return with_axis_added(with_axis_added(named, pin), hinge)


def test_a_named_dimension_moves_the_axes_that_were_typed_with_it(crank):
    after = with_entry(with_entry(crank, NameEntry("throw", "120 mm")), NameEntry("tilt", "-1"))
    assert after.axis("Pin").point == pytest.approx((0.122, 0.0, 0.0), rel=1e-15)
    assert after.axis("Pin").direction == (0.0, -1.0, 1.0)
    assert after.axis("Hinge").direction == pytest.approx((0.06, 0.0, 1.0), rel=1e-15)
    assert [use.where for use in uses_of(crank, "throw")] == ["Pin, through x", "Hinge, second point x"]
    renamed = with_name_changed(crank, "throw", "radius_2")
    assert dict(renamed.axis("Pin").typed)["axis.point.0"] == "radius_2 + 2 mm"


def test_a_name_that_an_axis_uses_cannot_go_or_take_its_direction(crank):
    with pytest.raises(EditRefused, match=r'is used; read|"throw" is used|Pin, through x \("throw \+ 2 mm"\)'):
        without_name(crank, "throw")
    with pytest.raises(QuantityError, match="Pin, through x → throw"):
        with_entry(crank, NameEntry("throw", "3 kg"))
    flat = with_axis_added(crank, typed(DriveAxis("Flat", direction=(0.25, 0.0, 0.0)), crank, direction_0="tilt"))
    with pytest.raises(EditRefused, match="Flat → tilt: a direction needs a length"):
        with_entry(flat, NameEntry("tilt", "0"))


def test_axes_go_into_a_document_and_come_back(crank, tmp_path):
    before = driven_about_part(crank, "rod")
    save_document(Machine(before), tmp_path / "a.masswright")
    data = (tmp_path / "a.masswright").read_bytes()
    after = read_document_bytes(data).assembly
    assert (after.axes, after.drive) == (before.axes, "axis of rod")
    assert after.replaced(rod(pose=Pose((0.5, 0.0, 0.0)))).drive_axis.point == (0.5, 0.0, 0.0)
    text = unpacked(data)["assembly.json"].decode()
    assert text.count('"part"') == text.count('"second"') + 1 == 2  # one is the kind of the rod


def test_an_axis_without_anything_new_is_written_as_it_always_was(tmp_path):
    save_document(Machine(Assembly()), tmp_path / "a.masswright")
    text = unpacked((tmp_path / "a.masswright").read_bytes())["assembly.json"].decode()
    assert not any(word in text for word in ('"second"', '"part"', '"typed"'))


def test_a_document_whose_axis_follows_nothing_that_is_there_keeps_the_axis_where_it_was_written(crank, tmp_path):
    save_document(Machine(driven_about_part(crank, "rod")), tmp_path / "a.masswright")
    entries = unpacked((tmp_path / "a.masswright").read_bytes())
    text = entries["assembly.json"].replace(b'"part": "rod"', b'"part": "gone"')
    after = read_document_bytes(packed({**entries, "assembly.json": text})).assembly
    assert after.drive_axis == DriveAxis("axis of rod")


def test_an_axis_through_two_points_lies_in_a_document_of_a_group_where_it_lay_in_the_group():
    arm = Group("g", "arm", (rod(),), Pose((0.5, 0.0, 0.0), (0.0, np.pi / 2, 0.0)))
    hinge = DriveAxis("Hinge", (0.5, 0.1, 0.0), second=(1.5, 0.1, 0.0))
    inside = document_of_group(Assembly(members=(arm,), axes=(hinge,), drive="Hinge"), "g").drive_axis
    np.testing.assert_allclose(inside.unit, [0, 0, 1], atol=1e-15)
    np.testing.assert_allclose(inside.point, [0.0, 0.1, 0.0], atol=1e-15)
