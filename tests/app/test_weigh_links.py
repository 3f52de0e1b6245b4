"""The command line on a document with a linked group whose file is there, has changed, or is missing."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING

import pytest

from app.cli import main
from core.assembly import Assembly, Part, ShapeBody
from core.assembly.linked_groups import with_linked_group
from core.document import read_linked, save_document
from core.machine import Machine
from core.material import ByDensity
from core.shapes import Box

if TYPE_CHECKING:
    from pathlib import Path

BLOCK_KG = 7850 * 0.06 * 0.05 * 0.03
MISSING = "last values: linked file missing"


def block(width: float = 0.06) -> Machine:
    return Machine(Assembly("block", (Part("p1", "block", ShapeBody(Box(width, 0.05, 0.03)), ByDensity(7850.0)),)))


@pytest.fixture
def dial(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> str:
    """A document in the working directory that links another one beside it."""
    monkeypatch.chdir(tmp_path)
    save_document(block(), "block.masswright")
    linked = with_linked_group(Assembly("dial"), read_linked("block.masswright"), None, None)
    save_document(Machine(linked), "dial.masswright")
    return "dial.masswright"


def test_a_linked_file_that_holds_what_was_read_is_sound(dial: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["weigh", dial, "--format", "json"]) == 0
    answer = json.loads(capsys.readouterr().out)
    assert answer["mass_kg"] == pytest.approx(BLOCK_KG, rel=1e-12)
    assert answer["basis"] == "computed"
    (check,) = [check for check in answer["checks"] if check["name"] == "linked file"]
    assert (check["ok"], check["key"], check["part"]) == (True, "g1", "block")


@pytest.mark.parametrize("state", ["missing", "has changed"])
def test_values_of_a_missing_or_changed_file_are_printed_and_the_check_fails(
    dial: str, capsys: pytest.CaptureFixture[str], tmp_path: Path, state: str
) -> None:
    if state == "missing":
        (tmp_path / "block.masswright").unlink()
    else:
        save_document(block(0.09), "block.masswright")
    assert main(["weigh", dial, "--format", "json"]) == 1
    out, err = capsys.readouterr()
    answer = json.loads(out)
    assert answer["mass_kg"] == pytest.approx(BLOCK_KG, rel=1e-12)
    basis = f"last values: linked file {state}"
    assert answer["basis"] == basis
    assert {line["basis"] for line in answer["ledger"]} == {basis}
    assert err.startswith("masswright: check failed: linked file: dial.masswright: block: ")
    assert main(["weigh", dial]) == 1
    assert basis in capsys.readouterr().out


@pytest.mark.parametrize("form", ["csv", "tsv", "json"])
def test_what_is_handed_over_says_that_a_file_is_missing(
    dial: str, capsys: pytest.CaptureFixture[str], tmp_path: Path, form: str
) -> None:
    (tmp_path / "block.masswright").unlink()
    assert main(["handover", dial, "--to", f"sheet.{form}"]) == 1
    assert MISSING in (tmp_path / f"sheet.{form}").read_text(encoding="utf-8-sig")
    assert capsys.readouterr().err.startswith("masswright: check failed: linked file: block: linked file missing")
