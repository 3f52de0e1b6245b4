from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from mesh_files import binary_stl, box, quartered

from core.handover import SheetChoice, sheet_of_mesh
from core.handover.answer import KEYS, answer_of_mesh, json_text
from core.handover.mesh_reading import MeshReading, MeshRequest, read_mesh
from core.material import ByDensity, Weighed
from core.mesh import AT_ONCE, survey_triangles
from core.quantity import UNIT_SETS, UNITS

FACETS = Path(__file__).parents[2] / "facets"


def reading_of(triangles: np.ndarray, **rest: object) -> MeshReading:
    return MeshReading("part.stl", survey_triangles(triangles), UNITS["mm"], **rest)


def test_a_length_unit_scales_mass_by_the_third_and_inertia_by_the_fifth_power():
    small = reading_of(box(2, 3, 4), weighing=ByDensity(1000.0))
    large = replace(small, unit=UNITS["in"])
    np.testing.assert_allclose(large.body.mass / small.body.mass, 25.4**3, rtol=1e-12)
    np.testing.assert_allclose(np.diag(large.body.spread) / np.diag(small.body.spread), 25.4**5, rtol=1e-12)


def test_a_weighed_mass_scales_the_tensor_and_leaves_the_centre():
    by_density = reading_of(box(2, 3, 4), weighing=ByDensity(1000.0))
    weighed = replace(by_density, weighing=Weighed(0.5))
    factor = 0.5 / float(by_density.body.mass)
    np.testing.assert_allclose(weighed.body.spread, factor * by_density.body.spread, rtol=1e-12)
    np.testing.assert_allclose(weighed.body.centre, by_density.body.centre, rtol=1e-12)


def test_without_a_mass_only_the_geometric_values_are_there():
    answer = answer_of_mesh(reading_of(box(2, 3, 4)))
    assert [answer[key] for key in ("mass_kg", "inertia_kgm2", "principal_kgm2")] == [None, None, None]
    assert answer["volume_m3"] == pytest.approx(24e-9, rel=1e-12)
    assert answer["centre_m"] == pytest.approx([1e-3, 1.5e-3, 2e-3], rel=1e-12)
    # Radii of gyration of a cuboid through its centre: √((a² + b²)/12), the smallest about the longest side.
    assert answer["radii_m"] == pytest.approx([np.sqrt(n / 12) * 1e-3 for n in (13, 20, 25)], rel=1e-12)


def test_a_mesh_without_a_volume_has_no_values_and_says_why():
    double = np.concatenate([box(), box()[:, ::-1]])
    reading = reading_of(double, weighing=ByDensity(1000.0))
    sheet = sheet_of_mesh(reading, SheetChoice(), UNIT_SETS["SI"])
    by_symbol = {entry.symbol: entry for entry in sheet.entries}
    assert by_symbol["m"].si is None
    assert by_symbol["m"].reason.startswith("no volume")
    assert by_symbol["A"].si == pytest.approx(12e-6)
    assert [check.name for check in sheet.failed] == ["mesh"]
    assert answer_of_mesh(reading)["centre_m"] is None


def test_an_estimate_is_marked_in_every_line_and_in_the_answer():
    reading = reading_of(box()[:-2], weighing=ByDensity(1000.0))
    sheet = sheet_of_mesh(reading, SheetChoice(), UNIT_SETS["SI"])
    assert {entry.basis for entry in sheet.entries} == {"estimated: holes closed flat"}
    assert answer_of_mesh(reading)["basis"] == "estimated: holes closed flat"
    assert "open" in sheet.failed[0].text


def test_an_assumed_unit_is_said_on_the_sheet_and_in_the_checks():
    reading = reading_of(box(), unit_assumed=True)
    sheet = sheet_of_mesh(reading, SheetChoice(), UNIT_SETS["SI"])
    assert any("mm was assumed" in caution for caution in sheet.cautions)
    assert any(check.name == "unit" and "mm was assumed" in check.text for check in sheet.checks)
    named = sheet_of_mesh(replace(reading, unit_assumed=False), SheetChoice(), UNIT_SETS["SI"])
    assert not any("assumed" in caution for caution in named.cautions)


