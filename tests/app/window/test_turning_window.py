"""What a line turns with, chosen on the Part page and marked in the ledger."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")

from window_driver import choose, text_of

from app.window.fields import ChoiceField
from app.window.ledger.columns import INDEX
from core.assembly import DriveAxis
from core.assembly.axes import with_axis_added
from core.drive import FIXED, MOTOR, Gear, Train, TurnsWith

if TYPE_CHECKING:
    from app.window.main import MainWindow


def choice(window: MainWindow, name: str) -> ChoiceField:
    found = [each for each in window.part.findChildren(ChoiceField) if each.accessibleName() == name]
    return next(each for each in found if each.window() is window and not each.parent().parent().isHidden())


def offered(field: ChoiceField) -> list[str]:
    return [field.itemText(at) for at in range(field.count())]


@pytest.fixture
def geared(filled: MainWindow) -> MainWindow:
    """The dial behind a belt and a gearbox, with a second axis; the group "top" is selected."""
    train = Train(stages=(Gear("belt", 2.0), Gear("gearbox", 4.0)))
    assert filled.session.edit_drive("train", lambda drive: replace(drive, train=train))
    pinion = DriveAxis("Pinion axis", (0.5, 0.0, 0.0))
    assert filled.session.edit("axis", lambda before: with_axis_added(before, pinion))
    filled.session.select(frozenset({"top"}))
    filled.pages.setCurrentWidget(filled.part)
    return filled


def test_a_group_turns_as_the_document_until_another_shaft_is_chosen(geared):
    shaft = choice(geared, "Turns with")
    assert offered(shaft) == ["as the whole document: load", "motor", "behind belt", "load", "stands still"]
    assert shaft.currentText() == "as the whole document: load"
    assert choice(geared, "About").isHidden()
    tree = geared.ledger.tree
    assert tree.isColumnHidden(INDEX["turns"])
    choose(shaft, "behind belt")
    assert geared.session.drive.turning == (TurnsWith(), TurnsWith("top", "belt"))
    assert geared.session.history.undo_name == "top turns with behind belt"
    assert not tree.isColumnHidden(INDEX["turns"])
    assert not geared.ledger.foot.isColumnHidden(INDEX["turns"])
    assert [text_of(geared, key, "turns") for key in ("top", "hub", "ring")] == ["behind belt", "behind belt", ""]
    choose(choice(geared, "About"), "Pinion axis")
    assert text_of(geared, "pins", "turns") == "behind belt, about Pinion axis"
    geared.undo()
    geared.undo()
    assert geared.session.drive.turning == (TurnsWith(),)
    assert choice(geared, "Turns with").currentText() == "as the whole document: load"
    assert tree.isColumnHidden(INDEX["turns"])


def test_a_part_turns_as_its_group_and_can_stand_still_in_it(geared):
    choose(choice(geared, "Turns with"), "motor")
    geared.session.select(frozenset({"hub"}))
    shaft = choice(geared, "Turns with")
    assert shaft.currentText() == "as the group top: motor"
    choose(shaft, "stands still")
    assert geared.session.drive.turning[1:] == (TurnsWith("top", MOTOR), TurnsWith("hub", FIXED))
    assert choice(geared, "About").isHidden()
    assert [text_of(geared, key, "turns") for key in ("hub", "plate")] == ["stands still", "motor"]
    choose(shaft, "as the group top: motor")
    assert geared.session.drive.turning[1:] == (TurnsWith("top", MOTOR),)
    assert geared.session.history.undo_name == "hub turns as what holds it"


def test_what_cannot_turn_so_is_refused_and_the_choice_goes_back(geared):
    choose(choice(geared, "Turns with"), "load")
    choose(choice(geared, "About"), "Pinion axis")
    assert "about different axes" in geared.notice.words.text()
    assert choice(geared, "About").currentText() == "the drive axis, Spindle"
    assert geared.session.drive.turning[1:] == (TurnsWith("top"),)


def test_a_renamed_stage_and_axis_are_offered_by_their_new_names(geared):
    gears = (Gear("chain", 2.0), Gear("gearbox", 4.0))
    geared.session.edit_drive("rename", lambda drive: drive.with_stages(gears, {"belt": "chain"}))
    assert "behind chain" in offered(choice(geared, "Turns with"))
    choose(choice(geared, "Turns with"), "behind chain")
    assert offered(choice(geared, "About")) == ["the drive axis, Spindle", "Pinion axis"]
