"""What was saved is what is read: the value, the numbers, the bytes."""

from __future__ import annotations

import io
import zipfile
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from strategies import assemblies, mesh_body, tetrahedron_stl

from core.assembly import Assembly, Group, MeshBody, Part, ShapeBody, ledger_of
from core.document import read_document, read_document_bytes, save_document
from core.machine import Machine
from core.material import ByDensity, ByMaterial
from core.placement import Pose, Ring, Several
from core.shapes import SHAPES, Cylinder, Dimension, Shape

if TYPE_CHECKING:
    from pathlib import Path


SPREAD_OUT = """\
{
  "axes": [
    {
      "direction": [0.0, 0.0, 1.0],
      "name": "Spindle",
      "point": [0.0, 0.0, 0.0]
    }
  ],
  "drive": "Spindle",
  "members": [
    {
      "copies": {"count": 1, "kind": "several"},
      "key": "g",
      "kind": "group",
      "members": [
        {
          "body": {"dimensions": {"diameter": 0.4, "length": 0.02}, "kind": "shape", "shape": "cylinder"},
          "copies": {"count": 2, "kind": "several"},
          "driver": {"density": 7850.0, "kind": "material", "name": "steel"},
          "key": "a",
          "kind": "part",
          "name": "plate ⌀400",
          "note": "",
          "pose": {"position": [0.0, 0.1, 0.0], "turns": [0.0, 0.0, 0.0]},
          "typed": []
        }
      ],
      "name": "dial",
      "note": "",
      "pose": {"position": [0.0, 0.0, 0.0], "turns": [0.0, 0.0, 0.0]},
      "typed": []
    }
  ],
  "name": "dial",
  "version": {"major": 1, "minor": 0}
}
"""


@dataclass(frozen=True)
class Toothed(Cylinder):
    """A shape that the schema has never heard of."""

    teeth: float
    key = "toothed"
    title = "toothed disc"
    dimensions = (*Cylinder.dimensions, Dimension("teeth", "number of teeth", 12, "count"))


@pytest.fixture(scope="module")
def folder(tmp_path_factory) -> Path:
    return tmp_path_factory.mktemp("documents")


@given(assemblies())
@settings(deadline=None, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large], max_examples=60)
def test_a_document_is_the_same_value_after_saving_and_reading(folder, assembly):
    save_document(Machine(assembly), folder / "any.masswright")
    back = read_document(folder / "any.masswright").assembly
    assert back == assembly
    assert _mesh_names(back) == _mesh_names(assembly)


@given(assemblies())
@settings(deadline=None, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large], max_examples=60)
def test_totals_and_ledger_are_the_same_bit_for_bit_after_saving_and_reading(folder, assembly):
    save_document(Machine(assembly), folder / "same.masswright")
    back = read_document(folder / "same.masswright").assembly
    for name in ("mass", "centre", "spread"):
        assert getattr(back.total, name).tobytes() == getattr(assembly.total, name).tobytes()
    before, after = ledger_of(assembly), ledger_of(back)
    assert [_figures(line) for line in (*after.lines, after.total)] == [
        _figures(line) for line in (*before.lines, before.total)
    ]


@given(assemblies())
@settings(deadline=None, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large], max_examples=30)
def test_saving_what_was_read_gives_the_same_bytes(folder, assembly):
    save_document(Machine(assembly), folder / "one.masswright")
    save_document(read_document(folder / "one.masswright"), folder / "two.masswright")
    assert (folder / "one.masswright").read_bytes() == (folder / "two.masswright").read_bytes()


def test_the_archive_holds_the_mesh_files_own_bytes_under_their_hash(tmp_path):
    asset = mesh_body((10, 20, 30), "wedge.stl", 1e-3).asset
    save_document(Machine(_two_wedges()), tmp_path / "wedges.masswright")
    with zipfile.ZipFile(tmp_path / "wedges.masswright") as archive:
        assert archive.namelist() == ["assembly.json", f"meshes/{asset.sha256}.stl"]
        assert archive.read(f"meshes/{asset.sha256}.stl") == tetrahedron_stl((10, 20, 30))
        assert {info.date_time for info in archive.infolist()} == {(1980, 1, 1, 0, 0, 0)}


def test_parts_with_the_same_mesh_share_it_after_reading(tmp_path):
    save_document(Machine(_two_wedges()), tmp_path / "wedges.masswright")
    first, second = read_document(tmp_path / "wedges.masswright").assembly.members
    assert first.body.asset is second.body.asset
    assert (first.body.metres_per_unit, second.body.metres_per_unit) == (1e-3, 0.0254)