@pytest.mark.parametrize("counted", [False, True])
def test_restored_curvature_counts_only_when_asked_and_both_are_said(counted: bool):
    exact = json.loads((FACETS / "exact.json").read_text())["parts"]["flange_coarse"]["volume"]
    request = MeshRequest(UNITS["mm"], weighing=ByDensity(1000.0), count_restored=counted)
    reading = read_mesh(FACETS / "flange_coarse.stl", request)
    faceted, restored = reading.faceted, reading.curved
    assert abs(float(restored.mass) * 1e9 / exact - 1) < 0.1 * abs(float(faceted.mass) * 1e9 / exact - 1)
    answer = answer_of_mesh(reading)
    counts = restored if counted else faceted
    assert answer["volume_m3"] == float(counts.mass)
    assert answer["curved"]["volume_m3"] == float(restored.mass)
    assert answer["mass_kg"] == pytest.approx(1000 * float(counts.mass), rel=1e-12)
    assert ("curvature restored" in answer["basis"]) == counted
    (note,) = [note for note in reading.notes if note.startswith("Restoring")]
    assert f"{float(restored.mass / faceted.mass) - 1:+.3%}" in note


def test_an_open_mesh_counts_as_faceted_and_says_so_when_curvature_was_asked_for(tmp_path: Path):
    path = tmp_path / "open.stl"
    path.write_bytes(binary_stl(box()[:-2]))
    reading = read_mesh(path, MeshRequest(UNITS["mm"], count_restored=True))
    assert reading.curved is None
    assert reading.geometry is reading.faceted
    assert any("not restored" in note for note in reading.notes)


def test_shells_and_curvature_of_a_small_mesh_come_unasked(tmp_path: Path):
    path = tmp_path / "two.stl"
    path.write_bytes(binary_stl(np.concatenate([box(), box(at=(3, 0, 0))])))
    reading = read_mesh(path, MeshRequest(UNITS["mm"]))
    assert reading.survey.triangles < AT_ONCE
    assert reading.shells == 2
    assert reading.restored is not None


def test_a_large_mesh_is_answered_without_curvature_and_says_so(tmp_path: Path):
    path = tmp_path / "large.stl"
    path.write_bytes(binary_stl(quartered(box(), 8)))
    reading = read_mesh(path, MeshRequest(UNITS["mm"]))
    assert reading.survey.triangles > AT_ONCE
    assert (reading.restored, reading.shells) == (None, 1)
    assert any("not restored" in note for note in reading.notes)
    assert read_mesh(path, MeshRequest(UNITS["mm"], count_shells=True)).shells == 1


def test_the_answer_has_exactly_the_documented_keys():
    assert tuple(answer_of_mesh(reading_of(box()))) == KEYS


def test_json_text_reads_back_as_the_same_object():
    answer = answer_of_mesh(reading_of(box(1, 2, 3, at=(5, 6, 7)), weighing=Weighed(0.1)))
    text = json_text([answer, {"path": 'a"b·.stl', "error": "x"}, {}, []])
    assert json.loads(text)[0] == answer
    assert json.loads(text)[1]["path"] == 'a"b·.stl'
    assert text.isascii()


def test_bodies_that_overlap_in_one_file_fail_the_check_of_what_is_counted_twice(tmp_path: Path) -> None:
    path = tmp_path / "two.stl"
    path.write_bytes(binary_stl(np.concatenate([box(40, 30, 20), box(40, 30, 20, at=(20, 0, 0))])))
    reading = read_mesh(path, MeshRequest(UNITS["mm"]))
    failed = [check for check in reading.checks if not check.ok]
    assert [check.name for check in failed] == ["counted twice"]
    assert "0.25 of the volume is counted twice" in failed[0].text  # 12,000 of 48,000 mm³


def obj_text(triangles: np.ndarray) -> str:
    points = "\n".join(f"v {x} {y} {z}" for x, y, z in triangles.reshape(-1, 3))
    return points + "\n" + "\n".join(f"f {at} {at + 1} {at + 2}" for at in range(1, 3 * len(triangles), 3))


def test_other_formats_than_stl_are_weighed_as_well(tmp_path: Path) -> None:
    path = tmp_path / "brick.obj"
    path.write_text(obj_text(box(40, 30, 20)))
    reading = read_mesh(path, MeshRequest(UNITS["cm"], weighing=ByDensity(2000.0)))
    assert (reading.survey.format, reading.survey.verdict) == ("OBJ", "closed")
    assert float(reading.body.mass) == pytest.approx(2000 * 0.4 * 0.3 * 0.2, rel=1e-7)


def test_a_unit_that_the_file_names_itself_needs_no_guess(tmp_path: Path) -> None:
    import trimesh

    path = tmp_path / "brick.glb"
    path.write_bytes(trimesh.creation.box((0.4, 0.3, 0.2)).export(file_type="glb"))
    guessed = read_mesh(path, MeshRequest(UNITS["mm"], unit_assumed=True))
    assert (guessed.unit, guessed.unit_assumed) == (UNITS["m"], False)
    assert guessed.volume == pytest.approx(0.024, rel=1e-6)
    told = read_mesh(path, MeshRequest(UNITS["in"]))
    assert told.unit == UNITS["in"]
