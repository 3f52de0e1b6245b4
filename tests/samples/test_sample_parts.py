"""The samples are what their script makes, and plausible to an engineer who checks them by hand."""

from __future__ import annotations

import importlib.util
import os
import subprocess
import sys
from dataclasses import replace
from math import pi
from pathlib import Path

import numpy as np
import pytest
from oracles import moments_of_facets

from core.assembly import findings_of, ledger_of
from core.assembly.names import NameEntry
from core.assembly.naming import with_entry
from core.assembly.overlap_findings import overlaps_looked_for
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
    made = ("fixture.stl", "indexing_dial.masswright", "winding_reel.masswright", "tilting_flap.masswright")
    assert ran.stdout == f"{', '.join(made[:-1])} and {made[-1]} are in {tmp_path}\n"
    for name in made:
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


# The winding reel


@pytest.fixture(scope="module")
def reel():
    return read_document(FOLDER / "winding_reel.masswright")


@pytest.fixture(scope="module")
def flap():
    return read_document(FOLDER / "tilting_flap.masswright")


def test_reel_and_flap_open_without_a_failing_check(reel, flap):
    for machine in (reel, flap):
        found = (*machine.findings(), *overlaps_looked_for(machine.assembly))
        assert [finding.check.text for finding in found if not finding.check.ok] == []
        assert machine.assembly.without_mass == ()


def test_the_inertia_of_the_reel_is_what_a_sketch_gives(reel):
    def ring(outer: float, inner: float, length: float, density: float) -> tuple[float, float]:
        mass = density * pi / 4 * (outer**2 - inner**2) * length
        return mass, mass * (outer**2 + inner**2) / 8

    axle, thread = ring(0.025, 0, 0.26, STEEL), ring(0.0068, 0, 0.02, STEEL)
    wheel, flange = ring(0.12, 0.025, 0.024, ALUMINIUM), ring(0.34, 0.025, 0.005, ALUMINIUM)
    window, pin = ring(0.06, 0, 0.005, ALUMINIUM), ring(0.008, 0, 0.018, STEEL)
    core = ring(0.076, 0.07, 0.12, 700.0)
    inertia = (
        axle[1] - thread[1] + wheel[1] + 2 * (flange[1] - 6 * (window[1] + window[0] * 0.11**2))
        + 3 * (pin[1] + pin[0] * 0.05**2) + core[1] + 7.2 * (0.3**2 + 0.076**2) / 8 + 0.00085
        + 0.008 * ((0.02**2 + 0.012**2) / 12 + 0.155**2)
    )
    answer = reel.drive_answer
    assert answer.at_load.inertia == pytest.approx(inertia, rel=1e-9)
    # Two to one in the belt, five to one in the gearbox; the small wheel and the belt turn with the gearbox's shaft.
    small = ring(0.06, 0.014, 0.024, STEEL)[1]
    at_motor = 3.1e-4 + 1.8e-5 + 2e-6 + 2.4e-5 + 4.5e-5 + (0.18 * 0.03**2 + small) / 5**2 + inertia / 10**2
    assert answer.reflected_motor.inertia == pytest.approx(at_motor, rel=1e-9)


def test_the_flag_alone_unbalances_the_reel_and_two_masses_correct_it(reel):
    balance = reel.balance_answer
    assert balance.found.amount == pytest.approx(0.008 * 0.155, rel=1e-9)
    assert balance.keeps
    assert balance.left.amount <= 1e-12 * balance.found.amount
    assert balance.left.couple_amount <= 1e-12 * balance.found.couple_amount


def test_the_ribbon_unwinds_the_reel_when_the_drive_is_off_and_the_brake_keeps_it(reel):
    # 18 N at a radius of 150 mm.
    assert reel.drive.torques[0].torque == pytest.approx(2.7, rel=1e-12)
    assert {(rest.drift, rest.drift_braked) for rest in reel.drive_answer.standstills} == {("turns backwards", "stays")}


def test_a_named_dimension_moves_the_coil_and_the_pull_on_it_together(reel):
    thin = reel.with_assembly(with_entry(reel.assembly, NameEntry("coil_d", "200 mm")))
    assert thin.drive.torques[0].torque == pytest.approx(1.8, rel=1e-12)
    assert thin.assembly.node("coil").body.shape.outer_diameter == pytest.approx(0.2, rel=1e-12)


def test_the_flaps_own_weight_would_drop_it_but_for_its_counterweight(flap):
    alone = flap.with_assembly(replace(flap.assembly, variant="bare"))
    (held,), (free,) = flap.drive_answer.gravity, alone.drive_answer.gravity
    # Blade less its holes, ribs, lip and screws, by their levers; the shaft and the cam hang at the hinge.
    blade = 2660 * (0.45 * 0.5 * 0.195 - 4 * pi / 4 * 0.05**2 * 0.255) * 0.006
    level = blade + 2660 * 2 * 0.02 * 0.004 * 0.36 * 0.23 + 0.065 * 0.414 + 0.22 * 0.004
    height = 2660 * (0.45 * 0.5 - pi * 0.05**2) * 0.006 * 0.018 + 0.153216 * 0.005 + 0.054 * 0.024 + 0.065 * 0.026
    assert free.amplitude == pytest.approx(np.hypot(level, height) * 9.80665, rel=1e-6)
    assert held.amplitude < free.amplitude / 5
    assert alone.drive_answer.standstills[0].drift == "turns forwards"
    assert {rest.drift_braked for rest in (*flap.drive_answer.standstills, *alone.drive_answer.standstills)} == {"stays"}


def test_the_counterweight_halves_the_continuous_torque_that_holding_the_flap_takes(flap):
    alone = flap.with_assembly(replace(flap.assembly, variant="bare")).drive_answer
    with_it = flap.drive_answer
    assert abs(alone.standstills[0].holding) > 5 * abs(with_it.standstills[0].holding)
    assert alone.motor.rms > 2 * with_it.motor.rms
    # What holds costs inertia: the price of a counterweight.
    assert with_it.at_load.inertia > 1.8 * alone.at_load.inertia


def _area(loop: np.ndarray) -> float:
    x, y = loop[:, 0], loop[:, 1]
    return float(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y) / 2)
