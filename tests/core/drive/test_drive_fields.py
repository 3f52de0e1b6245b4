"""Numbers of a drive by path, lists of entries, and named dimensions in them."""

from __future__ import annotations

import math
from dataclasses import fields, is_dataclass, replace

import pytest
from drives import flap_machine, settings
from hypothesis import given
from hypothesis import strategies as st

from core.assembly.names import NameEntry
from core.assembly.naming import with_entries, with_entry, with_name_changed, without_name
from core.drive import DriveSettings, Gear, Rest
from core.drive.fields import kind_at, number_at, typed_at, with_number, with_numbers, with_typed_number, words_at
from core.drive.items import items_at, with_item, with_item_at, with_item_moved, without_item
from core.errors import EditRefused, QuantityError, ValueRefused
from core.quantity import Kind


def paths_of(value: object, above: str = "") -> list[str]:
    """Return the path of every number in a value, found without core.drive.fields."""
    if isinstance(value, float | int) and not isinstance(value, bool):
        return [above]
    if isinstance(value, tuple):
        return [path for at, one in enumerate(value) for path in paths_of(one, f"{above}.{at}")]
    if is_dataclass(value):
        inner = [(one.name, getattr(value, one.name)) for one in fields(value) if one.name != "typed"]
        return [path for name, one in inner for path in paths_of(one, f"{above}.{name}" if above else name)]
    return []


ALL = paths_of(settings())


@pytest.mark.parametrize("path", ALL)
def test_every_number_of_a_drive_has_a_path_that_gives_and_takes_it(path):
    before = settings()
    value = number_at(before, path)
    assert isinstance(kind_at(path), Kind)
    assert words_at(before, path)
    assert with_number(before, path, value) == before


def test_a_number_is_put_where_its_path_leads_and_nowhere_else():
    after = with_number(settings(), "duty.steps.2.steps.1.timing.time", 0.75, "3/4 s")
    assert after.duty.steps[2].steps[1].timing.time == 0.75
    assert typed_at(after, "duty.steps.2.steps.1.timing.time") == "3/4 s"
    put_back = with_number(after, "duty.steps.2.steps.1.timing.time", 0.5)
    assert put_back == settings()


def test_several_numbers_are_put_in_at_once_because_each_alone_could_not_be():
    with pytest.raises(ValueRefused, match="ends after it starts"):
        with_number(settings(), "forces.0.start", 2.0)
    after = with_numbers(settings(), {"forces.0.start": 2.0, "forces.0.end": 3.0})
    assert (after.forces[0].start, after.forces[0].end) == (2.0, 3.0)
    assert with_numbers(after, {"forces.0.start": None, "forces.0.end": None}).forces[0].start is None


@pytest.mark.parametrize(
    ("path", "kind", "words"),
    [
        ("train.stages.2.ratio", Kind.NUMBER, "gearbox, ratio"),
        ("train.motor.inertia", Kind.INERTIA, "motor, inertia"),
        ("duty.steps.1.time", Kind.TIME, "duty, step 2, time"),
        ("duty.steps.2.steps.0.timing.speed", Kind.SPEED, "duty, step 3, step 1, speed"),
        ("forces.0.point.1", Kind.LENGTH, "wind, point y"),
        ("limits.peak.points.1.1", Kind.TORQUE, "motor limits, point 2, torque"),
        ("gravity.2", Kind.ACCELERATION, "gravity z"),
        ("frictions.0.viscous", Kind.VISCOUS_FRICTION, "hinge, viscous friction"),
    ],
)
def test_a_number_says_what_it_measures_and_what_it_is_of(path, kind, words):
    assert kind_at(path) == kind
    assert words_at(settings(), path).removeprefix("drive, ") == words


@pytest.mark.parametrize("path", ["train.stages.2.colour", "forces.0.force.3", "limits.peak.points.0.2", "speed of"])
def test_a_path_that_leads_to_no_number_is_refused(path):
    with pytest.raises(EditRefused, match="no such number"):
        kind_at(path)


def test_a_number_of_an_entry_that_is_not_there_is_refused():
    with pytest.raises(EditRefused, match="no such entry"):
        with_number(settings(), "stops.7.speed", 1.0)
    assert number_at(settings(), "stops.7.speed") is None


def test_a_refused_number_is_told_as_it_was_shown_and_not_in_si():
    with pytest.raises(ValueRefused, match="limit of speed has to be more than 0; read -5 rpm"):
        with_typed_number(settings(), "duty.steps.2.steps.0.timing.speed", -0.5235987755982988, "", "-5 rpm")
    with pytest.raises(ValueRefused, match=r"ramps take longer than the whole move; read 0\.9 \+"):
        with_typed_number(settings(), "duty.steps.0.ramp_up", 0.9, "90 %", "90 %")
    taken = with_typed_number(settings(), "train.stages.2.ratio", 6.0, "2*3", "2*3")
    assert taken == with_number(settings(), "train.stages.2.ratio", 6.0, "2*3")


def test_repeats_are_whole():
    assert with_number(settings(), "duty.steps.2.times", 4.0).duty.steps[2].times == 4
    with pytest.raises(QuantityError, match="whole number"):
        with_number(settings(), "duty.steps.2.times", 2.5)


def typed_duty() -> DriveSettings:
    return with_number(settings(), "duty.steps.1.time", 0.25, "1/4 s")


