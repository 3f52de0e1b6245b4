"""Corrections made as parts or holes: the rotor is balanced afterwards, wherever it stands and whatever it is made of."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from core.assembly import Assembly, DriveAxis, Group, MeshBody, Part, ShapeBody
from core.drive import BalanceSettings, CorrectionPlane, DriveSettings, TurnsWith, balance_answer
from core.drive.correcting import Drill, drillable, with_holes_drilled, with_masses_added
from core.errors import Cancelled, EditRefused, ValueRefused
from core.machine import Machine
from core.material import ByMaterial, Weighed
from core.mesh import MeshAsset
from core.mesh.stl_writing import stl_of_triangles
from core.placement import Pose, Ring, matrix_of_turns
from core.progress import Progress
from core.shapes import Box, Cylinder

ALUMINIUM = ByMaterial("aluminium", 2700.0)
RADIUS, LENGTH = 0.15, 0.12
# Where the group stands whose z axis the rotor turns about: far away, and turned about all three axes.
FAR = Pose((3.0, -2.0, 1.5), (0.4, -0.7, 1.1))
AXIS = DriveAxis("Shaft", FAR.position, tuple(matrix_of_turns(FAR.turns)[:, 2].tolist()))
ONE = (CorrectionPlane(0.06, 0.12),)
TWO = (CorrectionPlane(0.02, 0.12), CorrectionPlane(0.10, 0.13))


def rotor(*more: Part) -> Assembly:
    """An aluminium drum about the far axis, with a dog on one end and a lug on its side that throw it out of balance."""
    drum = Part("drum", "drum", ShapeBody(Cylinder(2 * RADIUS, LENGTH)), ALUMINIUM)
    dog = Part("dog", "dog", ShapeBody(Box(0.02, 0.02, 0.01)), ALUMINIUM, Pose((0.08, 0.05, LENGTH)))
    lug = Part("lug", "lug", ShapeBody(Box(0.01, 0.02, 0.03)), ALUMINIUM, Pose((-0.06, RADIUS, 0.01), (0.2, 0.1, 0.3)))
    return Assembly("reel", (Group("reel", "reel", (drum, dog, lug, *more), FAR),), (AXIS,), "Shaft")


def balanced_by(*planes: CorrectionPlane) -> DriveSettings:
    return DriveSettings(balance=BalanceSettings(planes=planes))


def left_of(assembly: Assembly, settings: DriveSettings) -> tuple[float, float]:
    """What is left of the static unbalance and of the couple, as a part of what there was."""
    before, after = balance_answer(rotor(), DriveSettings()), balance_answer(assembly, settings)
    assert before is not None
    assert after is not None
    moment = after.found.couple + after.found.static * after.found.station
    return after.found.amount / before.found.amount, float(np.hypot(*moment)) / before.found.couple_amount


@pytest.mark.parametrize("form", ["disc", "point mass"])
def test_a_mass_in_one_plane_leaves_no_static_unbalance(form):
    settings = balanced_by(*ONE)
    after, drive = with_masses_added(rotor(), settings, form)
    assert drive is settings
    assert left_of(after, drive)[0] <= 1e-12


@pytest.mark.parametrize("form", ["disc", "point mass"])
def test_masses_in_two_planes_leave_no_unbalance_at_all(form):
    after, drive = with_masses_added(rotor(), balanced_by(*TWO), form)
    assert max(left_of(after, drive)) <= 1e-11
    assert [part.name for part in after.members[1:]] == ["balance mass", "balance mass 2"]


def test_a_disc_has_the_mass_of_the_correction_with_its_centre_at_the_plane():
    settings = balanced_by(*TWO)
    made = balance_answer(rotor(), settings).made
    after, _ = with_masses_added(rotor(), settings, "disc")
    for correction, part in zip(made, after.members[1:], strict=True):
        there = part.standing.place(part.single).total()
        assert float(there.mass) == pytest.approx(correction.mass, rel=1e-13)
        np.testing.assert_allclose(there.centre, correction.point(AXIS), rtol=0, atol=1e-14)
        assert part.driver.label == "steel"


def test_a_mass_turns_with_the_rotor_where_the_document_itself_does_not():
    settings = replace(balanced_by(*ONE), turning=(TurnsWith("", "fixed"), TurnsWith("reel", "load")))
    after, drive = with_masses_added(rotor(), settings)
    assert drive.turning[2] == TurnsWith(after.members[1].key, "load")
    assert left_of(after, drive)[0] <= 1e-12


def test_a_mass_turns_about_the_axis_of_the_rotor_where_that_is_not_the_drive_axis():
    base = Part("base", "base", ShapeBody(Box(0.1, 0.1, 0.1)), ALUMINIUM)
    assembly = replace(rotor(), axes=(AXIS, DriveAxis("Other")), drive="Other")
    settings = DriveSettings((TurnsWith("reel", "motor", "Shaft"),), balance=BalanceSettings("motor", planes=ONE))
    after, drive = with_masses_added(assembly.inserted(base), settings)
    assert drive.turning[1] == TurnsWith(after.members[2].key, "motor", "Shaft")
    found = balance_answer(after, drive).found
    assert found.amount <= 1e-12 * balance_answer(assembly, settings).found.amount


def test_corrections_are_one_edit_of_the_machine():
    machine = Machine(rotor(), balanced_by(*ONE))
    after = machine.with_both(*with_masses_added(machine.assembly, machine.drive))
    assert after.balance_answer.found.amount <= 1e-12 * machine.balance_answer.found.amount


# --- holes -----------------------------------------------------------------------------------------------------------


def test_a_hole_inwards_has_the_depth_of_the_closed_form():
    # All of it inside: U = ρ·A·(R·L − L²/2) for a hole from R inwards.
    settings = balanced_by(*ONE)
    unbalance = balance_answer(rotor(), settings).found.amount
    after = with_holes_drilled(rotor(), settings, Drill("drum", 0.02))
    (hole,) = after.node("drum").cuts
    area, start = math.pi / 4 * 0.02**2, ONE[0].radius
    depth = start - math.sqrt(start**2 - 2 * unbalance / (ALUMINIUM.density * area))
    assert hole.shape.single("length") == pytest.approx(depth, rel=1e-12)
    assert left_of(after, settings)[0] <= 1e-12


def test_holes_inwards_in_two_planes_leave_no_unbalance_at_all():
    settings = balanced_by(*TWO)
    after = with_holes_drilled(rotor(), settings, Drill("drum", 0.02))
    assert max(left_of(after, settings)) <= 1e-11
    assert [cut.name for cut in after.node("drum").cuts] == ["balance hole", "balance hole 2"]


def test_holes_along_the_axis_from_both_ends_leave_no_unbalance_at_all():
    settings = balanced_by(CorrectionPlane(0.0, 0.11), CorrectionPlane(0.055, 0.13))
    after = with_holes_drilled(rotor(), settings, Drill("drum", 0.02, "forwards"))
    assert max(left_of(after, settings)) <= 1e-11
    settings = balanced_by(CorrectionPlane(LENGTH, 0.11))
    after = with_holes_drilled(rotor(), settings, Drill("drum", 0.02, "backwards"))
    assert left_of(after, settings)[0] <= 1e-12
    assert after.node("drum").cutting.exact


def test_a_hole_from_a_round_surface_counts_what_it_truly_takes_away():
    # Its flat mouth touches the drum's surface: the lens beyond it is no material.
    settings = balanced_by(replace(ONE[0], radius=RADIUS))
    after = with_holes_drilled(rotor(), settings, Drill("drum", 0.02))
    assert 0 < after.node("drum").cutting.outside[0] < 0.25
    assert left_of(after, settings)[0] <= 1e-10


def test_a_mesh_is_drilled_to_the_depth_of_the_closed_form():
    triangles = (Box(0.3, 0.3, 0.12).facets().triangles / 1e-3).astype(np.float32)
    mesh = MeshBody(MeshAsset.of_bytes(stl_of_triangles(triangles, "block.stl"), "block.stl"), 1e-3)
    block = Part("block", "block", mesh, ALUMINIUM)
    lug = Part("lug", "lug", ShapeBody(Box(0.02, 0.02, 0.02)), ALUMINIUM, Pose((0.1, 0.02, 0.12)))
    assembly = Assembly("block", (block, lug), (DriveAxis("Shaft"),), "Shaft")
    settings = balanced_by(*TWO)
    before = balance_answer(assembly, settings).found
    after = with_holes_drilled(assembly, settings, Drill("block", 0.015))
    left = balance_answer(after, settings).found
    # Facets of single precision: the block itself is as far out of balance as they are rounded.
    assert left.amount <= 1e-11 * before.amount
    assert left.couple_amount <= 1e-11 * before.couple_amount
    assert after.node("block").cutting.exact


def test_a_worker_can_be_stopped():
    progress = Progress()
    progress.cancel()
    with pytest.raises(Cancelled):
        with_holes_drilled(rotor(), balanced_by(replace(ONE[0], radius=RADIUS)), Drill("drum", 0.02), progress)


def test_a_second_round_of_drilling_adds_to_the_first():
    settings = balanced_by(*ONE)
    once = with_holes_drilled(rotor(), settings, Drill("drum", 0.02))
    weight = Part("weight", "weight", ShapeBody(Box(0.01, 0.01, 0.01)), ALUMINIUM, Pose((0.0, -0.1, LENGTH)))
    again = with_holes_drilled(once.inserted(weight, "reel"), settings, Drill("drum", 0.02))
    assert [cut.name for cut in again.node("drum").cuts] == ["balance hole", "balance hole 2"]
    assert left_of(again, settings)[0] <= 1e-12


def test_only_what_turns_once_with_a_volume_and_a_density_can_be_drilled():
    bolt = Part("bolt", "bolt", ShapeBody(Cylinder(0.01, 0.02)), ALUMINIUM, Pose((0.05, 0.0, 0.0)), Ring(6))
    ring = Part("ring", "ring", ShapeBody(Cylinder(0.1, 0.01)), Weighed(1.0))
    assembly = rotor(bolt, ring).inserted(Part("base", "base", ShapeBody(Box(0.1, 0.1, 0.1)), ALUMINIUM))
    settings = replace(balanced_by(*ONE), turning=(TurnsWith("reel"),))
    assert drillable(assembly, settings) == ("drum", "dog", "lug")
    for key, reason in (
        ("bolt", "this part is there 6 times, and a hole would be drilled into each of them"),
        ("ring", "the mass of this part does not follow from its volume"),
        ("base", "this part does not turn with the rotor"),
        ("reel", "holes are drilled into a part, not into a group"),
    ):
        with pytest.raises(EditRefused) as refused:
            with_holes_drilled(assembly, settings, Drill(key, 0.01))
        assert reason in str(refused.value)


@pytest.mark.parametrize(
    ("planes", "drill", "sentence"),
    [
        (ONE, ("drum", 0.001), "drum: no hole of this diameter takes enough away from where it begins; read ⌀1 mm."),
        ((CorrectionPlane(0.06, 0.16),), ("drum", 0.02), "of this hole lies outside the part; read a hole that begins at"),
        ((CorrectionPlane(0.0, 0.149),), ("drum", 0.02, "forwards"), "of this hole lies outside the part"),
        ((), ("drum", 0.01), "balance: there is no plane to correct the unbalance in"),
        (ONE, ("drum", 0.0), "the diameter of the hole has to be more than 0"),
    ],
)
def test_a_hole_that_cannot_be_is_refused_with_the_reason(planes, drill, sentence):
    with pytest.raises((EditRefused, ValueRefused)) as refused:
        with_holes_drilled(rotor(), balanced_by(*planes), Drill(*drill))
    assert sentence in str(refused.value)


def test_a_rotor_that_is_balanced_has_nothing_to_correct():
    drum = Part("drum", "drum", ShapeBody(Cylinder(2 * RADIUS, LENGTH)), ALUMINIUM)
    assembly = Assembly("drum", (drum,), (DriveAxis("Shaft"),), "Shaft")
    for correct in (
        lambda: with_masses_added(assembly, balanced_by(*TWO)),
        lambda: with_holes_drilled(assembly, balanced_by(*TWO), Drill("drum", 0.01)),
    ):
        with pytest.raises(ValueRefused, match="there is nothing to correct"):
            correct()


def test_nothing_that_turns_is_nothing_to_correct():
    with pytest.raises(ValueRefused, match="nothing that has mass turns with this shaft"):
        with_masses_added(Assembly(), balanced_by(*ONE))
