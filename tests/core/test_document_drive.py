"""What is entered about a drive in the file: kept whole, and refused in words with its place."""

from __future__ import annotations

import json
import zipfile
from typing import TYPE_CHECKING, Any

import pytest
from documents import BY_HAND, packed, refusal_of, unpacked
from drives import flap, settings

from core.document import read_document, save_document
from core.drive.fields import with_number
from core.machine import Machine

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path


def test_a_document_keeps_everything_that_is_entered_about_the_drive(tmp_path):
    typed = with_number(settings(), "duty.steps.1.time", 0.25, "1/4 s")
    for number, drive in enumerate((settings(), typed)):
        machine = Machine(flap(), drive)
        save_document(machine, tmp_path / f"{number}.masswright")
        assert read_document(tmp_path / f"{number}.masswright") == machine


def test_the_same_settings_give_the_same_bytes_whether_typed_whole_or_not(tmp_path):
    whole = with_number(settings(), "stops.0.speed", 2)
    broken = with_number(settings(), "stops.0.speed", 2.0)
    save_document(Machine(flap(), whole), tmp_path / "a.masswright")
    save_document(Machine(flap(), broken), tmp_path / "b.masswright")
    assert (tmp_path / "a.masswright").read_bytes() == (tmp_path / "b.masswright").read_bytes()


def test_a_document_without_a_drive_has_no_entry_for_one(tmp_path):
    save_document(Machine(flap()), tmp_path / "flap.masswright")
    with zipfile.ZipFile(tmp_path / "flap.masswright") as archive:
        assert "drive_settings" not in json.loads(archive.read("assembly.json"))


def refusal_after(folder: Path, change: Callable[[dict[str, Any]], object]) -> str:
    save_document(Machine(flap(), settings()), folder / "flap.masswright")
    entries = unpacked((folder / "flap.masswright").read_bytes())
    data = json.loads(entries["assembly.json"])
    change(data["drive_settings"])
    return refusal_of(packed({**entries, "assembly.json": json.dumps(data).encode()})).removeprefix("dial.masswright, ")


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (
            lambda drive: drive["train"]["stages"][2].update(efficiency=1.4),
            "drive_settings.train.stages[2], gearbox: an efficiency lies above 0 and at most at 1; read 1.4.",
        ),
        (
            lambda drive: drive["train"]["stages"][2].update(kind="magic"),
            "drive_settings.train.stages[2] (gearbox): the kind has to be one of 'gear', 'belt', 'coupling', 'brake'; read 'magic'.",
        ),
        (
            lambda drive: drive["duty"]["steps"][0]["timing"].update(time="0.8"),
            "drive_settings.duty.steps[0].timing.time: this has to be a number; read '0.8'.",
        ),
        (
            lambda drive: drive["duty"]["steps"][2]["steps"][0].update(angle=0.0),
            "drive_settings.duty.steps[2].steps[0], angle of a move: a move needs an angle that is not 0; read 0.",
        ),
        (
            lambda drive: drive["turning"][1].update(key="lost"),
            "drive_settings.turning: the assembly has no such line; read lost.",
        ),
        (
            lambda drive: drive["turning"][1].update(axis="Lost"),
            "drive_settings.turning: the document has no such axis; read 'Lost'. Choose one of Hinge, Drum.",
        ),
        (
            lambda drive: drive["balance"].update(shaft="lost"),
            "drive_settings, balance:",
        ),
        (lambda drive: drive.pop("duty"), f"drive_settings.duty: this entry is missing. {BY_HAND}"),
        (lambda drive: drive.update(colour="red"), "drive_settings.colour: this version knows no such entry; read 'red'."),
    ],
)
def test_a_drive_that_cannot_be_is_refused_with_its_place(tmp_path, change, sentence):
    assert refusal_after(tmp_path, change).startswith(sentence)
