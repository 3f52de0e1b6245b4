"""Meshes on their way into an assembly: where they stand, and what a changed file changes."""

from dataclasses import replace

import numpy as np
import pytest
from mesh_files import binary_stl, box

from core.assembly import Assembly, DriveAxis, Group, Import, MeshBody, Part, change_of, imported, taken_anew
from core.document import read_document, save_document
from core.machine import Machine
from core.material import ByDensity
from core.mesh import MeshAsset

STEEL = ByDensity(7850.0)
TILTED = Assembly("a", (), (DriveAxis("Tilt", (0.01, 0.02, 0.0), (0.0, 3.0, 4.0)),), "Tilt")


def brick(width: float = 40.0, name: str = "brick.stl") -> MeshAsset:
    return MeshAsset.of_bytes(binary_stl(box(width, 30, 20, at=(5, 6, 7))), name)


def test_a_mesh_stands_where_its_file_has_it_unless_asked_otherwise() -> None:
    part = imported(TILTED, [brick()], Import("brick", 1e-3, STEEL))
    assert isinstance(part, Part)
    assert part.pose.position == (0.0, 0.0, 0.0)


@pytest.mark.parametrize("standing", ["middle", "mass"])
def test_a_mesh_is_moved_across_the_drive_axis_until_its_middle_lies_on_it(standing: str) -> None:
    part = imported(TILTED, [brick()], Import("brick", 1e-3, STEEL, standing=standing))
    placed = Assembly("a", (part,), TILTED.axes, "Tilt")
    # A box is symmetric: the middle of the box around it is its centre of mass.
    assert float(placed.total.offset_from_axis((0.01, 0.02, 0.0), (0, 3, 4))) == pytest.approx(0, abs=1e-9)
    assert np.dot(part.pose.position, (0, 0.6, 0.8)) == pytest.approx(0, abs=1e-15)


def test_a_file_with_several_bodies_becomes_a_group() -> None:
    group = imported(TILTED, [brick(name="a"), brick(20, name="b")], Import("pair", 1e-3, STEEL, standing="mass"))
    assert isinstance(group, Group)
    assert [part.name for part in group.members] == ["a", "b"]
    whole = Assembly("a", (group,), TILTED.axes, "Tilt")
    assert float(whole.total.offset_from_axis((0.01, 0.02, 0.0), (0, 3, 4))) == pytest.approx(0, abs=1e-9)


def test_a_changed_file_is_told_in_numbers_and_taken_anew_on_request() -> None:
    part = imported(TILTED, [brick()], Import("brick", 1e-3, STEEL, origin="brick.stl"))
    assembly = Assembly("a", (part,), TILTED.axes, "Tilt")
    assert change_of(assembly, part, brick()) is None
    change = change_of(assembly, part, brick(44.0))
    assert change.volume == pytest.approx(0.1, rel=1e-6)
    assert change.shift == pytest.approx(2e-3, rel=1e-6)
    # Along (0, 0.6, 0.8): Jyy·0.36 + Jzz·0.64 of a box a × 30 × 20 at equal density.
    def inertia(a: float) -> float:
        return a * (0.36 * (a**2 + 20**2) + 0.64 * (a**2 + 30**2))
    assert change.inertia == pytest.approx(inertia(44) / inertia(40) - 1, rel=1e-6)
    anew = taken_anew(assembly, change)
    assert float(anew.total.mass) == pytest.approx(float(assembly.total.mass) * 1.1, rel=1e-6)


def test_the_document_keeps_where_a_mesh_came_from(tmp_path) -> None:
    body = MeshBody(brick(), 1e-3, origin=str(tmp_path / "brick.stl"))
    path = tmp_path / "a.masswright"
    save_document(Machine(Assembly("a", (Part("p1", "brick", body, STEEL),))), path)
    assert read_document(path).assembly.node("p1").body.origin == body.origin


def test_a_mended_mesh_is_still_held_against_the_file_it_came_from() -> None:
    part = imported(TILTED, [brick()], Import("brick", 1e-3, STEEL))
    turned = replace(part, body=replace(part.body, asset=part.body.asset.mended("turn")))
    assert change_of(Assembly("a", (turned,), TILTED.axes, "Tilt"), turned, brick()) is None
