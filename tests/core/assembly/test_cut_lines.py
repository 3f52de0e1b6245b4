"""Cuts in the ledger, in the edits of the assembly, and in the file."""

from __future__ import annotations

import io
import json
import zipfile
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, given, settings
from strategies import assemblies, cuts

from core.assembly import Assembly, Cut, DriveAxis, Group, Part, ShapeBody, findings_of, ledger_of
from core.document import read_document, read_document_bytes, save_document
from core.errors import DocumentError, EditRefused
from core.handover.answer import answer_of_machine
from core.machine import Machine
from core.material import ByDensity, NotSet, Weighed
from core.placement import Pose, Ring, Several
from core.shapes import Box, Cylinder, Extruded

PROPERTY = settings(deadline=None, max_examples=40)


def plate(key="plate", **changes):
    """Return a round plate 400 × 20 mm with a bore of 60 mm and six holes of 10 mm at a radius of 150 mm."""
    bore = Cut(f"{key}.bore", "bore ⌀60", Cylinder(0.06, 0.02))
    holes = Cut(f"{key}.holes", "holes", Cylinder(0.01, 0.04), Pose((0.15, 0.0, -0.01)), Ring(6))
    part = Part(key, key, ShapeBody(Cylinder(0.4, 0.02)), ByDensity(2700.0), cuts=(bore, holes))
    return replace(part, **changes)


def lines_by_key(assembly):
    return {line.key: line for line in ledger_of(assembly).lines}


# --- the ledger -------------------------------------------------------------------------------------------------


def test_the_lines_of_cuts_stand_below_their_part_in_their_order():
    group = Group("g", "group", (plate(), replace(plate("other"), cuts=())))
    lines = ledger_of(Assembly("dial", (group, plate("last")))).lines
    assert [(line.key, line.kind, line.depth) for line in lines] == [
        ("g", "group", 0), ("plate", "part", 1), ("plate.bore", "cut", 2), ("plate.holes", "cut", 2),
        ("other", "part", 1), ("last", "part", 0), ("last.bore", "cut", 1), ("last.holes", "cut", 1),
    ]
    assert {line.material for line in lines if line.kind == "cut"} == {"cut"}


def test_a_cut_says_what_it_takes_away_about_the_drive_axis():
    lines = lines_by_key(Assembly("dial", (plate(),)))
    hole = 2700 * np.pi * 0.005**2 * 0.02
    holes = lines["plate.holes"]
    assert (holes.count, holes.times) == (6, 6)
    assert holes.mass == pytest.approx(-6 * hole, rel=1e-13)
    assert holes.own_inertia == pytest.approx(-6 * hole * 0.005**2 / 2, rel=1e-13)
    assert holes.transfer == pytest.approx(-6 * hole * 0.15**2, rel=1e-13)
    assert holes.inertia == pytest.approx(holes.own_inertia + holes.transfer, rel=1e-15)
    np.testing.assert_allclose(holes.centre, [0.0, 0.0, 0.01], atol=1e-15)
    bore = lines["plate.bore"]
    assert bore.mass == pytest.approx(-2700 * np.pi * 0.03**2 * 0.02, rel=1e-13)
    assert bore.transfer == 0.0


def test_a_parts_line_holds_what_is_left_and_groups_add_up_parts_alone():
    assembly = Assembly("dial", (Group("g", "group", (plate(), plate("second", pose=Pose((0.3, 0, 0)))), copies=Several(2)),))
    ledger = ledger_of(assembly)
    lines = {line.key: line for line in ledger.lines}
    left = 2700 * np.pi * (0.2**2 - 0.03**2 - 6 * 0.005**2) * 0.02
    assert lines["plate"].mass == pytest.approx(2 * left, rel=1e-13)
    for name in ("mass", "own_inertia", "transfer", "inertia"):
        parts = sum(getattr(line, name) for line in ledger.lines if line.kind == "part")
        assert getattr(lines["g"], name) == pytest.approx(parts, rel=1e-14)
        assert getattr(ledger.total, name) == pytest.approx(parts, rel=1e-14)
    assert lines["second.holes"].times == 12


def test_what_cuts_take_away_is_what_the_uncut_part_has_more():
    axis = DriveAxis("A", (0.1, -0.2, 0.3), (1.0, 2.0, -0.5))
    group = Group("g", "g", (plate(pose=Pose((0.3, 0.1, 0.0), (0.3, 0.2, 0.1))),), Pose((0, 0, 0.1), (0.5, 0, 0)), Ring(3))
    cut = ledger_of(Assembly("a", (group,), (axis,), "A"))
    whole = ledger_of(Assembly("a", (replace(group, members=(replace(group.members[0], cuts=()),)),), (axis,), "A"))
    taken = [line for line in cut.lines if line.kind == "cut"]
    for name in ("mass", "inertia"):
        expected = getattr(whole.total, name) - getattr(cut.total, name)
        assert -sum(getattr(line, name) for line in taken) == pytest.approx(expected, rel=1e-12)
    assert sum(line.share for line in taken) == pytest.approx(1 - whole.total.inertia / cut.total.inertia, rel=1e-12)


