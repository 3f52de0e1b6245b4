"""What lines turn with: what counts for each, its words, its edits, and the axis that cannot go meanwhile."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.assembly import Assembly, DriveAxis, Group, Part, ShapeBody, walk
from core.drive import FIXED, LOAD, MOTOR, DriveSettings, Gear, Train, TurnsWith, bodies_of
from core.drive.axis import entries_by_line, shafts_by_key, turning_about, without_idle_axis
from core.drive.turning import (
    STANDS_STILL,
    turning_elsewhere,
    turning_of_line,
    turning_words,
    with_turning,
    without_turning,
)
from core.errors import EditRefused, ValueRefused
from core.machine import Machine
from core.material import Weighed
from core.placement import Pose
from core.shapes import Cylinder


def disc(key: str, x: float = 0.0) -> Part:
    return Part(key, f"the {key}", ShapeBody(Cylinder(0.2, 0.02)), Weighed(2.0), Pose((x, 0.0, 0.0)))


ASSEMBLY = Assembly(
    "press",
    (Group("head", "head", (disc("dial"), Group("arm", "arm", (disc("pad"), disc("roller", 0.3))))), disc("pinion", 0.5)),
    (DriveAxis("Spindle"), DriveAxis("Roller axis", (0.3, 0.0, 0.0))),
)
GEARED = DriveSettings(train=Train(stages=(Gear("belt", 2.0), Gear("gear", 4.0))))
KEYS = [node.key for node, _ in walk(ASSEMBLY.members)]


ENTRIES = st.builds(
    TurnsWith, st.sampled_from(["", *KEYS]), st.sampled_from([LOAD, MOTOR, "belt", FIXED]),
    st.sampled_from(["", "Roller axis"]),
)


def turnings() -> st.SearchStrategy[tuple[TurnsWith, ...]]:
    return st.lists(ENTRIES, max_size=4, unique_by=lambda entry: entry.key).map(tuple)


@given(turnings())
def test_the_innermost_entry_counts_for_every_line(turning):
    by_line = entries_by_line(ASSEMBLY, turning)
    by_key = {entry.key: entry for entry in turning}
    for key in KEYS:
        holders = [key, *(group.key for group in reversed(ASSEMBLY.groups_above(key))), ""]
        assert by_line[key] == next((by_key[one] for one in holders if one in by_key), None)


@given(turnings())
def test_no_mass_turns_twice_and_only_what_stands_still_is_left_out(turning):
    bodies = bodies_of(ASSEMBLY, turning)
    turned = sum(float(body.moments.mass) for body in bodies)
    assert turned == pytest.approx(2.0 * len(shafts_by_key(ASSEMBLY, turning)), rel=1e-14)


@given(turnings())
def test_what_is_said_of_a_line_is_where_its_mass_turns(turning):
    settings = replace(GEARED, turning=turning)
    elsewhere = turning_elsewhere(ASSEMBLY, settings)
    by_line = entries_by_line(ASSEMBLY, turning)
    for key in KEYS:
        entry = by_line[key]
        plain = entry is not None and (entry.shaft, entry.axis) == (LOAD, "")
        assert (key not in elsewhere) == plain
        if not plain:
            assert elsewhere[key] == turning_words(ASSEMBLY, settings, entry)


def test_shafts_and_axes_are_said_in_words():
    said = {
        TurnsWith("a"): "load", TurnsWith("a", MOTOR): "motor", TurnsWith("a", "belt"): "behind belt",
        TurnsWith("a", "gear"): "load", TurnsWith("a", FIXED, "Roller axis"): STANDS_STILL,
        TurnsWith("a", MOTOR, "Roller axis"): "motor, about Roller axis", TurnsWith("a", LOAD, "Spindle"): "load",
    }
    assert {entry: turning_words(ASSEMBLY, GEARED, entry) for entry in said} == said
    assert turning_words(ASSEMBLY, GEARED, None) == STANDS_STILL
    assert turning_words(ASSEMBLY, DriveSettings(), TurnsWith("a", MOTOR)) == "motor and load"


def test_a_plain_document_turns_with_the_load_and_says_nothing_of_it():
    assert turning_elsewhere(ASSEMBLY, DriveSettings()) == {}
    assert set(turning_elsewhere(ASSEMBLY, DriveSettings(turning=()))) == set(KEYS)
    assert Machine(ASSEMBLY, with_turning(GEARED, TurnsWith("arm", FIXED))).turning_elsewhere == dict.fromkeys(
        ("arm", "pad", "roller"), STANDS_STILL
    )


def test_a_line_has_one_entry_however_often_it_is_changed():
    once = with_turning(GEARED, TurnsWith("pinion", MOTOR))
    other = with_turning(with_turning(once, TurnsWith("arm", FIXED)), TurnsWith("pinion", "belt"))
    assert other.turning == (TurnsWith(), TurnsWith("pinion", "belt"), TurnsWith("arm", FIXED))
    assert turning_of_line(other, "pinion") == TurnsWith("pinion", "belt")
    back = without_turning(without_turning(other, "pinion"), "arm")
    assert back == GEARED
    assert turning_of_line(back, "pinion") is None


def test_a_shaft_that_is_not_there_and_taking_the_whole_document_away_are_refused():
    with pytest.raises(ValueRefused, match="what turns: the train has no such shaft; read 'chain'"):
        with_turning(GEARED, TurnsWith("pinion", "chain"))
    with pytest.raises(EditRefused, match="what turns: what nothing else is said of turns with the whole document"):
        without_turning(GEARED, "")


def test_an_axis_goes_only_when_nothing_turns_about_it():
    turning = with_turning(GEARED, TurnsWith("roller", "belt", "Roller axis")).turning
    assert turning_about(ASSEMBLY, turning, "Roller axis") == ("the roller",)
    assert turning_about(ASSEMBLY, turning, "Spindle") == ("the whole document",)
    with pytest.raises(EditRefused, match="Roller axis: an axis that something turns about cannot be deleted: the roll"):
        without_idle_axis(ASSEMBLY, turning, "Roller axis")
    with pytest.raises(EditRefused, match="Spindle: the drive axis cannot be deleted"):
        without_idle_axis(ASSEMBLY, turning, "Spindle")
    still = with_turning(GEARED, TurnsWith("roller", FIXED, "Roller axis")).turning
    assert [axis.name for axis in without_idle_axis(ASSEMBLY, still, "Roller axis").axes] == ["Spindle"]


def test_the_roller_turns_about_its_own_axis_with_the_inertia_of_a_disc():
    settings = with_turning(GEARED, TurnsWith("roller", "belt", "Roller axis"))
    _, roller = bodies_of(ASSEMBLY, settings.turning)
    assert roller.inertia == pytest.approx(2.0 * 0.2**2 / 8, rel=1e-14)
    np.testing.assert_allclose(roller.axis.point, [0.3, 0.0, 0.0])
