"""Cuts: closed form where they lie inside, the true intersection where they do not, words where they make no sense."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from cut_parts import CROSSING, DOUBLY_CURVED, bore, cylinder_moments, part
from oracles import assert_same_body, directed_edges_cancel, moments_of_facets

from core.assembly import Cut, KnownAxial, Part, ShapeBody
from core.assembly.nodes import DataSheet
from core.errors import EditRefused, ShapeError
from core.material import ByDensity, PerArea, Weighed
from core.moments import Moments
from core.placement import Mirrored, Pose, Ring
from core.shapes import (
    Box,
    Cone,
    Cylinder,
    Extruded,
    HollowSphere,
    Outline,
    OutlinePoint,
    RegularPrism,
    Sphere,
    ThinDisc,
    Torus,
    Tube,
)

# --- inside: exact ----------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("length", "start", "turn"),
    [(0.02, 0.0, 0.0), (0.05, -0.015, 0.0), (0.05, 0.035, np.pi), (0.02, 0.01, 0.0), (0.03, -0.02, 0.0)],
)
def test_a_bore_through_a_block_is_subtracted_exactly_however_far_its_ends_stick_out(length, start, turn):
    cut = part(Box(0.1, 0.06, 0.02), bore(0.02, length, (0.02, -0.01, start), (turn, 0.0, 0.0)))
    low, high = (start - length, start) if turn else (start, start + length)
    low, high = max(low, 0.0), min(high, 0.02)
    whole = Moments(0.1 * 0.06 * 0.02, (0, 0, 0.01), 0.1 * 0.06 * 0.02 * np.diag([0.1**2, 0.06**2, 0.02**2]) / 12)
    expected = whole - cylinder_moments(0.01, high - low, (0.02, -0.01, (low + high) / 2))
    assert_same_body(cut.solid, expected, rel=1e-14)
    assert cut.cutting.exact
    assert cut.cutting.outside[0] == pytest.approx(1 - (high - low) / length, abs=1e-12)


def test_a_disc_with_a_hole_off_its_centre_has_the_inertia_of_the_textbook():
    # Disc of radius 250 mm less a hole of radius 125 mm that reaches from its centre to its rim, 10 mm thick, 8000
    # kg/m³, about the point O on the rim: Hibbeler, Dynamics, 14th ed., example 17.3 gives 1.20 kg·m² (from memory:
    # the answer has three figures); closed form beside it.
    disc = part(Cylinder(0.5, 0.01), bore(0.25, 0.01), driver=ByDensity(8000.0))
    outer, inner = 8000 * np.pi * 0.25**2 * 0.01, 8000 * np.pi * 0.125**2 * 0.01
    expected = 1.5 * outer * 0.25**2 - (0.5 * inner * 0.125**2 + inner * 0.25**2)
    about = float(disc.single.inertia_about_axis((0.25, 0.0, 0.0), (0.0, 0.0, 1.0)))
    assert about == pytest.approx(expected, rel=1e-14)
    assert round(about, 2) == 1.20


def test_a_ring_of_holes_is_subtracted_exactly():
    holes = bore(0.02, 0.03, (0.15, 0.0, -0.005), copies=Ring(7))
    cut = part(Cylinder(0.4, 0.02), holes)
    mass = np.pi * 0.01**2 * 0.02
    along = np.pi * 0.2**2 * 0.02 * 0.2**2 / 2 - 7 * mass * (0.01**2 / 2 + 0.15**2)
    assert float(cut.solid.inertia_about_axis((0, 0, 0), (0, 0, 1))) == pytest.approx(along, rel=1e-14)
    assert cut.cutting.removed[0].mass == pytest.approx(np.full(7, mass), rel=1e-14)


@pytest.mark.parametrize(
    ("body", "cut"),
    [
        (Cylinder(0.1, 0.03), Cut("c", "c", Box(0.05, 0.02, 0.03), Pose((0.01, 0.0, 0.02)))),
        (Cylinder(0.1, 0.03), Cut("c", "c", RegularPrism(6, 0.03, 0.05), Pose((0.01, 0.0, -0.01)))),
        (RegularPrism(6, 0.1, 0.03), Cut("c", "c", Cylinder(0.1, 0.01))),
        (RegularPrism(6, 0.1, 0.03), Cut("c", "c", Box(0.03, 0.04, 0.01), Pose((0.0, 0.01, 0.0), (0.0, 0.0, 0.7)))),
        (Tube(0.1, 0.04, 0.03), Cut("c", "c", Cylinder(0.03, 0.03), Pose((0.035, 0.0, 0.0)))),
        (Cylinder(0.1, 0.03), Cut("c", "c", Tube(0.06, 0.04, 0.01), Pose((0.0, 0.0, 0.02)))),
        (Box(0.1, 0.1, 0.1), Cut("c", "c", Sphere(0.05), Pose((0.0, 0.0, 0.05)))),
        (Box(0.1, 0.1, 0.1), Cut("c", "c", Cone(0.02, 0.03), Pose((0.0, 0.0, 0.1), (np.pi, 0.0, 0.0)))),
        (Box(0.1, 0.1, 0.1), Cut("c", "c", Cylinder(0.02, 0.03), Pose((0.0, 0.0, 0.05), (0.4, 0.3, 0.0)))),
        (Sphere(0.1), Cut("c", "c", Box(0.02, 0.03, 0.04), Pose((0.01, 0.0, -0.02), (0.4, 0.3, 0.0)))),
        (Box(0.1, 0.1, 0.1), Cut("c", "c", Torus(0.05, 0.02), Pose((0.0, 0.0, 0.05)))),
        (HollowSphere(0.1, 0.04), Cut("c", "c", Sphere(0.01), Pose((0.035, 0.0, 0.0)))),
        (Torus(0.2, 0.06), Cut("c", "c", Box(0.02, 0.03, 0.01), Pose((0.1, 0.0, 0.0)))),
    ],
    ids=lambda value: value.title if hasattr(value, "title") else value.shape.title,
)
def test_what_lies_inside_is_subtracted_in_closed_form(body, cut):
    subject = part(body, cut)
    placed = cut.pose.placement.place(cut.shape.moments())
    if cut.shape.title == "regular prism":  # sticks out at both ends: 30 of its 50 mm are inside
        placed = Pose((0.01, 0.0, 0.0)).placement.place(RegularPrism(6, 0.03, 0.03).moments())
    if cut.shape.title == "box" and body.title == "cylinder":
        placed = Pose((0.01, 0.0, 0.02)).placement.place(Box(0.05, 0.02, 0.01).moments())
    assert_same_body(subject.cutting.total, placed, rel=1e-13)
    assert_same_body(subject.solid, body.moments() - placed, rel=1e-13)
    assert subject.cutting.exact


def test_a_pocket_of_the_bodys_own_width_shortens_it():
    cut = part(Cylinder(0.1, 0.05), bore(0.1, 0.02, (0.0, 0.0, 0.03)))
    assert_same_body(cut.solid, cylinder_moments(0.05, 0.03, (0, 0, 0.015)), rel=1e-13)


def test_a_slot_in_a_plate_is_found_inside_and_subtracted_exactly():
    slot = Outline((
        (OutlinePoint(-0.01, -0.005), OutlinePoint(0.01, -0.005, 0.0, 0.005), OutlinePoint(0.01, 0.005),
         OutlinePoint(-0.01, 0.005, 0.0, 0.005)),
    ))
    plate = part(Extruded.of({"length": 0.01}), Cut("s", "slot", Extruded(slot, 0.01), Pose((0.06, 0.025, 0.0))))
    volume = float(plate.body.solid.mass) - (0.02 * 0.01 + np.pi * 0.005**2) * 0.01
    # The plate of 80 × 50 mm has a hole at (25, 25) mm, and the slot lies beside it.
    assert float(plate.solid.mass) == pytest.approx(volume, rel=1e-12)
    assert plate.cutting.exact


# --- sticking out, overlapping: the true intersection -----------------------------------------------------------


def test_half_a_hole_over_an_edge_counts_only_inside():
    cut = part(Box(0.1, 0.06, 0.02), bore(0.02, 0.04, (0.05, 0.0, -0.01)))
    half = np.pi * 0.01**2 / 2 * 0.02
    assert float(cut.cutting.total.mass) == pytest.approx(half, rel=CROSSING)
    # The centroid of a half disc lies 4r/(3π) from its diameter.
    assert cut.cutting.total.centre == pytest.approx([0.05 - 4 * 0.01 / (3 * np.pi), 0.0, 0.01], abs=CROSSING * 0.01)
    assert cut.cutting.outside[0] == pytest.approx(0.75, rel=1e-3)
    assert not cut.cutting.exact


@pytest.mark.parametrize("distance", [-0.006, 0.001, 0.004, 0.008])
def test_a_hole_over_an_edge_leaves_the_circular_segment(distance):
    cut = part(Box(0.1, 0.06, 0.02), bore(0.02, 0.04, (0.05 - distance, 0.0, -0.01)))
    segment = 0.01**2 * np.arccos(distance / 0.01) - distance * np.sqrt(0.01**2 - distance**2)
    expected = (np.pi * 0.01**2 - segment) * 0.02
    assert float(cut.cutting.total.mass) == pytest.approx(expected, rel=3 * CROSSING)


def test_crossing_bores_share_the_solid_of_two_cylinders():
    # Two equal cylinders that cross at right angles have 16 r³/3 in common (Archimedes; Zu Chongzhi).
    radius, side = 0.01, 0.1
    along = bore(2 * radius, 0.2, (0.0, 0.0, -0.05), key="along")
    across = bore(2 * radius, 0.2, (0.0, -0.1, 0.05), (-np.pi / 2, 0.0, 0.0), key="across")
    cut = part(Box(side, side, side), along, across)
    one, shared = np.pi * radius**2 * side, 16 * radius**3 / 3
    first, second = (float(removed.mass.sum()) for removed in cut.cutting.removed)
    assert first == pytest.approx(one, rel=CROSSING)
    assert second == pytest.approx(one - shared, rel=CROSSING)
    assert cut.cutting.shared == (pytest.approx(0.0, abs=1e-12), pytest.approx(shared / (2 * one), rel=1e-3))
    assert cut.cutting.total.centre == pytest.approx([0.0, 0.0, 0.05], abs=1e-9)


def test_a_bore_through_a_ball_leaves_a_ring_that_only_its_height_decides():
    # The volume of the ring is π h³/6 whatever the ball's radius (the napkin-ring problem).
    for radius, hole in ((0.03, 0.012), (0.05, 0.02)):
        cut = part(Sphere(2 * radius), bore(2 * hole, 0.2, (0.0, 0.0, -0.1)))
        height = 2 * np.sqrt(radius**2 - hole**2)
        removed = 4 / 3 * np.pi * radius**3 - np.pi * height**3 / 6
        assert float(cut.cutting.total.mass) == pytest.approx(removed, rel=DOUBLY_CURVED)
        assert float(cut.solid.mass) == pytest.approx(np.pi * height**3 / 6, rel=DOUBLY_CURVED)


def test_a_hole_across_a_shaft_agrees_with_quadrature():
    from scipy.integrate import quad

    outer, inner = 0.02, 0.005

    def angle_integral(power):
        # Over the hole's section, x = r·sin t, z = … : chords of the shaft times those of the hole.
        return quad(
            lambda t: 2 * inner * np.cos(t) * inner * np.cos(t) * 2 * (outer**2 - (inner * np.sin(t)) ** 2) ** power,
            -np.pi / 2, np.pi / 2, epsabs=0, epsrel=1e-12,
        )[0]

    cut = part(Cylinder(2 * outer, 0.2), bore(2 * inner, 0.1, (0.0, -0.05, 0.1), (-np.pi / 2, 0.0, 0.0)))
    assert float(cut.cutting.total.mass) == pytest.approx(angle_integral(0.5), rel=CROSSING)
    # ∫ y² over the same: each chord 2c along y has 2c³/3.
    assert cut.cutting.total.spread[1, 1] == pytest.approx(angle_integral(1.5) / 3, rel=2 * CROSSING)


def test_an_oblique_bore_through_a_plate_takes_out_its_section_over_the_cosine():
    cut = part(Box(0.1, 0.06, 0.02), bore(0.02, 0.1, (0.0, 0.0, -0.03), (0.3, 0.0, 0.0)))
    assert float(cut.cutting.total.mass) == pytest.approx(np.pi * 0.01**2 * 0.02 / np.cos(0.3), rel=CROSSING)


def test_holes_of_a_ring_that_run_into_one_another_are_counted_once():
    radius, pitch, count = 0.01, 0.03, 10
    cut = part(Cylinder(0.2, 0.02), bore(2 * radius, 0.02, (pitch, 0.0, 0.0), copies=Ring(count)))
    apart = 2 * pitch * np.sin(np.pi / count)
    lens = 2 * radius**2 * np.arccos(apart / 2 / radius) - apart / 2 * np.sqrt(4 * radius**2 - apart**2)
    expected = count * (np.pi * radius**2 - lens) * 0.02
    assert float(cut.cutting.total.mass) == pytest.approx(expected, rel=DOUBLY_CURVED)
    assert cut.cutting.outside[0] == pytest.approx(0.0, abs=1e-12)
    assert cut.cutting.shared[0] == pytest.approx(lens / (np.pi * radius**2), rel=5e-3)


def test_blocks_that_overlap_and_stick_out_are_exact_to_round_off():
    one = Cut("a", "a", Box(0.04, 0.04, 0.04), Pose((0.05, 0.0, 0.02)))
    two = Cut("b", "b", Box(0.04, 0.04, 0.04), Pose((0.03, 0.02, 0.03)))
    cut = part(Box(0.1, 0.1, 0.05), one, two)
    # a: x 30…70, y −20…20, z 20…60; b: x 10…50, y 0…40, z 30…70; the block ends at x = 50 and z = 50 (mm).
    first, second, both = 20 * 40 * 30, 40 * 40 * 20, 20 * 20 * 20
    assert float(cut.cutting.removed[0].mass[0]) == pytest.approx(first * 1e-9, rel=1e-12)
    assert float(cut.cutting.removed[1].mass[0]) == pytest.approx((second - both) * 1e-9, rel=1e-12)


# --- what is refused --------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("cuts", "sentence"),
    [
        (
            (bore(0.2, 0.02),),
            ("plate, bore: this cut leaves nothing of the body; read a cut of 200 × 200 × 20 mm in a body of "
            "100 × 60 × 20 mm. Make it smaller, or move it."),
        ),
        (
            (bore(0.02, 0.02, (1.0, 0.0, 0.0)),),
            ("plate, bore: this cut takes nothing out: it lies outside the body; read a cut of 20 × 20 × 20 mm. "
            "Move it into the body, or leave it out."),
        ),
        (
            (bore(0.02, 0.02, (0.0, 0.0, 0.02)),),
            ("plate, bore: this cut takes nothing out: it lies outside the body; read a cut of 20 × 20 × 20 mm. "
            "Move it into the body, or leave it out."),
        ),
        (
            (bore(0.02, 0.02), bore(0.01, 0.02, key="smaller")),
            ("plate, smaller: this cut takes nothing out: other cuts have taken it already; read a cut of "
            "10 × 10 × 20 mm. Move it, make it larger, or leave it out."),
        ),
        (
            (Cut("a", "left", Box(0.06, 0.1, 0.1), Pose((-0.02, 0.0, -0.01))),
             Cut("b", "right", Box(0.06, 0.1, 0.1), Pose((0.02, 0.0, -0.01)))),
            ("plate, left: the cuts leave nothing of the body; read a cut of 60 × 100 × 100 mm in a body of "
            "100 × 60 × 20 mm. Make it smaller, or move it."),
        ),
    ],
)
def test_a_cut_that_takes_nothing_or_leaves_nothing_is_refused_in_a_whole_sentence(cuts, sentence):
    with pytest.raises(EditRefused) as refusal:
        _ = part(Box(0.1, 0.06, 0.02), *cuts).solid
    assert str(refusal.value) == sentence


def test_a_bar_cannot_be_cut_away_by_one_of_its_own_size():
    with pytest.raises(EditRefused, match="leaves nothing of the body"):
        _ = part(Cylinder(0.05, 0.1), bore(0.05, 0.1)).solid


def test_a_known_part_and_a_thin_body_take_no_cut():
    with pytest.raises(EditRefused, match="nothing can be cut out of a known part"):
        Part("k", "motor", KnownAxial(1.0, (0, 0, 0), 0.001), DataSheet(), cuts=(bore(0.01, 0.02),))
    with pytest.raises(EditRefused, match="nothing can be cut out of a body without thickness"):
        Part("t", "disc", ShapeBody(ThinDisc(0.2, 0.0)), PerArea(5.0), cuts=(bore(0.01, 0.02),))


def test_only_a_single_solid_is_a_cut():
    with pytest.raises(EditRefused, match="only a solid can be taken out of a part; read thin disc"):
        Cut("c", "c", ThinDisc(0.2, 0.0))
    with pytest.raises(ShapeError, match="a batch of shapes"):
        Cut("c", "c", Cylinder(np.array([0.1, 0.2]), 0.1))


def test_more_holes_than_are_looked_at_in_pairs_are_refused():
    with pytest.raises(EditRefused, match="at most 2000 cuts are taken out of one part; read 2001"):
        part(Cylinder(1.0, 0.1), bore(1e-4, 0.1, (0.3, 0, 0), copies=Ring(2001)))


def test_two_cuts_of_one_key_are_refused():
    with pytest.raises(EditRefused, match="two cuts have the same key"):
        part(Cylinder(1.0, 0.1), bore(0.01, 0.1), bore(0.02, 0.1, (0.3, 0, 0)))


# --- mass, checks, surface --------------------------------------------------------------------------------------


def test_a_weighed_mass_is_that_of_the_finished_part():
    cut = part(Cylinder(0.2, 0.02), bore(0.1, 0.02), driver=Weighed(3.0))
    assert float(cut.single.mass) == pytest.approx(3.0, rel=1e-15)
    assert float(cut.single.own_inertia_along((0, 0, 1))) == pytest.approx(3.0 * (0.1**2 + 0.05**2) / 2, rel=1e-14)


def test_volume_and_density_are_those_of_what_is_left():
    cut = part(Tube(0.2, 0.05, 0.02), bore(0.01, 0.02, (0.06, 0, 0), copies=Ring(6)))
    left = np.pi / 4 * (0.2**2 - 0.05**2 - 6 * 0.01**2) * 0.02
    assert cut.volume == pytest.approx(left, rel=1e-14)
    density = next(check for check in part(Tube(0.2, 0.05, 0.02), bore(0.1, 0.03, (0.1, 0, 0))).checks
                   if check.name == "density")
    assert "2700 kg/m³" in density.text


def test_a_cut_that_sticks_out_or_overlaps_is_said_to():
    edge = part(Box(0.1, 0.06, 0.02), bore(0.02, 0.02, (0.05, 0.0, 0.0)))
    texts = [check.text for check in edge.checks if check.name == "cut"]
    assert texts == ["plate, bore: 50 % of it is outside the body; only what is inside is counted"]
    double = part(Box(0.1, 0.06, 0.02), bore(0.02, 0.02), bore(0.02, 0.02, (0.012, 0, 0), key="next"))
    texts = [check.text for check in double.checks if check.name == "cut"]
    assert len(texts) == 1
    assert texts[0].endswith("% of it overlaps other cuts; what they share is counted once")
    assert all(check.ok for check in double.checks)
    inside = part(Box(0.1, 0.06, 0.02), bore(0.02, 0.02))
    assert not [check for check in inside.checks if check.name == "cut"]


@pytest.mark.parametrize(
    "cut",
    [bore(0.02, 0.02), bore(0.02, 0.03, (0.05, 0.0, -0.005)), bore(0.01, 0.03, (0.03, 0.0, -0.005), copies=Mirrored())],
)
def test_the_surface_to_draw_is_that_of_the_body_less_its_cuts(cut):
    subject = part(Box(0.1, 0.06, 0.02), cut)
    assert directed_edges_cancel(subject.surface)
    drawn = moments_of_facets(subject.surface)
    removed = float(subject.cutting.total.mass)
    # The drawn bore is inscribed: 48 steps around are 0.3 % light.
    assert float(subject.body.solid.mass - drawn.mass) == pytest.approx(removed, rel=4e-3)
    assert float(subject.body.solid.mass - drawn.mass) < removed


def test_what_is_cut_off_changes_the_box_and_a_bore_does_not():
    half = part(Box(0.1, 0.06, 0.02), Cut("c", "c", Box(0.1, 0.1, 0.1), Pose((0.05, 0.0, -0.01))))
    np.testing.assert_allclose(half.bounds, [[-0.05, -0.03, 0.0], [0.0, 0.03, 0.02]], atol=1e-12)
    bored = part(Box(0.1, 0.06, 0.02), bore(0.02, 0.02))
    np.testing.assert_array_equal(bored.bounds, bored.body.bounds)


def test_renaming_a_part_or_undoing_an_edit_computes_nothing_anew():
    subject = part(Box(0.1, 0.06, 0.02), bore(0.02, 0.02, (0.05, 0.0, 0.0)))
    first = subject.cutting
    assert replace(subject, name="other").cutting is first
    wider = replace(subject, cuts=(bore(0.03, 0.02, (0.05, 0.0, 0.0)),))
    assert wider.cutting is not first
    assert replace(wider, cuts=subject.cuts).cutting is first