def test_the_cuts_of_a_weighed_part_take_away_at_the_density_of_what_is_left():
    lines = lines_by_key(Assembly("dial", (plate(driver=Weighed(5.0)),)))
    left = 0.2**2 - 0.03**2 - 6 * 0.005**2
    assert lines["plate"].mass == pytest.approx(5.0, rel=1e-15)
    assert lines["plate.bore"].mass == pytest.approx(-5.0 * 0.03**2 / left, rel=1e-13)


def test_without_a_mass_the_cuts_have_none_either():
    lines = lines_by_key(Assembly("dial", (plate(driver=NotSet()), plate("known"))))
    assert lines["plate.bore"].mass is None
    assert lines["plate.bore"].centre is None
    assert lines["plate.bore"].basis == "not set"
    assert lines["known.bore"].mass < 0


def test_the_answer_in_json_names_cuts_as_such():
    answer = answer_of_machine(Machine(Assembly("dial", (plate(),))), "dial.masswright")
    kinds = [(line["name"], line["kind"]) for line in answer["ledger"]]
    assert kinds == [("plate", "part"), ("bore ⌀60", "cut"), ("holes", "cut"), ("dial", "total")]
    assert answer["ledger"][1]["mass_kg"] < 0
    assert answer["volume_m3"] == pytest.approx(np.pi * (0.2**2 - 0.03**2 - 6 * 0.005**2) * 0.02, rel=1e-13)


def test_a_cut_that_sticks_out_is_a_finding_beside_its_part():
    found = [each for each in findings_of(Assembly("dial", (plate(),))) if each.check.name == "cut"]
    assert [(each.key, each.check.ok) for each in found] == [("plate", True)]
    assert found[0].check.text == "plate, holes: 50 % of it is outside the body; only what is inside is counted"


# --- edits ------------------------------------------------------------------------------------------------------


def two():
    return Assembly("two", (Group("g", "group", (plate(),)), plate("b")))


def test_a_cut_is_found_by_its_key_with_the_part_it_is_taken_out_of():
    assembly = two()
    assert "plate.bore" in assembly
    assert assembly.is_cut("plate.bore")
    assert not assembly.is_cut("plate")
    assert assembly.cut("b.holes").copies == Ring(6)
    assert assembly.part_of_cut("plate.holes").key == "plate"
    assert assembly.node_of_line("plate.holes").key == "plate"
    assert assembly.node_of_line("g").key == "g"
    assert assembly.name_of_line("plate.bore") == "bore ⌀60"
    assert assembly.name_of_line("g") == "group"


def test_cuts_are_put_in_changed_moved_and_taken_out():
    assembly = two()
    slot = Cut("slot", "slot", Box(0.02, 0.05, 0.02), Pose((0.0, 0.1, 0.0)))
    added = assembly.inserted_cut(slot, "plate", 1)
    assert [cut.key for cut in added.node("plate").cuts] == ["plate.bore", "slot", "plate.holes"]
    assert [cut.key for cut in assembly.inserted_cut(slot, "b").node("b").cuts] == ["b.bore", "b.holes", "slot"]
    longer = replace(slot, shape=Box(0.02, 0.06, 0.02))
    assert added.replaced_cut(longer).cut("slot") == longer
    assert [cut.key for cut in added.moved_cut("slot", 2).node("plate").cuts] == ["plate.bore", "plate.holes", "slot"]
    assert [cut.key for cut in added.removed(("slot", "plate.bore")).node("plate").cuts] == ["plate.holes"]
    assert added.removed(("plate.bore", "slot", "g")).removed(("b",)).members == ()
    assert added.removed(("g", "plate.bore", "slot")) == assembly.removed(("g",))
    assert assembly.node("plate").cuts == plate().cuts


def test_new_keys_and_names_avoid_those_of_cuts():
    assembly = Assembly("a", (plate(cuts=(Cut("p3", "bore", Cylinder(0.06, 0.02)),)),))
    assert assembly.fresh_key() not in assembly
    assert assembly.fresh_name("bore") == "bore 2"


