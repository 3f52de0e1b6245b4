"""A part from a mesh: which of its two sets of values counts, and what of it the document keeps."""

import numpy as np
import pytest
from mesh_files import binary_stl, box

from core.assembly import Assembly, MeshBody, Part, findings_of
from core.assembly.mesh_findings import surplus_of
from core.document import read_document, save_document
from core.errors import ValueRefused
from core.machine import Machine
from core.material import ByDensity
from core.mesh import MeshAsset
from core.shapes import Cylinder

BAR = Cylinder(diameter=80.0, length=120.0)  # mm, as a mesh file has it
STEEL = 7850.0


def bar_mesh(steps: int = 36) -> MeshAsset:
    return MeshAsset.of_bytes(binary_stl(BAR.facets(steps).triangles), "bar.stl")


def test_a_mesh_counts_as_faceted_unless_the_restored_curvature_is_chosen() -> None:
    asset = bar_mesh()
    part = Part("p1", "bar", MeshBody(asset, 1e-3), ByDensity(STEEL))
    inscribed = 36 / 2 * np.sin(2 * np.pi / 36) * 0.04**2 * 0.12  # a prism of 36 sides
    assert float(part.single.mass) == pytest.approx(STEEL * inscribed, rel=1e-6)


def test_the_restored_curvature_of_a_faceted_bar_counts_as_the_bar() -> None:
    part = Part("p1", "bar", MeshBody(bar_mesh(), 1e-3, "restored"), ByDensity(STEEL))
    exact = Cylinder(diameter=0.08, length=0.12).moments().times(STEEL)
    assert float(part.single.mass) == pytest.approx(float(exact.mass), rel=2e-5)
    np.testing.assert_allclose(part.single.inertia_about_centre, exact.inertia_about_centre, rtol=5e-5, atol=1e-9)


def test_an_open_mesh_cannot_count_as_restored() -> None:
    asset = MeshAsset.of_bytes(binary_stl(box(40.0, 30.0, 20.0)[:-2]), "lid.stl")
    with pytest.raises(ValueRefused, match=r"^lid.stl: the curvature behind these facets cannot be restored; read a mesh "
                                           r"that is open. Mend the mesh, or count it as faceted.$"):
        MeshBody(asset, 1e-3, "restored")


def test_the_document_keeps_which_values_of_a_mesh_count(tmp_path) -> None:
    part = Part("p1", "bar", MeshBody(bar_mesh(), 1e-3, "restored"), ByDensity(STEEL))
    path = tmp_path / "bar.masswright"
    save_document(Machine(Assembly("bar", (part,))), path)
    assert read_document(path).assembly.node("p1") == part


def test_a_part_whose_mesh_holds_overlapping_bodies_has_a_failed_check() -> None:
    twice = np.concatenate([box(40, 30, 20), box(40, 30, 20, at=(20, 0, 0))])
    asset = MeshAsset.of_bytes(binary_stl(twice), "two.stl")
    assembly = Assembly("two", (Part("p1", "two", MeshBody(asset, 1e-3), ByDensity(STEEL)),))
    failed = [finding for finding in findings_of(assembly) if not finding.check.ok]
    assert [(finding.key, finding.check.name) for finding in failed] == [("p1", "counted twice")]


def test_what_overlapping_bodies_count_twice_is_told_as_volume_mass_and_share_of_own_inertia() -> None:
    twice = np.concatenate([box(40, 30, 20), box(40, 30, 20, at=(20, 0, 0))])
    part = Part("p1", "two", MeshBody(MeshAsset.of_bytes(binary_stl(twice), "two.stl"), 1e-3), ByDensity(STEEL))
    finding = next(found for found in part.body.asset.census().findings if found.name == "counted twice")
    surplus = surplus_of(Assembly("two", (part,)), part, finding)
    assert surplus.volume == pytest.approx(20 * 30 * 20 * 1e-9, rel=1e-6)
    assert surplus.mass == pytest.approx(STEEL * 20 * 30 * 20 * 1e-9, rel=1e-6)
    # About z through x = 30, y = 15 mm: the middle box of 20 × 30 against two of 40 × 30, each 10 mm off.
    shared, one = 12_000 * (20**2 + 30**2) / 12, 24_000 * ((40**2 + 30**2) / 12 + 10**2)
    assert surplus.share == pytest.approx(shared / (2 * one), rel=1e-6)
