"""Totals and ledger against every copy of every part written out as point masses, by matrices of scipy."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from mesh_files import binary_stl, ring_grid
from oracles import points_like, tensor_of_points
from scipy.spatial.transform import Rotation
from strategies import assemblies, mass_drivers, mesh_body

from core.assembly import Assembly, DriveAxis, Group, MeshBody, Part, ShapeBody, findings_of, ledger_of, walk
from core.assembly.bodies import KnownAxial
from core.assembly.nodes import DataSheet
from core.assembly.selection import selected
from core.material import ByDensity, ByMaterial, NotSet, Weighed
from core.mesh import MeshAsset
from core.placement import Mirrored, Pose, Ring, Row, Several
from core.shapes import Box, Cylinder, Sphere

STEEL = ByMaterial("steel", 7850.0)
ORIGIN = np.zeros(3)
PROPERTY = settings(deadline=None, max_examples=50, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large])


# --- the other route --------------------------------------------------------------------------------------------


def matrix(turn: np.ndarray, shift: np.ndarray) -> np.ndarray:
    whole = np.eye(4)
    whole[:3, :3], whole[:3, 3] = turn, shift
    return whole


def turned_about(point: tuple, direction: tuple, angle: float) -> np.ndarray:
    turn = Rotation.from_rotvec(angle * np.array(direction) / np.linalg.norm(direction)).as_matrix()
    return matrix(turn, point - turn @ point)


def copies_of(node: Part | Group) -> list[np.ndarray]:
    """Return the matrices (4, 4) that carry each copy of a node into the frame that holds it."""
    first = matrix(Rotation.from_euler("xyz", node.pose.turns).as_matrix(), np.array(node.pose.position))
    copies = node.copies
    if isinstance(copies, Row):
        return [matrix(np.eye(3), at * np.array(copies.step)) @ first for at in range(copies.count)]
    if isinstance(copies, Mirrored):
        unit = np.array(copies.normal) / np.linalg.norm(copies.normal)
        flip = np.eye(3) - 2 * np.outer(unit, unit)
        return [first, matrix(flip, 2 * unit * (unit @ np.array(copies.point))) @ first]
    if isinstance(copies, Ring):
        is_closed = np.isclose(abs(copies.span), 2 * np.pi)
        gaps = copies.count if is_closed else max(copies.count - 1, 1)
        angles = [copies.start + at * copies.span / gaps for at in range(copies.count)]
        turned = [turned_about(copies.point, copies.direction, angle) @ first for angle in angles]
        return turned if copies.turning else [matrix(first[:3, :3], one[:3, 3]) for one in turned]
    return [first] * copies.count


def written_out(nodes: tuple, outer: np.ndarray | None = None) -> list[tuple[str, np.ndarray, np.ndarray]]:
    """Return (key, masses (6,), places (6, 3)) of every copy of every part whose mass is known."""
    found = []
    for node in nodes:
        for copy in copies_of(node):
            whole = copy if outer is None else outer @ copy
            if isinstance(node, Group):
                found += written_out(node.members, whole)
            elif node.single is not None:
                masses, places = points_like(node.single)
                found.append((node.key, masses, places @ whole[:3, :3].T + whole[:3, 3]))
    return found


def about_axis(axis: DriveAxis, masses: np.ndarray, places: np.ndarray) -> float:
    unit = np.array(axis.direction) / np.linalg.norm(axis.direction)
    return float(np.sum(masses * np.sum(np.cross(places - np.array(axis.point), unit) ** 2, axis=1)))


@given(assemblies(mass_drivers))
@PROPERTY
def test_the_total_is_that_of_every_copy_written_out(assembly):
    bodies = written_out(assembly.members)
    if not bodies:
        assert float(assembly.total.mass) == 0
        return
    masses, places = (np.concatenate([body[at] for body in bodies]) for at in (1, 2))
    size = np.abs(places).max()
    np.testing.assert_allclose(assembly.total.mass, masses.sum(), rtol=1e-12)
    np.testing.assert_allclose(assembly.total.centre, masses @ places / masses.sum(), rtol=0, atol=1e-11 * size)
    np.testing.assert_allclose(
        assembly.total.inertia_about_point(ORIGIN), tensor_of_points(masses, places, ORIGIN),
        rtol=0, atol=1e-11 * masses.sum() * size**2,
    )


@given(assemblies(mass_drivers))
@PROPERTY
def test_every_line_of_the_ledger_is_that_of_its_copies_written_out(assembly):
    bodies, axis = written_out(assembly.members), assembly.drive_axis
    ledger = ledger_of(assembly)
    reach = max((np.abs(places - np.array(axis.point)).max() for _, _, places in bodies), default=1.0)
    for line, (node, _) in zip(ledger.lines, walk(assembly.members), strict=True):
        keys = {inner.key for inner, _ in walk((node,))}
        held = [(masses, places) for key, masses, places in bodies if key in keys]
        assert line.key == node.key
        if not held:
            assert (line.mass, line.centre, line.inertia) == (None, None, None)
            continue
        masses, places = (np.concatenate([body[at] for body in held]) for at in (0, 1))
        slack = 1e-11 * masses.sum() * reach**2
        assert line.mass == pytest.approx(masses.sum(), rel=1e-12)
        np.testing.assert_allclose(line.centre, masses @ places / masses.sum(), rtol=0, atol=1e-10 * (1 + reach))
        assert line.inertia == pytest.approx(about_axis(axis, masses, places), rel=1e-9, abs=slack)
        # m·d² of a copy: its whole mass at its own centre.
        centres = np.array([mass @ place / mass.sum() for mass, place in held])
        transfer = about_axis(axis, np.array([mass.sum() for mass, _ in held]), centres)
        assert line.transfer == pytest.approx(transfer, rel=1e-9, abs=slack)


@given(assemblies())
@PROPERTY
def test_the_ledger_adds_up_to_its_foot_and_to_the_totals(assembly):
    ledger, total, axis = ledger_of(assembly), assembly.total, assembly.drive_axis
    outermost = [line for line in ledger.lines if line.depth == 0 and line.mass is not None]
    if not outermost:
        assert ledger.total.mass is None
        return
    for name in ("mass", "own_inertia", "transfer", "inertia"):
        summed = sum(getattr(line, name) for line in outermost)
        assert getattr(ledger.total, name) == pytest.approx(summed, rel=1e-12, abs=1e-12 * ledger.total.inertia)
    assert ledger.total.mass == pytest.approx(float(total.mass), rel=1e-12)
    assert ledger.total.inertia == pytest.approx(float(total.inertia_about_axis(axis.point, axis.unit)), rel=1e-9)
    assert ledger.total.own_inertia + ledger.total.transfer == ledger.total.inertia
    if ledger.total.inertia > 0:
        assert sum(line.share for line in outermost) == pytest.approx(1, rel=1e-12)


@given(assemblies())
@PROPERTY
def test_the_line_of_a_group_is_the_sum_of_the_lines_in_it(assembly):
    lines = {line.key: line for line in ledger_of(assembly).lines}
    for node, _ in walk(assembly.members):
        if isinstance(node, Group):
            held = [lines[member.key] for member in node.members if lines[member.key].mass is not None]
            if held:
                assert lines[node.key].mass == pytest.approx(sum(line.mass for line in held), rel=1e-12)
                assert lines[node.key].inertia == pytest.approx(sum(line.inertia for line in held), rel=1e-12)
            for member in node.members:
                assert lines[member.key].times == lines[node.key].times * member.copies.count


@given(assemblies())
@PROPERTY
def test_the_selection_of_a_line_has_the_inertia_of_its_line(assembly):
    axis = assembly.drive_axis
    for line in ledger_of(assembly).lines:
        if line.mass is not None:
            body = selected(assembly, line.key).table.moments.total()
            assert float(body.inertia_about_axis(axis.point, axis.unit)) == pytest.approx(line.inertia, rel=1e-9, abs=1e-15)


# --- cases by hand ----------------------------------------------------------------------------------------------


def test_a_group_in_a_ring_of_groups_by_hand():
    # Four spokes of three balls, 2 kg each, at 0.1, 0.2, 0.3 m: J = 4·2·(0.01+0.04+0.09) + 12·(2/5)·2·0.02².
    ball = Part("b", "ball", ShapeBody(Sphere(0.04)), Weighed(2.0), Pose((0.1, 0.0, 0.0)), Row(3, (0.1, 0.0, 0.0)))
    spoke = Group("s", "spoke", (ball,), copies=Ring(4))
    wheel = Group("w", "wheel", (Group("h", "half", (spoke,)),), Pose((0.0, 0.0, 5.0)))
    line = ledger_of(Assembly("wheel", (wheel,))).total
    assert line.mass == pytest.approx(24.0, rel=1e-14)
    assert line.transfer == pytest.approx(8 * 0.14, rel=1e-13)
    assert line.own_inertia == pytest.approx(12 * 0.4 * 2 * 0.02**2, rel=1e-12)
    np.testing.assert_allclose(line.centre, [0, 0, 5.0], rtol=0, atol=1e-15 * 5)


def test_a_ring_about_an_axis_far_from_the_drive_axis():
    # Six pins at 0.05 m about a planet axis 0.3 m off the spindle: m·d² is 6·m·(0.3² + 0.05²).
    pin = Part("p", "pin", ShapeBody(Cylinder(0.01, 0.04)), Weighed(0.1), Pose((0.35, 0.0, 0.0)), Ring(6, (0.3, 0.0, 0.0)))
    line = ledger_of(Assembly("planet", (pin,))).total
    assert line.transfer == pytest.approx(0.6 * (0.3**2 + 0.05**2), rel=1e-13)
    assert line.own_inertia == pytest.approx(0.6 * 0.005**2 / 2, rel=1e-13)


def test_a_box_cut_into_a_mirrored_pair_is_the_whole_box():
    half = Part("h", "half", ShapeBody(Box(0.1, 0.06, 0.04)), ByDensity(2700.0), Pose((0.05, 0.0, 0.0)), Mirrored())
    whole = Part("w", "whole", ShapeBody(Box(0.2, 0.06, 0.04)), ByDensity(2700.0))
    got, expected = Assembly("halves", (half,)).total, Assembly("whole", (whole,)).total
    np.testing.assert_allclose(got.mass, expected.mass, rtol=1e-14)
    np.testing.assert_allclose(got.centre, expected.centre, rtol=0, atol=1e-16)
    np.testing.assert_allclose(got.spread, expected.spread, rtol=0, atol=1e-15 * float(expected.mass) * 0.2**2)


def test_far_from_the_origin_a_tilted_assembly_keeps_its_principal_moments():
    parts = (
        Part("a", "disc", ShapeBody(Cylinder(0.3, 0.02)), STEEL),
        Part("b", "arm", ShapeBody(Box(0.2, 0.03, 0.03)), STEEL, Pose((0.1, 0.0, 0.02))),
    )
    near = Assembly("near", (Group("g", "all", parts),)).total
    far = Assembly("far", (Group("g", "all", parts, Pose((1000.0, -2000.0, 500.0), (0.3, -0.7, 2.1))),)).total
    # Coordinates of 2 km carry about 2e-13 m of round-off, against arms of 0.1 m.
    np.testing.assert_allclose(far.principal.moments, near.principal.moments, rtol=1e-10)


def test_a_mesh_weighs_and_turns_as_the_shape_it_is_a_picture_of():
    facets = Box(0.1, 0.06, 0.04).facets()
    from core.mesh import MeshAsset

    data = np.zeros(len(facets.corners), dtype=[("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])
    data["corners"] = facets.triangles * 1000
    asset = MeshAsset.of_bytes(bytes(80) + np.uint32(len(data)).tobytes() + data.tobytes(), "box.stl")
    shape = Part("s", "shape", ShapeBody(Box(0.1, 0.06, 0.04)), STEEL, Pose((0.2, 0.1, 0.0), (0.1, 0.2, 0.3)), Ring(5))
    mesh = replace(shape, body=replace(mesh_body((1, 1, 1), "", 1e-3), asset=asset))
    one, other = Assembly("s", (shape,)).total, Assembly("m", (mesh,)).total
    np.testing.assert_allclose(other.mass, one.mass, rtol=1e-6)
    np.testing.assert_allclose(
        other.inertia_about_centre, one.inertia_about_centre, rtol=0, atol=1e-6 * np.abs(one.inertia_about_centre).max()
    )


# --- parts without mass -----------------------------------------------------------------------------------------


def test_a_part_without_mass_is_left_out_of_the_totals_and_said():
    disc = Part("d", "disc", ShapeBody(Cylinder(0.2, 0.02)), STEEL)
    cover = Part("c", "cover", ShapeBody(Cylinder(0.2, 0.002)), NotSet(), copies=Several(3))
    assembly = Assembly("half known", (Group("g", "all", (disc, cover)),))
    alone = Assembly("known", (disc,))
    assert assembly.without_mass == (cover,)
    np.testing.assert_allclose(assembly.total.mass, alone.total.mass, rtol=1e-15)
    np.testing.assert_allclose(assembly.total.spread, alone.total.spread, rtol=1e-13, atol=1e-18)
    ledger = ledger_of(assembly)
    line = next(line for line in ledger.lines if line.key == "c")
    assert (line.mass, line.centre, line.own_inertia, line.transfer, line.inertia, line.share) == (None,) * 6
    assert line.basis == "not set"
    assert ledger.total.basis == "some not set"
    texts = [finding.check.text for finding in findings_of(assembly) if finding.key == "c" and not finding.check.ok]
    assert len(texts) == 1
    assert "cover" in texts[0]
    assert "leave it out" in texts[0]


def test_an_empty_assembly_has_no_total_and_no_findings():
    empty = Assembly("empty", (Group("g", "nothing yet"),))
    assert float(empty.total.mass) == 0
    assert ledger_of(empty).total.mass is None
    assert ledger_of(empty).total.share is None
    assert findings_of(empty) == ()
    assert empty.bounds is None


def test_the_box_around_a_turned_assembly_holds_every_copy():
    bar = Part("b", "bar", ShapeBody(Box(0.2, 0.02, 0.02)), STEEL, Pose((0.2, 0.0, 0.0)), Ring(4))
    low, high = Assembly("cross", (bar,)).bounds
    np.testing.assert_allclose(low, [-0.3, -0.3, 0], rtol=0, atol=1e-15)
    np.testing.assert_allclose(high, [0.3, 0.3, 0.02], rtol=0, atol=1e-15)


def test_a_rotor_whose_axis_is_not_the_drive_axis_is_pointed_out():
    rotor = Part("r", "rotor", KnownAxial(1.0, (0, 0, 0), 2e-3, 0.08), DataSheet())
    assert all(finding.check.ok for finding in findings_of(Assembly("upright", (rotor,))))
    lying = Assembly("lying", (replace(rotor, pose=Pose(turns=(np.pi / 2, 0.0, 0.0))),))
    assert [finding.check.text for finding in findings_of(lying) if not finding.check.ok] == [
        ("rotor: its data sheet gives J about its own axis only, which is not parallel to Spindle; "
        "across the axis it stands in as a cylinder 80 mm long")
    ]


def test_round_off_of_a_body_about_the_origin_is_shown_as_zero() -> None:
    ring = MeshAsset.of_bytes(binary_stl(ring_grid(120, 60)), "ring.stl")
    part = Part("p1", "ring", MeshBody(ring, 1e-3), ByDensity(7850.0))
    assert float(np.abs(part.single.centre).max()) < 1e-15
    line = ledger_of(Assembly("a", (part,))).total
    assert line.centre.tolist() == [0.0, 0.0, 0.0]
    assert line.transfer == 0.0