@pytest.mark.parametrize(
    ("edit", "words"),
    [
        (lambda a: a.node("plate.bore"), "bore ⌀60: a cut stays with the part that it is taken out of"),
        (lambda a: a.moved("plate.bore", "g"), "a cut stays with the part"),
        (lambda a: a.cut("plate"), "the assembly has no such cut; read plate"),
        (lambda a: a.replaced_cut(Cut("x", "x", Cylinder(0.01, 0.01))), "the assembly has no such cut; read x"),
        (lambda a: a.inserted_cut(Cut("x", "x", Cylinder(0.01, 0.01)), "g"), "a cut is taken out of a part, not of a group"),
        (lambda a: a.inserted_cut(Cut("g", "x", Cylinder(0.01, 0.01)), "b"), "b, x: two lines have the same key; read g"),
        (lambda a: a.inserted_cut(Cut("plate.bore", "x", Cylinder(0.01, 0.01)), "b"), "two lines have the same key"),
        (lambda a: a.removed(("nothing",)), "the assembly has no such line"),
    ],
)
def test_what_cannot_be_done_with_a_cut_is_refused(edit, words):
    with pytest.raises(EditRefused) as refusal:
        edit(two())
    assert words in str(refusal.value)


# --- the file ---------------------------------------------------------------------------------------------------


def changed(path, change):
    """Return a document's bytes with its JSON changed."""
    with zipfile.ZipFile(path) as archive:
        data = json.loads(archive.read("assembly.json"))
    change(data)
    file = io.BytesIO()
    with zipfile.ZipFile(file, "w") as archive:
        archive.writestr("assembly.json", json.dumps(data))
    return file.getvalue()


@PROPERTY
@given(assemblies(), cuts)
def test_cuts_of_any_kind_are_read_back_as_they_were_saved(tmp_path_factory, assembly, cut):
    path = tmp_path_factory.mktemp("cuts") / "a.masswright"
    box = Part("with cut", "box", ShapeBody(Box(5, 5, 2)), NotSet(), cuts=(replace(cut, key="cut"),))
    try:
        _ = box.cutting
    except EditRefused:
        assume(False)
    before = replace(assembly, members=(*assembly.members, box))
    save_document(Machine(before), path)
    assert read_document(path).assembly == before


def test_an_outline_that_is_cut_out_is_read_back(tmp_path):
    before = Assembly("a", (plate(cuts=(Cut("s", "slot", Extruded.of({}), Pose((0.05, 0, 0))),)),))
    save_document(Machine(before), tmp_path / "a.masswright")
    assert read_document(tmp_path / "a.masswright").assembly == before


def test_a_document_from_before_cuts_is_read_and_one_without_them_says_nothing_of_them(tmp_path):
    path = tmp_path / "a.masswright"
    before = Assembly("a", (plate(cuts=()),))
    save_document(Machine(before), path)
    with zipfile.ZipFile(path) as archive:
        assert b"cuts" not in archive.read("assembly.json")
    assert read_document(path).assembly == before


@pytest.mark.parametrize(
    ("change", "words"),
    [
        (lambda cut: cut.pop("shape"), "members[0].cuts[1].shape (holes): this entry is missing"),
        (lambda cut: cut["copies"].update(count=0), "members[0].cuts[1] (holes): a quantity lies between 1 and"),
        (lambda cut: cut["shape"]["dimensions"].update(diameter=-1.0), "the diameter has to be more than 0"),
        (lambda cut: cut["shape"].update(shape="thin disc", dimensions={"diameter": 0.1, "bore": 0.0}),
         "members[0].cuts[1] (holes), holes: only a solid can be taken out of a part"),
        (lambda cut: cut.update(key="plate"), "two lines have the same key"),
        (lambda cut: cut.update(colour="red"), "members[0].cuts[1].colour (holes): this version knows no such entry"),
    ],
)
def test_a_damaged_cut_is_refused_with_its_place(tmp_path, change, words):
    path = tmp_path / "a.masswright"
    save_document(Machine(Assembly("a", (plate(),))), path)
    data = changed(path, lambda data: change(data["members"][0]["cuts"][1]))
    with pytest.raises(DocumentError) as refusal:
        read_document_bytes(data, "a.masswright")
    assert words in str(refusal.value)


def test_a_cut_that_misses_its_part_is_refused_while_reading(tmp_path):
    path = tmp_path / "a.masswright"
    save_document(Machine(Assembly("a", (plate(),))), path)
    data = changed(path, lambda data: data["members"][0]["cuts"][0]["pose"].update(position=[3.0, 0.0, 0.0]))
    with pytest.raises(DocumentError) as refusal:
        read_document_bytes(data, "a.masswright")
    assert str(refusal.value) == (
        "a.masswright, members[0].cuts, plate, bore ⌀60: this cut takes nothing out: it lies outside the body; "
        "read a cut of 60 × 60 × 20 mm. Move it into the body, or leave it out."
    )


def test_more_cuts_than_are_taken_are_refused_while_reading(tmp_path):
    path = tmp_path / "a.masswright"
    save_document(Machine(Assembly("a", (plate(),))), path)

    def multiply(data):
        one = data["members"][0]["cuts"][0]
        data["members"][0]["cuts"] = [{**one, "key": f"c{i}"} for i in range(2001)]

    with pytest.raises(DocumentError, match="this holds more than 2000 values"):
        read_document_bytes(changed(path, multiply), "a.masswright")
