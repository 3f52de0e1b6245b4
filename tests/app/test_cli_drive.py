"""The drive on the command line: the same numbers in every form, and a refusal that is named and counted."""

from __future__ import annotations

import csv
import io
import json
from dataclasses import replace
from pathlib import Path

import pytest
from drives import flap, settings

from app.cli import main
from core.document import save_document
from core.drive import DriveSettings, StopCase, TurnsWith
from core.machine import Machine

SAMPLES = Path(__file__).parents[2] / "sample_parts"
RMS = "RMS torque at the motor shaft over the whole duty, rests counted"
CAUTION = "Gravity can move this load when the drive is off"


@pytest.fixture
def run(capsys):
    """Run the command in this process; returns status, standard output, standard error."""

    def call(*words: object) -> tuple[int, str, str]:
        status = main([str(word) for word in words])
        out, err = capsys.readouterr()
        return status, out, err

    return call


@pytest.mark.parametrize("name", ["winding_reel", "tilting_flap"])
def test_a_sample_is_answered_with_its_drive_and_its_balance_and_no_failed_check(run, name):
    status, out, err = run("weigh", SAMPLES / f"{name}.masswright", "--format", "json")
    found = json.loads(out)
    assert (status, err) == (0, "")
    assert found["drive"]["duty"]["motor"]["rms_Nm"] > 0
    assert {one["within"] for one in found["drive"]["limits"]} == {True}
    assert found["drive"]["inertia_ratio"]["within"]
    assert found["balance"]["corrections"]
    assert any(CAUTION in caution for caution in found["drive"]["cautions"])


@pytest.mark.parametrize(("form", "separator"), [("tsv", "\t"), ("csv", ",")])
def test_weigh_and_handover_write_the_rms_torque_of_the_json_with_its_unit_and_cautions(run, tmp_path, form, separator):
    sample = SAMPLES / "winding_reel.masswright"
    expected = json.loads(run("weigh", sample, "--format", "json")[1])["drive"]["duty"]["motor"]["rms_Nm"]
    assert run("handover", sample, "--to", tmp_path / f"sheet.{form}")[0] == 0
    written = (tmp_path / f"sheet.{form}").read_text(encoding="utf-8-sig")
    for text in (run("weigh", sample, "--format", form)[1], written):
        rows = {row[0]: row[1:] for row in csv.reader(io.StringIO(text), delimiter=separator)}
        assert (float(rows[RMS][0]), rows[RMS][1]) == (expected, "N·m")
        assert rows[RMS][2].startswith("parts: mixed: computed, ")
        assert CAUTION in text


def test_the_text_sheet_has_a_section_for_each_shaft(run):
    out = run("weigh", SAMPLES / "winding_reel.masswright")[1]
    for heading in ("Drive: inertia", "Drive: duty at the motor shaft", "Drive: duty at the load shaft", "Balance: unbalance"):
        assert f"\n{heading}" in out
    assert RMS in out
    assert CAUTION in out


def test_handover_writes_the_json_that_weigh_prints(run, tmp_path):
    sample = SAMPLES / "tilting_flap.masswright"
    run("handover", sample, "--to", tmp_path / "sheet.json")
    assert (tmp_path / "sheet.json").read_text() == run("weigh", sample, "--format", "json")[1]


@pytest.mark.parametrize(("drive", "key", "sentence"), [
    (DriveSettings(gravity=(0.0, -9.81, 0.0), stops=(StopCase(1.0, 0.0),)), "drive", "nothing stops the load"),
    (replace(settings(), turning=(TurnsWith(), TurnsWith("drum", "load", "Drum"))), "balance", "turns about different axes"),
])
def test_what_cannot_be_worked_out_is_null_and_named_on_standard_error_with_status_1(run, tmp_path, drive, key, sentence):
    path = tmp_path / "flap.masswright"
    save_document(Machine(flap(), drive), path)
    status, out, err = run("weigh", path, "--format", "json")
    assert status == 1
    assert json.loads(out)[key] is None
    (line,) = [line for line in err.splitlines() if f"check failed: {key}: " in line]
    assert sentence in line
    status, _, err = run("handover", path, "--to", tmp_path / "sheet.csv")
    assert status == 1
    assert sentence in err
