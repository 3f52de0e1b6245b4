"""The samples are what their script makes, and plausible to an engineer who checks them by hand."""

from __future__ import annotations

import importlib.util
import os
import subprocess
import sys
from math import pi
from pathlib import Path

import numpy as np
import pytest
from oracles import moments_of_facets

from core.assembly import findings_of, ledger_of
from core.document import read_document

ROOT = Path(__file__).resolve().parents[2]
FOLDER = ROOT / "sample_parts"
STEEL, ALUMINIUM, HARD_ALUMINIUM, STAINLESS = 7850.0, 2700.0, 2810.0, 7900.0


@pytest.fixture(scope="module")
def script():
    spec = importlib.util.spec_from_file_location("make_samples", FOLDER / "make_samples.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.fixture(scope="module")
def dial():
    return read_document(FOLDER / "indexing_dial.masswright").assembly


@pytest.fixture(scope="module")
def fixture(dial):
    return next(part for part in dial.table.parts if part.name == "fixture")


def test_the_script_makes_the_committed_files_byte_for_byte(tmp_path):
    paths = os.pathsep.join([str(ROOT), os.environ.get("PYTHONPATH", "")])
    command = [sys.executable, str(FOLDER / "make_samples.py"), str(tmp_path)]
    ran = subprocess.run(command, env={**os.environ, "PYTHONPATH": paths}, capture_output=True, text=True, check=True)
    assert ran.stdout == f"fixture.stl and indexing_dial.masswright are in {tmp_path}\n"
    for name in ("fixture.stl", "indexing_dial.masswright"):
        assert (tmp_path / name).read_bytes() == (FOLDER / name).read_bytes()


def test_the_document_holds_the_mesh_that_lies_beside_it(fixture):
    assert fixture.body.asset.data == (FOLDER / "fixture.stl").read_bytes()
    assert fixture.body.asset.name == "fixture.stl"


def test_the_fixture_is_closed_and_in_millimetres(fixture):
    survey = fixture.body.asset.survey
    assert (survey.verdict, survey.closed, survey.open_edges, survey.degenerate) == ("closed", True, 0, 0)
    assert 1000 <= survey.triangles <= 3000
    np.testing.assert_array_equal(survey.bounds, [[-35, -45, 0], [35, 45, 40]])


def test_the_fixtures_volume_is_that_of_the_layers_between_its_loops(script, fixture):
    loops = [np.array(loop, dtype=np.float32).astype(float) for loop in script.fixture_loops()]
    volume = 0.0
    for low, high in zip(loops, [*loops[1:], loops[0]], strict=True):
        # Simpson's rule is exact between two parallel outlines whose sides stay parallel.
        rise = high[0, 2] - low[0, 2]
        volume += rise * (_area(low) + 4 * _area((low + high) / 2) + _area(high)) / 6
    assert float(fixture.body.asset.survey.solid.mass) == pytest.approx(volume, rel=1e-6)


def test_the_fixtures_volume_is_that_of_the_drawing_less_what_its_facets_cut_off(fixture):
    corners = (4 - pi) * 12**2
    middle = 70 * 90 - corners
    top = 67 * 87 - (4 - pi) * 10.5**2
    between = 68.5 * 88.5 - (4 - pi) * 11.25**2
    block = 38.5 * middle + 1.5 * (middle + 4 * between + top) / 6
    # The round of radius 4 between wall and floor, by Pappus: a quarter disc whose centre runs on a circle of 21 mm.
    pocket = pi * 25**2 * 21 + pi * 21**2 * 4 + 2 * pi * (pi / 4 * 4**2) * (21 + 4 * 4 / (3 * pi))
    drain = pi * 9**2 * 15
    assert float(fixture.body.asset.survey.solid.mass) == pytest.approx(block - pocket - drain, rel=5e-4)


def test_the_moments_of_the_fixture_agree_with_quadrature_over_its_facets(fixture):
    expected = moments_of_facets(fixture.surface)
    np.testing.assert_allclose(fixture.body.solid.mass, expected.mass, rtol=1e-9)
    np.testing.assert_allclose(fixture.body.solid.centre, expected.centre, rtol=0, atol=1e-9 * 0.1)
    np.testing.assert_allclose(fixture.body.solid.spread, expected.spread, rtol=0, atol=1e-9 * expected.mass * 0.1**2)


def test_every_part_has_a_mass_and_every_check_passes(dial):
    assert dial.without_mass == ()
    assert [finding.check.text for finding in findings_of(dial) if not finding.check.ok] == []


def test_the_inertia_about_the_spindle_is_what_a_sketch_gives(dial, fixture):
    def ring(outer: float, inner: float, length: float, density: float) -> tuple[float, float]:
        mass = density * pi / 4 * (outer**2 - inner**2) * length
        return mass, mass * (outer**2 + inner**2) / 8

    plate, hub = ring(0.5, 0.04, 0.02, ALUMINIUM), ring(0.13, 0.04, 0.03, STEEL)
    shaft, head, nut = ring(0.04, 0, 0.24, STEEL), ring(0.013, 0, 0.008, STEEL), ring(0.0138, 0, 0.0065, STEEL)
    flag = STAINLESS * 0.03 * 0.012 * 0.025
    solid = moments_of_facets(fixture.surface)
    holder = HARD_ALUMINIUM * float(solid.mass)
    holder_own = HARD_ALUMINIUM * float(solid.spread[0, 0] + solid.spread[1, 1])
    mass = plate[0] + hub[0] + shaft[0] + 8 * (head[0] + nut[0]) + 6 * (holder + 0.138) + flag + 1.9
    inertia = (
        plate[1] + hub[1] + shaft[1] + 8 * (head[1] + nut[1] + (head[0] + nut[0]) * 0.052**2)
        + 6 * (holder_own + holder * 0.18**2 + 0.138 * (0.024**2 / 2 + 0.18**2))
        + flag * ((0.03**2 + 0.012**2) / 12 + 0.23**2) + 0.0021
    )
    foot = ledger_of(dial).total
    assert foot.mass == pytest.approx(mass, rel=1e-9)
    # The flag's place is rounded to a micrometre in the document.
    assert foot.inertia == pytest.approx(inertia, rel=1e-6)
    assert (round(foot.mass, 1), round(foot.inertia, 3)) == (21.9, 0.482)


def test_only_the_flag_moves_the_centre_of_mass_off_the_spindle(dial):
    x, y, _ = dial.total.centre
    assert np.hypot(x, y) * float(dial.total.mass) == pytest.approx(STAINLESS * 0.03 * 0.012 * 0.025 * 0.23, rel=1e-5)
    assert np.degrees(np.arctan2(y, x)) == pytest.approx(30, abs=1e-3)


def _area(loop: np.ndarray) -> float:
    x, y = loop[:, 0], loop[:, 1]
    return float(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y) / 2)
