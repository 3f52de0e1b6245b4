"""Cuts out of meshes, and what holds for all cuts: order, place, copies, keys."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from cut_parts import CROSSING, DENSITY, bore, cylinder_moments, part
from hypothesis import given, settings
from hypothesis import strategies as st
from oracles import assert_same_body
from strategies import ANGLES, LENGTHS, placements, poses

from core.assembly import Assembly, Cut, Group, MeshBody, Part, ShapeBody, compare_mesh, solid_cuts
from core.errors import Cancelled, EditRefused
from core.material import ByDensity, NotSet
from core.mesh import MeshAsset
from core.mesh.stl_writing import stl_of_triangles
from core.moments import Moments
from core.placement import Mirrored, Placement, Pose, Ring, Row, turns_of_matrix
from core.progress import Progress
from core.shapes import (
    Box,
    Cylinder,
    Sphere,
)

# --- meshes -----------------------------------------------------------------------------------------------------


def mesh_of(facets, metres_per_unit=1e-3, name="body.stl"):
    triangles = (facets.triangles / metres_per_unit).astype(np.float32)
    return MeshBody(MeshAsset.of_bytes(stl_of_triangles(triangles, name), name), metres_per_unit)


def test_a_bore_in_a_mesh_is_subtracted_from_its_facets():
    body = mesh_of(Box(0.1, 0.06, 0.02).facets())
    subject = Part("m", "mesh", body, ByDensity(DENSITY), cuts=(bore(0.02, 0.05, (0.01, 0.0, -0.01)),))
    expected = body.solid - cylinder_moments(0.01, 0.02, (0.01, 0.0, 0.01))
    assert_same_body(subject.solid, expected, rel=1e-7)


def test_a_pocket_within_a_mesh_is_subtracted_in_closed_form():
    body = mesh_of(Sphere(0.1).facets(96))
    subject = Part("m", "mesh", body, ByDensity(DENSITY), cuts=(bore(0.02, 0.03, (0.01, 0.0, -0.01)),))
    assert_same_body(subject.cutting.total, cylinder_moments(0.01, 0.03, (0.01, 0.0, 0.005)), rel=1e-13)
    assert subject.cutting.exact


def test_cuts_in_a_mesh_count_once_where_they_overlap():
    body = mesh_of(Box(0.1, 0.1, 0.1).facets())
    across = bore(0.02, 0.2, (0.0, -0.1, 0.05), (-np.pi / 2, 0.0, 0.0), key="across")
    subject = Part("m", "mesh", body, ByDensity(DENSITY), cuts=(bore(0.02, 0.2, (0, 0, -0.05)), across))
    expected = 2 * np.pi * 0.01**2 * 0.1 - 16 * 0.01**3 / 3
    assert float(subject.cutting.total.mass) == pytest.approx(expected, rel=CROSSING)


def test_an_inside_out_mesh_is_cut_as_it_is_weighed():
    facets = Box(0.1, 0.06, 0.02).facets()
    body = mesh_of(replace_corners(facets))
    assert body.asset.survey.verdict == "inside out"
    subject = Part("m", "mesh", body, ByDensity(DENSITY), cuts=(bore(0.02, 0.05, (0.01, 0.0, -0.01)),))
    assert float(subject.solid.mass) == pytest.approx(0.1 * 0.06 * 0.02 - np.pi * 0.01**2 * 0.02, rel=1e-6)


def replace_corners(facets):
    return type(facets)(facets.points, facets.corners[:, ::-1])


def test_a_mesh_with_hairline_cracks_or_a_hole_is_cut_as_it_is_weighed():
    facets = Box(0.1, 0.06, 0.02).facets()
    expected = 0.1 * 0.06 * 0.02 - np.pi * 0.01**2 * 0.02
    cracked = facets.triangles.copy()
    cracked[0, 0] += 2e-8
    cracked = MeshBody(MeshAsset.of_bytes(stl_of_triangles(cracked * 1e3, "c.stl"), "c.stl"), 1e-3)
    holed = mesh_of(type(facets)(facets.points, facets.corners[:-1]))
    for body, verdict in ((cracked, "hairline cracks"), (holed, "open")):
        assert body.asset.survey.verdict == verdict
        subject = Part("m", "mesh", body, ByDensity(DENSITY), cuts=(bore(0.02, 0.05, (0.01, 0.0, -0.01)),))
        assert float(subject.solid.mass) == pytest.approx(expected, rel=1e-5)


def test_a_mesh_that_bounds_no_volume_is_not_cut():
    facets = Box(0.1, 0.06, 0.02).facets()
    mixed = facets.triangles.copy()
    mixed[:2] = mixed[:2, ::-1]
    body = MeshBody(MeshAsset.of_bytes(stl_of_triangles(mixed * 1e3, "m.stl"), "m.stl"), 1e-3)
    subject = Part("m", "mixed", body, ByDensity(DENSITY), cuts=(bore(0.02, 0.05, (0, 0, -0.01)),))
    assert subject.solid is None
    assert subject.cutting is None
    assert subject.surface.corners.shape[1] == 3


def test_a_mesh_whose_edges_belong_to_four_facets_is_cut():
    block = Box(0.1, 0.06, 0.02).facets()
    touching = np.concatenate([block.triangles, block.triangles + np.array([0.1, 0.06, 0.0])]) * 1e3
    body = MeshBody(MeshAsset.of_bytes(stl_of_triangles(touching, "t.stl"), "t.stl"), 1e-3)
    subject = Part("m", "two", body, ByDensity(DENSITY), cuts=(bore(0.02, 0.05, (0, 0, -0.01)),))
    assert float(subject.solid.mass) == pytest.approx(0.02 * (2 * 0.1 * 0.06 - np.pi * 0.01**2), rel=1e-6)


def test_a_surface_that_the_solids_refuse_is_refused_in_a_whole_sentence(monkeypatch):
    monkeypatch.setattr(solid_cuts, "solid_of", lambda *_: None)
    subject = Part("m", "two", mesh_of(Box(0.1, 0.06, 0.02).facets()), ByDensity(DENSITY), cuts=(bore(0.02, 0.05),))
    with pytest.raises(EditRefused) as refusal:
        _ = subject.solid
    assert str(refusal.value) == (
        "two: the surface does not close edge to edge, so nothing can be taken out of it. "
        "Mend the mesh, or leave the cuts out."
    )
    np.testing.assert_array_equal(subject.surface.points, subject.body.surface.points)


def test_both_values_of_a_mesh_lose_the_same_cut():
    body = mesh_of(Cylinder(0.1, 0.02).facets(48))
    bored = bore(0.02, 0.05, (0.0, 0.0, -0.01))
    faceted = Part("m", "mesh", body, ByDensity(DENSITY), cuts=(bored,))
    restored = replace(faceted, body=replace(body, counts="restored"))
    gained = float(restored.body.solid.mass - faceted.body.solid.mass)
    assert gained > 0
    assert float(restored.solid.mass - faceted.solid.mass) == pytest.approx(gained, rel=1e-9)


def test_cutting_a_mesh_can_be_watched_and_stopped():
    progress = Progress("cutting")
    body = mesh_of(Box(0.1, 0.06, 0.02).facets())
    subject = Part("m", "mesh", body, NotSet(), cuts=(bore(0.02, 0.05, (0.01, 0.0, -0.01)),))
    subject.cut_with(progress)
    assert progress.fraction > 0
    other = replace(subject, cuts=(bore(0.03, 0.05, (0.01, 0.0, -0.01)),))
    progress = Progress("cutting")
    progress.cancel()
    with pytest.raises(Cancelled):
        other.cut_with(progress)
    assert not other.cuts_take_long


# --- properties -------------------------------------------------------------------------------------------------

SEARCH = settings(deadline=None, max_examples=30)


@st.composite
def bored_discs(draw):
    """A disc with a ring of holes that fit into it, and a bore."""
    diameter, length = draw(LENGTHS), draw(LENGTHS)
    hole = diameter * draw(st.floats(0.01, 0.1))
    holes = bore(hole, 2 * length, (0.3 * diameter, 0.0, -0.5 * length), copies=Ring(draw(st.integers(1, 8))), key="h")
    centre = bore(diameter * draw(st.floats(0.05, 0.4)), length, key="c")
    return part(Cylinder(diameter, length), holes, centre)


@SEARCH
@given(bored_discs())
def test_what_is_cut_out_and_put_back_gives_the_body(subject):
    assert_same_body(subject.solid + subject.cutting.total, subject.body.solid, rel=1e-12)


@SEARCH
@given(bored_discs())
def test_the_order_of_cuts_that_do_not_meet_changes_nothing(subject):
    turned = replace(subject, cuts=subject.cuts[::-1])
    assert_same_body(turned.solid, subject.solid, rel=1e-14)


@SEARCH
@given(bored_discs(), poses)
def test_a_part_moved_is_the_moved_body_less_the_moved_cuts(subject, pose):
    moved = replace(subject, pose=pose)
    body = pose.placement.place(subject.body.solid)
    removed = [pose.placement.place(each).total() for each in subject.cutting.removed]
    expected = (body - removed[0] - removed[1]).times(DENSITY)
    assert_same_body(moved.table.moments.total(), expected, rel=1e-12)


@settings(deadline=None, max_examples=8)
@given(placements(), st.floats(0.2, 0.8), ANGLES)
def test_a_mesh_and_its_cuts_may_stand_anywhere(tf, share, angle):
    """Turn and shift mesh and cut together: what is left turns and shifts with them."""
    facets = Box(0.1, 0.06, 0.02).facets()
    here = bore(0.03 * share, 0.04, (0.05 * share, 0.0, -0.01), (0.3 * share, 0.0, angle))
    standing = tf @ here.pose.placement
    there = replace(here, pose=Pose(tuple(standing.shift), turns_of_matrix(standing.turn)))
    first = Part("a", "a", mesh_of(facets), ByDensity(1.0), cuts=(here,)).cutting.total
    moved = mesh_of(type(facets)(tf.apply(facets.points), facets.corners))
    second = Part("b", "b", moved, ByDensity(1.0), cuts=(there,)).cutting.total
    # Coordinates of the file are single precision, about a metre from the origin.
    assert_same_body(second, tf.place(first), rel=2e-5, size=0.1)


def test_a_row_of_holes_is_as_many_single_holes():
    row = part(Box(0.2, 0.06, 0.02), bore(0.01, 0.02, (-0.08, 0.0, 0.0), copies=Row(5, (0.04, 0.0, 0.0))))
    singles = [bore(0.01, 0.02, (-0.08 + 0.04 * i, 0.0, 0.0), key=str(i)) for i in range(5)]
    assert_same_body(row.solid, part(Box(0.2, 0.06, 0.02), *singles).solid, rel=1e-14)


def test_a_mirrored_cut_is_its_mirror_image():
    wedge = Cut("w", "w", Box(0.02, 0.03, 0.05), Pose((0.045, 0.02, 0.0), (0.0, 0.0, 0.5)), Mirrored())
    subject = part(Box(0.1, 0.1, 0.05), wedge)
    first, image = (Moments(*(each[i] for each in (subject.cutting.removed[0].mass, subject.cutting.removed[0].centre,
                                                   subject.cutting.removed[0].spread))) for i in (0, 1))
    assert_same_body(image, Placement(np.diag([-1.0, 1.0, 1.0]), np.zeros(3)).place(first), rel=1e-12)


def test_the_comparison_of_a_meshs_two_sets_of_values_is_of_what_its_cuts_leave():
    body = mesh_of(Cylinder(0.1, 0.02).facets(48))
    subject = Part("m", "mesh", body, ByDensity(DENSITY), cuts=(bore(0.05, 0.05, (0.0, 0.0, -0.01)),))
    compared = compare_mesh(subject, np.array([0.0, 0.0, 1.0]))
    removed = np.pi * 0.025**2 * 0.02
    assert compared.volume.faceted == pytest.approx(float(body.faceted.mass) - removed, rel=1e-6)
    assert compared.volume.restored == pytest.approx(np.pi * 0.05**2 * 0.02 - removed, rel=1e-4)
    outer, inner = 0.05**4, 0.025**4
    assert compared.inertia.restored == pytest.approx(DENSITY * np.pi / 2 * (outer - inner) * 0.02, rel=1e-4)


def test_a_line_is_found_and_replaced_by_its_key_whatever_it_is() -> None:
    bore = Cut("c1", "bore", Cylinder(diameter=0.02, length=0.05))
    plate = Part("p1", "plate", ShapeBody(Box(0.1, 0.1, 0.02)), ByDensity(7850.0), cuts=(bore,))
    assembly = Assembly("a", (Group("g1", "top", (plate,)),))
    assert [assembly.line(key).name for key in ("g1", "p1", "c1")] == ["top", "plate", "bore"]
    for key in ("g1", "p1", "c1"):
        renamed = assembly.with_line(replace(assembly.line(key), name="other"))
        assert renamed.line(key).name == "other"
        assert [renamed.line(other).name for other in ("g1", "p1", "c1") if other != key].count("other") == 0
