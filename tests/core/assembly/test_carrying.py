"""A common volume is counted once: the carrier is cut out of the other part, wherever the two of them stand."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
import trimesh
from mesh_files import binary_stl, box

from core.assembly import Assembly, Cut, DataSheet, Group, KnownAxial, MeshBody, Part, ShapeBody
from core.assembly.assembly import MeantOverlap
from core.assembly.carrying import MOST_CUTS_AT_ONCE, MOST_LOOKED_AT, counted_once
from core.assembly.overlap_findings import overlap_findings
from core.assembly.overlaps import overlaps_of
from core.errors import EditRefused
from core.history import History
from core.machine import Machine
from core.material import ByDensity, Weighed
from core.mesh import MeshAsset
from core.placement import Mirrored, Placement, Pose, Ring, Row, Several
from core.shapes import Box, Cylinder, ThinDisc, Wedge

STEEL, ALUMINIUM = ByDensity(7850.0), ByDensity(2700.0)


def part(key, shape, at=(0.0, 0.0, 0.0), turns=(0.0, 0.0, 0.0), copies=Several(1), driver=STEEL, **more):
    return Part(key, key, ShapeBody(shape), driver, Pose(at, turns), copies, **more)


def pressed(**more):
    """Return a plate 400 × 20 of aluminium and a steel pin ⌀10 × 50 that stands 12 mm deep in it, 150 mm aside."""
    pin = part("pin", Cylinder(0.01, 0.05), (0.15, 0, 0.008), **more)
    return Assembly("press fit", (part("plate", Cylinder(0.4, 0.02), driver=ALUMINIUM), pin))


def gone(assembly):
    return overlaps_of(assembly).found == ()


def test_a_pin_pressed_into_a_plate_leaves_the_plate_less_a_cylinder():
    before = pressed()
    (found,) = overlaps_of(before).found
    after = counted_once(before, "pin", "plate")
    plate, taken = after.node("plate"), np.pi * 0.005**2 * 0.012
    assert plate.volume == pytest.approx(np.pi * 0.2**2 * 0.02 - taken, rel=1e-9)
    assert after.total.mass == pytest.approx(before.total.mass - 2700 * taken, rel=1e-9)
    # Of the cylinder about the plate's axis: m (r²/2 + e²), the axes being parallel.
    lost = 2700 * taken * (0.005**2 / 2 + 0.15**2)
    about_z = [np.trace(each.total.spread) - each.total.spread[2, 2] + each.total.mass * (each.total.centre[:2] ** 2).sum()
               for each in (before, after)]
    assert about_z[0] - about_z[1] == pytest.approx(lost, rel=1e-4)
    assert found.volume == pytest.approx(taken, rel=1e-4)
    (cut,) = plate.cuts
    assert (cut.name, cut.shape, cut.pose.position) == ("room of pin", Cylinder(0.01, 0.05), (0.15, 0.0, 0.008))
    assert after.node("pin") == before.node("pin")
    assert gone(after)


def test_the_other_way_round_the_pin_is_cut_and_the_plate_stays():
    before = pressed()
    after = counted_once(before, "plate", "pin")
    assert after.node("plate") == before.node("plate")
    assert after.node("pin").volume == pytest.approx(np.pi * 0.005**2 * 0.038, rel=1e-6)
    assert gone(after)


def ring_far_away(copies):
    """Return a block turned and far away in one group, and pins on a ring in a turned group that stand in it."""
    tf_document_block = Pose((3.0, -40.0, 7.0), (0.3, -0.8, 1.9))
    stand = tf_document_block.placement @ Placement.about((0, 0, 0), (1, 2, -1), 0.7)
    block = part("block", Box(0.3, 0.2, 0.05), (0.01, 0.02, 0.0), (0.0, 0.1, 0.0), driver=ALUMINIUM)
    middle = np.array(block.bounds).mean(axis=0)
    inner = Placement.about((0, 0, 0), (1, 2, -1), 0.7).inverse() @ block.pose.placement
    axis = inner.apply(middle + np.array([0.02, -0.01, 0.0]))
    direction = inner.turn_only([0.0, 0.0, 1.0])
    ring = replace(copies, point=tuple(axis.tolist()), direction=tuple(direction.tolist()))
    first = inner @ Placement(np.eye(3), middle + np.array([0.07, -0.01, 0.01]))
    pins = Part("pins", "pin", ShapeBody(Cylinder(0.012, 0.06)), STEEL, Pose.of(first), ring)
    left = Group("left", "left", (block,), tf_document_block)
    return Assembly("ring", (left, Group("right", "right", (pins,), Pose.of(stand))))


@pytest.mark.parametrize("copies", [
    Ring(6, start=0.4), Ring(5, start=-0.2, span=2.5), Ring(6, start=0.3, turning=False),
])
def test_a_ring_of_pins_in_a_turned_group_far_away_becomes_a_ring_of_cuts(copies):
    before = ring_far_away(copies)
    after = counted_once(before, "pins", "block")
    (cut,) = after.node("block").cuts
    assert cut.copies.count == copies.count
    assert gone(after)
    # The independent route: both as prisms of so many sides that the round is lost at 1.3e-5, united by a boolean.
    table, steps = before.table, 720
    solids = []
    for owner, turn, shift in zip(table.owner, table.standing.turn, table.standing.shift, strict=True):
        facets = table.parts[owner].body.shape.facets(steps)
        points = facets.points @ turn.T + (shift - table.standing.shift[0])
        solids.append(trimesh.Trimesh(points, facets.corners, process=False))
    union = trimesh.boolean.union(solids, engine="manifold")
    shared = sum(each.volume for each in solids) - union.volume
    assert before.node("block").volume - after.node("block").volume == pytest.approx(shared, rel=3e-5)
    assert before.total.mass - after.total.mass == pytest.approx(2700 * shared, rel=3e-5)


def test_a_ring_that_is_the_groups_becomes_a_ring_of_cuts():
    pins = Group("g", "studs", (part("pin", Box(0.01, 0.02, 0.05), (0.15, 0, 0.008), (0, 0, 0.3)),), Pose((0, 0, 0.004)),
                 Ring(8, start=0.1))
    before = Assembly("studs", (part("plate", Cylinder(0.4, 0.02), driver=ALUMINIUM), pins))
    after = counted_once(before, "pin", "plate")
    (cut,) = after.node("plate").cuts
    assert cut.copies == Ring(8, start=0.1)
    assert after.node("plate").volume == pytest.approx(np.pi * 0.2**2 * 0.02 - 8 * 0.01 * 0.02 * 0.008, rel=1e-9)
    assert gone(after)


def test_a_row_becomes_a_row_and_one_end_of_it_one_cut_for_each_copy_that_meets():
    plate = part("plate", Box(0.4, 0.1, 0.02), turns=(0, 0, 0.5), driver=ALUMINIUM)
    step = (0.05 * np.cos(0.5), 0.05 * np.sin(0.5), 0.0)
    pins = part("pin", Cylinder(0.01, 0.05), (0, 0, 0.01), copies=Row(3, step))
    after = counted_once(Assembly("row", (plate, pins)), "pin", "plate")
    (cut,) = after.node("plate").cuts
    assert cut.copies.step == pytest.approx((0.05, 0, 0), abs=1e-15)
    assert gone(after)
    # Centres at 0, 50 … 250 mm along a plate that ends at 200 mm: four are inside, one half, and the last outside.
    after = counted_once(Assembly("row", (plate, replace(pins, copies=Row(6, step)))), "pin", "plate")
    assert [cut.copies for cut in after.node("plate").cuts] == [Several(1)] * 5
    assert [cut.name for cut in after.node("plate").cuts][:2] == ["room of pin", "room of pin 2"]
    solid = after.node("plate").body.shape.moments().mass
    assert solid - after.node("plate").volume == pytest.approx(4.5 * np.pi * 0.005**2 * 0.01, rel=1e-4)
    assert gone(after)


def test_a_shaft_through_a_row_of_equal_discs_is_one_cut_in_all_of_them():
    discs = part("disc", Cylinder(0.2, 0.01), copies=Row(4, (0, 0, 0.05)), driver=ALUMINIUM)
    before = Assembly("stack", (part("shaft", Cylinder(0.03, 0.4), (0, 0, -0.1)), discs))
    after = counted_once(before, "shaft", "disc")
    (cut,) = after.node("disc").cuts
    assert cut.copies == Several(1)
    lost = 4 * 2700 * np.pi * 0.015**2 * 0.01
    assert before.total.mass - after.total.mass == pytest.approx(lost, rel=1e-9)
    assert gone(after)


def test_copies_that_are_not_met_alike_are_refused():
    discs = part("disc", Cylinder(0.2, 0.01), copies=Row(4, (0, 0, 0.05)), driver=ALUMINIUM)
    before = Assembly("stack", (part("shaft", Cylinder(0.03, 0.12)), discs))
    with pytest.raises(EditRefused, match=r"disc: its copies are not all met alike.*4 copies, and shaft in 3 of them.*apart"):
        counted_once(before, "shaft", "disc")


def test_a_mirrored_copy_is_cut_where_the_shape_is_its_own_image():
    plate = part("plate", Box(0.4, 0.1, 0.02), driver=ALUMINIUM)
    for shape in (Cylinder(0.01, 0.05), Box(0.01, 0.02, 0.05)):
        pin = part("pin", shape, (0.1, 0.01, 0.002), (0.1, 0.2, 0.3), copies=Mirrored())
        before = Assembly("mirror", (plate, pin))
        after = counted_once(before, "pin", "plate")
        assert len(after.node("plate").cuts) == 2
        assert gone(after)
        # Both take the same out, by symmetry.
        one, two = after.node("plate").cutting.removed
        assert float(one.mass.sum()) == pytest.approx(float(two.mass.sum()), rel=1e-9)
        assert one.centre[0] * [-1, 1, 1] == pytest.approx(two.centre[0], rel=1e-9, abs=1e-12)
    wedge = part("wedge", Wedge(0.03, 0.02, 0.05), (0.1, 0.01, 0.0), copies=Mirrored())
    with pytest.raises(EditRefused, match="cannot stand for its own mirror image"):
        counted_once(Assembly("mirror", (plate, wedge)), "wedge", "plate")


def test_a_weighed_part_keeps_its_mass_and_loses_the_room():
    before = pressed()
    before = before.replaced(replace(before.node("plate"), driver=Weighed(6.0)))
    after = counted_once(before, "pin", "plate")
    assert after.node("plate").single.mass == 6.0
    assert after.node("plate").single.centre[0] < 0 == before.node("plate").single.centre[0]


def test_the_mark_goes_its_note_and_the_typed_dimensions_stay_with_the_cut():
    before = pressed(typed=(("dimension.diameter", "2 * pin_r"), ("position.0", "150 mm")))
    before = before.with_meant(MeantOverlap("pin", "plate", "pin", "H7/p6"))
    after = counted_once(before, "pin", "plate")
    (cut,) = after.node("plate").cuts
    assert (cut.note, cut.typed) == ("H7/p6", (("dimension.diameter", "2 * pin_r"),))
    assert after.meant == ()
    moved = after.replaced(replace(after.node("pin"), pose=Pose((0.0, 0.1, 0.008))))
    assert overlaps_of(moved).found[0].meant is None


def test_the_finding_says_how_it_is_counted_once():
    def told(assembly):
        return overlap_findings(assembly, overlaps_of(assembly))[0].check.text

    assert told(pressed()).endswith("Move one, count it once by cutting the one out of the other, or mark it as meant.")
    marked = pressed().with_meant(MeantOverlap("plate", "pin", "pin"))
    assert told(marked).endswith("of the total. Count it once by cutting pin out of plate.")
    marked = pressed().with_meant(MeantOverlap("plate", "pin"))
    assert told(marked).endswith("of the total. Count it once by cutting one out of the other.")


def test_a_mesh_can_be_cut_and_cannot_carry():
    body = MeshBody(MeshAsset.of_bytes(binary_stl(box(100, 100, 20)), "block.stl"), 0.001)
    block = Part("block", "block", body, ALUMINIUM)
    middle = block.bounds.mean(axis=0)
    before = Assembly("mesh", (block, part("pin", Box(0.01, 0.01, 0.05), tuple((middle + np.array([0.02, 0, 0])).tolist()))))
    after = counted_once(before, "pin", "block")
    assert gone(after)
    (found,) = overlaps_of(before).found
    assert before.total.mass - after.total.mass == pytest.approx(2700 * found.volume, rel=1e-9)
    with pytest.raises(EditRefused, match=r"block out of pin: only a shape .* block is none\. Let pin carry it"):
        counted_once(before, "block", "pin")


def test_what_cannot_be_taken_out_is_refused_and_the_other_way_round_told():
    plate, pin = pressed().members
    known = Part("known", "bearing", KnownAxial(0.5, (0, 0, 0), 1e-4, 0.02), DataSheet())
    hollow = replace(pin, cuts=(Cut("c", "bore", Cylinder(0.004, 0.05)),))
    split = replace(pin, cuts=(Cut("c", "head hole", Cylinder(0.004, 0.01), Pose((0, 0, 0.04))),))
    for members, carrier, other, words in (
        ((plate, known), "plate", "known", "its data sheet gives the values"),
        ((known, plate), "known", "plate", "only a shape can be taken out of a part, and bearing is none"),
        ((plate, part("d", ThinDisc(0.3, 0.0), driver=Weighed(1))), "plate", "d", "d: it has no thickness"),
        ((plate, part("d", ThinDisc(0.3, 0.0), driver=Weighed(1))), "d", "plate", "only a solid can be taken out of a part"),
        ((plate, hollow), "pin", "plate", "pin, bore: it has a cut of its own where the two meet.*such as a tube"),
        ((plate, part("pin", Cylinder(0.01, 0.05), (0.5, 0, 0))), "pin", "plate", "have nothing in common"),
        ((plate, replace(pin, copies=Several(3))), "pin", "plate", "pin: equal copies without a spacing"),
        ((plate, Group("g", "g", (pin,))), "g", "plate", "carried by one of two parts"),
    ):
        with pytest.raises(EditRefused, match=words):
            counted_once(Assembly("a", members), carrier, other)
    assert gone(counted_once(Assembly("a", (plate, split)), "pin", "plate"))


def test_a_carrier_that_a_variant_leaves_out_is_refused():
    plate, pin = pressed().members
    before = Assembly("a", (plate, replace(pin, only_in=("full",))), variants=("empty", "full"))
    with pytest.raises(EditRefused, match=r"pin is missing in a variant in which plate is there.*Let plate carry it"):
        counted_once(before, "pin", "plate")
    both = Assembly("a", (replace(plate, only_in=("full",)), replace(pin, only_in=("full",))), variants=("empty", "full"))
    assert gone(counted_once(both, "pin", "plate"))


def test_more_copies_than_anybody_wants_as_cuts_are_refused():
    plate, pin = pressed().members
    many = replace(pin, copies=Ring(MOST_LOOKED_AT))
    with pytest.raises(EditRefused, match=f"at most {MOST_LOOKED_AT} copies are looked at.*ring or row of cuts"):
        counted_once(Assembly("a", (plate, many)), "pin", "plate")
    pairs = Group("g", "pairs", (replace(pin, copies=Row(2, (-0.02, 0, 0))),), copies=Ring(MOST_CUTS_AT_ONCE // 2 + 1))
    with pytest.raises(EditRefused, match=f"at most {MOST_CUTS_AT_ONCE} cuts are put in at once"):
        counted_once(Assembly("a", (plate, pairs)), "pin", "plate")


def test_it_is_one_step_of_undo():
    history = History(Machine(pressed()))
    once = history.edited("Count it once", history.present.with_assembly(counted_once(pressed(), "pin", "plate")))
    assert once.undone().present.assembly == pressed()