def test_what_was_typed_goes_with_its_number_when_the_list_around_it_changes():
    longer = with_item(typed_duty(), "duty.steps", Rest(1.0), 0)
    assert typed_at(longer, "duty.steps.2.time") == "1/4 s"
    assert number_at(longer, "duty.steps.2.time") == 0.25
    moved = with_item_moved(longer, "duty.steps", 2, 0)
    assert typed_at(moved, "duty.steps.0.time") == "1/4 s"
    assert number_at(moved, "duty.steps.0.time") == 0.25
    assert without_item(moved, "duty.steps", 0).typed == ()


@given(st.data())
def test_texts_follow_their_numbers_through_any_edits_of_a_list(data):
    now = settings()
    for at in range(4):
        now = with_number(now, f"train.stages.{at}.inertia", at + 1.0, f"{at + 1} kg*m^2") if at < 3 else now
    for _ in range(data.draw(st.integers(1, 6))):
        count = len(items_at(now, "train.stages"))
        what = data.draw(st.sampled_from(["add", "take", "move"]))
        if what == "add":
            place = data.draw(st.integers(0, count))
            name = f"new {data.draw(st.integers(0, 10**9))}"
            if all(one.name != name for one in now.train.stages):
                now = with_item(now, "train.stages", Gear(name, 2.0), place)
        elif count:
            place = data.draw(st.integers(0, count - 1))
            to = data.draw(st.integers(0, count - 1))
            now = without_item(now, "train.stages", place) if what == "take" else with_item_moved(now, "train.stages", place, to)
        for path, text in now.typed:
            assert f"{number_at(now, path):g} kg*m^2" == text


def test_a_stage_named_anew_keeps_what_hangs_on_its_shaft():
    stages = items_at(settings(), "train.stages")
    after = with_item_at(settings(), "train.stages", 2, replace(stages[2], name="reducer"))
    assert after.train.inertias[0].shaft == "reducer"
    assert after.train.linear[1].shaft == "reducer"


def test_what_hung_on_a_stage_that_is_gone_hangs_on_the_load():
    after = without_item(settings(), "train.stages", 2)
    assert after.train.inertias[0].shaft == "load"


def test_an_entry_that_is_not_there_is_refused():
    with pytest.raises(EditRefused, match=r"no such entry.*5 of 1"):
        without_item(settings(), "stops", 4)
    with pytest.raises(EditRefused, match="no such list"):
        items_at(settings(), "train.motor")


def named() -> object:
    machine = flap_machine()
    machine = machine.with_assembly(with_entry(machine.assembly, NameEntry("arm", "500 mm")))
    drive = with_number(machine.drive, "forces.0.point.0", 0.25, "arm/2")
    return machine.with_drive(with_number(drive, "train.linear.0.radius", 0.05, "arm/10"))


def test_a_number_typed_with_a_named_dimension_follows_it():
    machine = named()
    after = machine.with_assembly(with_entry(machine.assembly, NameEntry("arm", "600 mm")))
    assert after.drive.forces[0].point[0] == pytest.approx(0.3, rel=1e-15)
    assert after.drive.train.linear[0].radius == pytest.approx(0.06, rel=1e-15)
    assert typed_at(after.drive, "forces.0.point.0") == "arm/2"
    assert [use.where for use in machine.drive_uses_of("arm")] == ["wind, point x", "cable, radius"]


def test_renaming_a_named_dimension_follows_through_into_the_drive():
    machine = named()
    after = machine.with_assembly(with_name_changed(machine.assembly, "arm", "lever"))
    assert typed_at(after.drive, "forces.0.point.0") == "lever/2"
    longer = after.with_assembly(with_entry(after.assembly, NameEntry("lever", "1 m")))
    assert longer.drive.forces[0].point[0] == 0.5


def test_a_named_dimension_that_the_drive_uses_cannot_be_taken_away():
    machine = named()
    with pytest.raises(EditRefused, match=r'wind, point x ."arm/2".: the named dimension "arm" is used'):
        machine.with_assembly(without_name(machine.assembly, "arm"))


def test_a_value_that_the_drive_cannot_take_is_refused_with_the_name_that_leads_there():
    machine = named()
    with pytest.raises(EditRefused, match=r"cable → arm: the radius has to be more than 0"):
        machine.with_assembly(with_entry(machine.assembly, NameEntry("arm", "-1 m")))
    with pytest.raises(QuantityError, match=r"wind, point x → arm"):
        machine.with_assembly(with_entry(machine.assembly, NameEntry("arm", "3 kg")))


def test_a_number_changed_in_another_way_has_let_go_of_its_name():
    machine = named()
    dragged = machine.with_drive(with_number(machine.drive, "forces.0.point.0", 0.4))
    after = dragged.with_assembly(with_entries(dragged.assembly, (NameEntry("arm", "600 mm"),)))
    assert after.drive.forces[0].point[0] == 0.4
    assert math.isclose(after.drive.train.linear[0].radius, 0.06, rel_tol=1e-15)


def test_a_number_that_an_entry_of_another_kind_has_is_refused():
    with pytest.raises(EditRefused, match="no such entry"):
        with_number(settings(), "duty.steps.1.angle", 1.0)
    with pytest.raises(EditRefused, match="no such entry"):
        with_number(settings(), "train.stages.0.lead", None)