def test_the_json_puts_each_entry_of_a_part_on_a_line_of_its_own(tmp_path):
    plate = ShapeBody(Cylinder(0.4, 0.02))
    part = Part("a", "plate ⌀400", plate, ByMaterial("steel", 7850.0), Pose((0.0, 0.1, 0.0)), Several(2))
    save_document(Machine(Assembly("dial", (Group("g", "dial", (part,)),))), tmp_path / "dial.masswright")
    with zipfile.ZipFile(tmp_path / "dial.masswright") as archive:
        lines = archive.read("assembly.json").decode().splitlines()
    assert lines == SPREAD_OUT.splitlines()


def test_changing_one_dimension_changes_one_line(tmp_path):
    texts = []
    for diameter in (0.1, 0.2):
        save_document(Machine(_ring_of_pins(diameter)), tmp_path / "pins.masswright")
        with zipfile.ZipFile(tmp_path / "pins.masswright") as archive:
            texts.append(archive.read("assembly.json").decode().splitlines())
    assert sum(old != new for old, new in zip(*texts, strict=True)) == 1


def test_a_shape_family_added_later_needs_no_change_of_the_schema(tmp_path, monkeypatch):
    monkeypatch.setitem(SHAPES, Toothed.key, Toothed)
    assembly = Assembly("a", (Part("p", "gear", ShapeBody(Toothed(0.1, 0.02, 31)), ByDensity(1000.0)),))
    save_document(Machine(assembly), tmp_path / "gear.masswright")
    (gear,) = read_document(tmp_path / "gear.masswright").assembly.members
    assert gear.body == ShapeBody(Toothed(0.1, 0.02, 31))


@pytest.mark.parametrize("key", sorted(SHAPES))
def test_every_registered_shape_comes_back_with_its_dimensions(tmp_path, key):
    shape: Shape = SHAPES[key].of({})
    save_document(Machine(Assembly("a", (Part("p", key, ShapeBody(shape)),))), tmp_path / "shape.masswright")
    (part,) = read_document(tmp_path / "shape.masswright").assembly.members
    assert (type(part.body.shape), part.body.shape.values()) == (type(shape), shape.values())


def test_a_document_that_was_packed_again_by_another_tool_is_read(tmp_path):
    save_document(Machine(_two_wedges()), tmp_path / "plain.masswright")
    packed = io.BytesIO()
    with zipfile.ZipFile(tmp_path / "plain.masswright") as plain, zipfile.ZipFile(packed, "w") as out:
        for name in reversed(plain.namelist()):
            out.writestr(name, plain.read(name), zipfile.ZIP_DEFLATED)
        out.writestr("meshes/", b"")
    assert read_document_bytes(packed.getvalue()).assembly == _two_wedges()


def test_numbers_come_back_to_the_last_bit(tmp_path):
    awkward = (0.1 + 0.2, 5e-324, -0.0)
    part = Part("p", "", ShapeBody(Cylinder(np.nextafter(0.1, 1), 1 / 3)), pose=Pose(awkward))
    save_document(Machine(Assembly("a", (part,))), tmp_path / "bits.masswright")
    (back,) = read_document(tmp_path / "bits.masswright").assembly.members
    assert np.array(back.pose.position).tobytes() == np.array(awkward).tobytes()
    assert back.body.shape.values() == part.body.shape.values()


def _two_wedges() -> Assembly:
    in_mm = Part("a", "in mm", mesh_body((10, 20, 30), "wedge.stl", 1e-3), ByDensity(2700.0))
    in_inch = Part("b", "in inches", MeshBody(in_mm.body.asset, 0.0254), ByDensity(2700.0))
    return Assembly("wedges", (in_mm, in_inch))


def _ring_of_pins(diameter: float) -> Assembly:
    pin = Part("p", "pin", ShapeBody(Cylinder(diameter, 0.05)), ByDensity(7850.0), Pose((0.1, 0, 0)), Ring(6))
    return Assembly("pins", (pin, Part("q", "plate", ShapeBody(Cylinder(0.4, 0.02)))))


def _figures(line) -> tuple:
    centre = None if line.centre is None else line.centre.tobytes()
    return line.key, line.name, line.times, line.mass, centre, line.own_inertia, line.transfer, line.share


def _mesh_names(assembly: Assembly) -> list[str]:
    return [
        part.body.asset.name for part in assembly.table.parts if isinstance(part, Part) and isinstance(part.body, MeshBody)
    ]
