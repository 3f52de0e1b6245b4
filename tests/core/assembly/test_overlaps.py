"""What parts have in common is found, measured and counted, and contact is not taken for it."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mesh_files import binary_stl, box
from strategies import placements

from core.assembly import Assembly, Cut, DataSheet, Group, KnownAxial, MeshBody, Part, ShapeBody
from core.assembly.assembly import MeantOverlap
from core.assembly.overlaps import MOST_TOLD, overlaps_of
from core.document import read_document, save_document
from core.errors import Cancelled, EditRefused
from core.machine import Machine
from core.material import ByDensity, NotSet, PerArea, Weighed
from core.mesh import MeshAsset
from core.placement import Mirrored, Pose, Ring, Row, Several, turns_of_matrix
from core.progress import Progress
from core.shapes import Box, Cylinder, Sphere, ThinDisc, Tube

STEEL, ALUMINIUM = ByDensity(7850.0), ByDensity(2700.0)
# From two finenesses of 24 and 48 steps: the rest of the error.
CARRIED_ON = 1e-4


def part(key, shape, at=(0.0, 0.0, 0.0), turns=(0.0, 0.0, 0.0), copies=Several(1), driver=STEEL):
    return Part(key, key, ShapeBody(shape), driver, Pose(at, turns), copies)


def assembly(*members):
    return Assembly("test", members)


def only(*members):
    (found,) = overlaps_of(assembly(*members)).found
    return found


def test_two_half_overlapping_boxes_count_half_of_one_twice():
    found = only(part("a", Box(0.1, 0.1, 0.1)), part("b", Box(0.1, 0.1, 0.1), (0.05, 0, 0), driver=ALUMINIUM))
    assert found.keys == ("a", "b")
    assert found.count == 1
    assert found.volume == pytest.approx(5e-4, rel=1e-12)
    assert found.masses == pytest.approx((7850 * 5e-4, 2700 * 5e-4), rel=1e-12)
    assert found.mass == pytest.approx(2700 * 5e-4, rel=1e-12)
    # A cuboid 0.05 × 0.1 × 0.1 whose centre is 0.025 from the axis: m (b² + d²) / 12 + m e².
    per_mass = (0.05**2 + 0.1**2) / 12 + 0.025**2
    assert found.inertias == pytest.approx((7850 * 5e-4 * per_mass, 2700 * 5e-4 * per_mass), rel=1e-9)
    low, high = found.surface.points.min(axis=0), found.surface.points.max(axis=0)
    assert low == pytest.approx([0, -0.05, low[2]])
    assert high == pytest.approx([0.05, 0.05, low[2] + 0.1])
    assert not found.same
    assert found.edges.shape[1:] == (2, 3)


@pytest.mark.parametrize("radius", [0.01, 0.05])
def test_two_crossing_bars_share_steinmetz_solid(radius):
    """16 r³ / 3, known to Archimedes (The Method) and Zu Chongzhi."""
    found = only(
        part("a", Cylinder(2 * radius, 1.0)), part("b", Cylinder(2 * radius, 1.0), (0.5, 0, 0.5), (0, -np.pi / 2, 0))
    )
    assert found.volume == pytest.approx(16 / 3 * radius**3, rel=CARRIED_ON)


def test_two_parallel_bars_share_the_lens_of_their_circles():
    """2 r² acos(d/2r) − d/2 √(4r² − d²) times the length that both have (plane geometry)."""
    r, d = 0.04, 0.05
    found = only(part("a", Cylinder(2 * r, 0.2)), part("b", Cylinder(2 * r, 0.2), (d, 0, 0.05)))
    lens = 2 * r * r * np.arccos(d / (2 * r)) - d / 2 * np.sqrt(4 * r * r - d * d)
    # Its tips fall between the corners of the polygons, wherever these are, so some of the facets' error stays.
    assert found.volume == pytest.approx(lens * 0.15, rel=5e-4)


def test_a_ring_of_six_on_a_plate_is_one_overlap_of_six_pairs():
    plate, pins = part("plate", Cylinder(0.4, 0.02)), part("pins", Cylinder(0.02, 0.04), (0.15, 0, 0.01), copies=Ring(6))
    for members in ((plate, pins), (pins, plate)):
        found = only(*members)
        assert found.count == 6
        assert found.volume == pytest.approx(6 * np.pi * 0.01**2 * 0.01, rel=CARRIED_ON)
        mass = 7850 * found.volume
        assert found.inertia == pytest.approx(mass * (0.01**2 / 2 + 0.15**2), rel=CARRIED_ON)
        whole = 7850 * np.pi * (0.2**4 * 0.02 / 2 + 6 * 0.01**2 * 0.04 * (0.01**2 / 2 + 0.15**2))
        assert found.share == pytest.approx(found.inertia / whole, rel=1e-9)


def test_equal_pairs_are_cut_once(monkeypatch):
    from core.assembly import overlaps

    cut, seen = overlaps._common, []
    monkeypatch.setattr(overlaps, "_common", lambda *given: seen.append(given) or cut(*given))
    pins = part("pins", Box(0.02, 0.02, 0.04), (0.15, 0, 0.01), copies=Ring(24))
    found = overlaps_of(assembly(part("plate", Cylinder(0.4, 0.02)), pins)).found
    assert found[0].count == 24
    assert len(seen) == 1


def test_copies_of_one_part_that_stand_too_close_overlap():
    found = only(part("row", Box(0.1, 0.1, 0.1), copies=Row(5, (0.08, 0, 0))))
    assert found.keys == ("row", "row")
    assert found.count == 4
    assert found.volume == pytest.approx(4 * 0.02 * 0.1 * 0.1, rel=1e-12)


@pytest.mark.parametrize("turn", [0.0, 0.05, 0.3])
def test_a_shaft_that_fills_its_bore_is_contact(turn):
    tube, shaft = part("tube", Tube(0.1, 0.06, 0.4)), part("shaft", Cylinder(0.06, 0.4), turns=(0, 0, turn))
    assert overlaps_of(assembly(tube, shaft)).found == ()
    plate = Part("plate", "plate", ShapeBody(Box(0.2, 0.2, 0.05)), STEEL, cuts=(Cut("c", "bore", Cylinder(0.06, 0.05)),))
    assert overlaps_of(assembly(plate, shaft)).found == ()


def test_a_shaft_wider_than_its_bore_overlaps_by_the_ring_between():
    found = only(part("tube", Tube(0.1, 0.06, 0.1)), part("shaft", Cylinder(0.062, 0.1), turns=(0, 0, 0.03)))
    assert found.volume == pytest.approx(np.pi / 4 * (0.062**2 - 0.06**2) * 0.1, rel=1e-3)


def test_boxes_and_discs_that_stand_on_each_other_are_contact():
    assert overlaps_of(assembly(part("a", Box(0.1, 0.1, 0.1)), part("b", Box(0.1, 0.1, 0.1), (0.1, 0.03, 0)))).found == ()
    assert overlaps_of(assembly(part("a", Cylinder(0.1, 0.1)), part("b", Cylinder(0.2, 0.1), (0, 0, 0.1)))).found == ()
    assert overlaps_of(assembly(part("a", Sphere(0.1)), part("b", Sphere(0.1), (0.1, 0, 0)))).found == ()
    assert overlaps_of(assembly(part("a", Box(0.1, 0.1, 0.1)), part("b", Box(0.1, 0.1, 0.1), (0.3, 0, 0)))).found == ()
    assert overlaps_of(assembly()).found == ()


def test_a_bore_makes_room():
    shaft = part("shaft", Cylinder(0.05, 0.05))
    block = part("block", Box(0.2, 0.2, 0.05))
    assert only(shaft, block).volume == pytest.approx(np.pi / 4 * 0.05**2 * 0.05, rel=CARRIED_ON)
    bored = replace(block, cuts=(Cut("c", "bore", Cylinder(0.06, 0.05)),))
    assert overlaps_of(assembly(shaft, bored)).found == ()


def test_the_same_body_twice_at_one_pose_is_named_as_such():
    at, turns = (0.3, 0.1, 0.2), (0.3, 0.5, 0.1)
    found = only(part("a", Tube(0.1, 0.06, 0.4), at, turns), part("b", Tube(0.1, 0.06, 0.4), at, turns))
    assert found.same
    assert found.volume == pytest.approx(np.pi / 4 * (0.1**2 - 0.06**2) * 0.4, rel=1e-12)
    assert found.share == pytest.approx(0.5, rel=1e-9)


def test_the_same_mesh_twice_is_named_as_such_and_a_moved_one_is_measured():
    body = MeshBody(MeshAsset.of_bytes(binary_stl(box(40, 30, 20)), "block.stl"), 0.001)
    mesh = Part("m", "m", body, STEEL, Pose((0.1, 0, 0)))
    again = only(mesh, replace(mesh, key="n", name="n"))
    assert again.same
    assert again.volume == pytest.approx(24e-6, rel=1e-6)
    moved = only(mesh, replace(mesh, key="n", name="n", pose=Pose((0.11, 0, 0))))
    assert not moved.same
    assert moved.volume == pytest.approx(18e-6, rel=1e-6)


def test_equal_copies_without_a_spacing_do_not_overlap_one_another():
    screws = part("screws", Cylinder(0.01, 0.03), copies=Several(12))
    assert overlaps_of(assembly(screws)).found == ()
    assert overlaps_of(assembly(Group("g", "g", (part("a", Box(0.1, 0.1, 0.1)),), copies=Several(3)))).found == ()
    assert only(screws, part("plate", Box(0.1, 0.1, 0.01))).count == 1


def test_thin_bodies_point_masses_and_known_parts_are_left_out_and_said():
    rotor = Part("rotor", "rotor", KnownAxial(1.9, (0, 0, 0), 0.0021, 0.08), DataSheet())
    disc = part("disc", ThinDisc(0.3, 0.0), driver=PerArea(8.0))
    result = overlaps_of(assembly(part("a", Box(0.1, 0.1, 0.1)), rotor, disc))
    assert result.found == ()
    assert [(one.name, one.why) for one in result.left_out] == [
        ("rotor", "its data sheet gives no shape"), ("disc", "it has no thickness"),
    ]


def test_a_part_without_mass_overlaps_all_the_same():
    found = only(part("a", Box(0.1, 0.1, 0.1)), part("b", Box(0.1, 0.1, 0.1), (0.05, 0, 0), driver=NotSet()))
    assert found.masses[1] is None
    assert found.mass == pytest.approx(7850 * 5e-4, rel=1e-12)
    weighed = only(part("a", Box(0.1, 0.1, 0.1), driver=Weighed(2.0)), part("b", Box(0.1, 0.1, 0.1), (0.05, 0, 0)))
    assert weighed.mass == pytest.approx(1.0, rel=1e-12)


@given(placement=placements(), far=st.sampled_from([0.0, 100.0]))
def test_where_two_parts_stand_together_changes_nothing_of_what_they_share(placement, far):
    pose = Pose(tuple((placement.shift + far).tolist()), turns_of_matrix(placement.turn))
    two = (part("a", Box(0.1, 0.08, 0.06)), part("b", Cylinder(0.05, 0.1), (0.03, 0.02, 0.01), (0.4, 0.2, 0.1)))
    here, there = only(*two), only(Group("g", "g", two, pose))
    assert there.volume == pytest.approx(here.volume, rel=1e-6)


@given(order=st.permutations(["plate", "pins", "hub"]))
def test_the_order_of_the_lines_changes_nothing_of_what_they_share(order):
    lines = {
        "plate": part("plate", Cylinder(0.4, 0.02)), "hub": part("hub", Box(0.1, 0.1, 0.1), (0, 0, -0.02)),
        "pins": part("pins", Cylinder(0.02, 0.04), (0.15, 0, 0.01), (0.2, 0.1, 0), copies=Ring(6)),
    }
    found = overlaps_of(assembly(*(lines[name] for name in order))).found
    volumes = {frozenset(one.keys): one.volume for one in found}
    assert set(volumes) == {frozenset({"plate", "hub"}), frozenset({"plate", "pins"})}
    assert volumes[frozenset({"plate", "hub"})] == pytest.approx(0.1 * 0.1 * 0.02, rel=1e-9)


def test_what_a_mirrored_body_shares_is_that_of_its_image():
    wall = part("wall", Box(0.4, 0.4, 0.02), (0, 0, 0.01))
    leaning = part("leaning", Box(0.03, 0.02, 0.1), (0.1, 0.02, 0), (0.5, 0.2, 0.1))
    one = only(wall, leaning)
    both = only(wall, replace(leaning, copies=Mirrored()))
    assert both.count == 2
    assert both.volume == pytest.approx(2 * one.volume, rel=1e-9)


def test_of_a_heap_of_bodies_at_one_place_some_overlaps_are_told_and_that_there_are_more():
    heap = [part(f"p{at}", Box(0.1, 0.1, 0.1)) for at in range(40)]
    result = overlaps_of(assembly(*heap))
    assert len(result.found) == MOST_TOLD
    assert result.skipped


def test_a_search_can_be_stopped():
    progress = Progress("looking for overlaps")
    progress.cancel()
    with pytest.raises(Cancelled):
        overlaps_of(assembly(part("a", Box(0.1, 0.1, 0.1)), part("b", Box(0.1, 0.1, 0.1), (0.05, 0, 0))), progress)


def test_a_meant_overlap_is_marked_and_kept_in_the_document(tmp_path):
    pressed = assembly(part("a", Box(0.1, 0.1, 0.1)), part("b", Box(0.1, 0.1, 0.1), (0.05, 0, 0)))
    assert overlaps_of(pressed).found[0].meant is None
    marked = pressed.with_meant(MeantOverlap("b", "a", "a", "press fit"))
    assert overlaps_of(marked).found[0].meant == MeantOverlap("b", "a", "a", "press fit")
    assert marked.total.mass == pressed.total.mass
    save_document(Machine(marked), tmp_path / "marked.masswright")
    assert read_document(tmp_path / "marked.masswright").assembly == marked
    assert marked.without_meant("a", "b") == pressed
    assert marked.moved("a", None, 1).meant == marked.meant
    assert marked.removed(("b",)).meant == ()


def test_a_mark_names_two_parts_that_are_there_and_one_of_them_as_carrier():
    pressed = assembly(part("a", Box(0.1, 0.1, 0.1)), part("b", Box(0.1, 0.1, 0.1), (0.05, 0, 0)))
    with pytest.raises(EditRefused, match="a common volume is carried by one of the two parts; read c"):
        MeantOverlap("a", "b", "c")
    with pytest.raises(EditRefused, match="no such line"):
        pressed.with_meant(MeantOverlap("a", "c"))
