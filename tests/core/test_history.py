"""Undo and redo against a plain list with a finger on the present."""

from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st

from core.assembly import Assembly
from core.history import History
from core.machine import Machine


def named(name: str) -> Machine:
    return Machine(Assembly(name))


@given(st.lists(st.sampled_from(["edit", "undo", "redo", "merge"]), max_size=40))
def test_undo_and_redo_walk_through_the_assemblies_that_were(steps):
    history = History(named("0"))
    shown, at = ["0"], 0
    for number, step in enumerate(steps, 1):
        if step == "edit":
            history = history.edited(f"to {number}", named(str(number)))
            shown, at = [*shown[: at + 1], str(number)], at + 1
        elif step == "undo":
            history, at = history.undone(), max(at - 1, 0)
        elif step == "redo":
            history, at = history.redone(), min(at + 1, len(shown) - 1)
        else:
            history = history.merged(f"to {number}", named(str(number)))
            shown = [*shown[:at], str(number)]
        assert history.present.assembly.name == shown[at]
        assert bool(history.undo_name) == (at > 0)
        assert bool(history.redo_name) == (at < len(shown) - 1)
    for name in reversed(shown[:at]):
        history = history.undone()
        assert history.present.assembly.name == name
    for name in shown[1:]:
        history = history.redone()
        assert history.present.assembly.name == name


def test_undo_gives_back_the_very_assembly_that_was():
    before, after = named("before"), named("after")
    history = History(before).edited("rename", after)
    assert history.undone().present is before
    assert history.undone().redone().present is after


def test_an_edit_keeps_its_name_from_undo_to_redo():
    history = History(named("0")).edited("bore 12 → 14 mm", named("1")).edited("delete bolt", named("2"))
    assert (history.undo_name, history.redo_name) == ("delete bolt", "")
    back = history.undone()
    assert (back.undo_name, back.redo_name) == ("bore 12 → 14 mm", "delete bolt")
    assert (back.redone().undo_name, back.undone().redo_name) == ("delete bolt", "bore 12 → 14 mm")


def test_an_edit_after_undo_drops_what_was_undone():
    history = History(named("0")).edited("a", named("1")).undone().edited("b", named("2"))
    assert (history.undo_name, history.redo_name) == ("b", "")
    assert history.redone() is history


def test_values_typed_in_one_go_are_one_step_of_undo():
    history = History(named("0")).edited("length", named("1")).merged("length 12", named("12")).merged("length 125", named("125"))
    assert history.present.assembly.name == "125"
    assert history.undone().present.assembly.name == "0"


def test_there_is_nothing_to_undo_in_a_new_history():
    history = History(named("0"))
    assert history.undone() is history
    assert history.redone() is history
