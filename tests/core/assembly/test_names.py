"""Named dimensions: evaluated in order, followed by every number typed with one, refused with the chain shown."""

from __future__ import annotations

from dataclasses import replace

import pytest
from documents import packed, unpacked
from hypothesis import given
from hypothesis import strategies as st

from core.assembly import Assembly, Cut, Group, Part, ShapeBody, ledger_of
from core.assembly.fields import kind_of, value_of, with_typed, with_value
from core.assembly.names import NameEntry, evaluated, values_of
from core.assembly.naming import entries_of, uses_of, with_entries, with_entry, with_name_changed, without_name
from core.document import read_document_bytes, save_document
from core.errors import DocumentError, EditRefused, MasswrightError, QuantityError
from core.history import History
from core.machine import Machine
from core.material import ByDensity
from core.placement import Pose, Ring
from core.quantity import Kind, parse
from core.shapes import Cylinder, Tube

ENTRIES = (NameEntry("plate_d", "400 mm"), NameEntry("rim_d", "plate_d - 2*wall"), NameEntry("wall", "10 mm", "as cast"),
           NameEntry("holes", "6"), NameEntry("steel", "7850 kg/m^3"))


def typed(line, assembly: Assembly, **texts: str):
    """Return a line with numbers as a person types them; "__" in a key stands for "."."""
    for key, text in texts.items():
        path = key.replace("__", ".").replace("_of_", " ")
        value = parse(text, kind_of(line, path), names=values_of(assembly.names)).value
        line = with_typed(with_value(line, path, value), path, text)
    return line


def dial() -> Assembly:
    named = with_entries(Assembly("dial"), ENTRIES)
    bore = typed(Cut("c", "bore", Cylinder(0.01, 0.02)), named, dimension__diameter="plate_d/20", position__0="wall")
    rim = typed(
        Part("b", "rim", ShapeBody(Tube(0.4, 0.38, 0.02)), ByDensity(7850.0), copies=Ring(6)), named,
        dimension__outer_diameter="plate_d", dimension__bore="rim_d", copies__count="holes", density="steel",
    )
    plate = typed(
        Part("a", "plate", ShapeBody(Cylinder(0.4, 0.02)), ByDensity(7850.0), cuts=(bore,)), named,
        dimension__diameter="plate_d", position__2="sqrt(wall*wall) + 1 mm",
    )
    loose = typed(Part("p", "pin", ShapeBody(Cylinder(0.01, 0.02)), ByDensity(1000.0)), named, dimension__diameter="1/2 in")
    return replace(named, members=(plate, Group("g", "turning", (rim, loose))))


def test_names_are_evaluated_whatever_their_order_in_the_table():
    names = evaluated(ENTRIES)
    assert [(one.name, one.kind) for one in names] == [
        ("plate_d", Kind.LENGTH), ("rim_d", Kind.LENGTH), ("wall", Kind.LENGTH), ("holes", Kind.NUMBER), ("steel", Kind.DENSITY)
    ]
    assert [one.value for one in names] == pytest.approx([0.4, 0.38, 0.01, 6, 7850], rel=1e-15)
    assert names[2].note == "as cast"


@given(st.permutations(range(12)), st.integers(1, 99))
def test_a_chain_of_names_gives_the_same_in_any_order(order, start):
    texts = {0: f"{start} mm"} | {at: f"n{at - 1}_x + {at} mm" for at in range(1, 12)}
    names = evaluated(NameEntry(f"n{at}_x", texts[at]) for at in order)
    found = {one.name: one.value for one in names}
    assert found["n11_x"] == pytest.approx((start + 66) / 1000, rel=1e-14)


def test_a_chain_of_a_thousand_names_is_no_deeper_than_one():
    entries = [NameEntry("n0_", "1 mm"), *[NameEntry(f"n{at}_", f"n{at - 1}_ + 1 mm") for at in range(1, 1000)]]
    assert evaluated(reversed(entries))[0].value == pytest.approx(1.0, rel=1e-12)


@pytest.mark.parametrize(
    ("texts", "sentence"),
    [
        ({"a": "b", "b": "a"}, "a: a named dimension depends on itself; read a → b → a."),
        ({"a": "a + 1 mm"}, "a: a named dimension depends on itself; read a → a."),
        ({"x": "a", "a": "b/2", "b": "2*c_", "c_": "a"}, "a: a named dimension depends on itself; read a → b → c_ → a."),
        ({"a": "b/2", "b": "missing + 1 mm"}, 'a → b: there is no named dimension "missing"; read "missing + 1 mm".'),
        ({"a": "b + 1 mm", "b": "c_", "c_": "2 kg"}, 'a: different kinds of quantity are added; read "b + 1 mm".'),
        ({"a": "(1 mm)*(1 m^3)"}, 'a: this is no kind of quantity that is used here; read "(1 mm)*(1 m^3)".'),
        ({"a": ""}, "a: nothing was typed"),
        ({"mm": "1 m"}, "named dimension: mm is a unit."),
    ],
)
def test_a_cycle_a_missing_name_or_a_wrong_kind_is_refused_with_the_chain(texts, sentence):
    with pytest.raises(MasswrightError) as refused:
        evaluated(NameEntry(name, text) for name, text in texts.items())
    assert str(refused.value).startswith(sentence)


def test_two_of_one_name_are_refused():
    with pytest.raises(EditRefused, match="two named dimensions have the same name; read a"):
        evaluated((NameEntry("a", "1"), NameEntry("a", "2")))


def test_changing_a_name_updates_every_number_typed_with_it():
    after = with_entry(dial(), NameEntry("plate_d", "600 mm"))
    plate, rim = after.node("a"), after.node("b")
    assert value_of(plate, "dimension.diameter") == 0.6
    assert value_of(rim, "dimension.outer_diameter") == 0.6
    assert value_of(rim, "dimension.bore") == pytest.approx(0.58, rel=1e-15)
    assert value_of(after.cut("c"), "dimension.diameter") == pytest.approx(0.03, rel=1e-15)
    assert value_of(after.node("p"), "dimension.diameter") == value_of(dial().node("p"), "dimension.diameter")
    assert after.node("p") is not None
    more = with_entries(after, [replace(one, text={"holes": "8", "steel": "2700 kg/m^3"}.get(one.name, one.text)) for one in entries_of(after)])
    assert more.node("b").copies == Ring(8)
    assert more.node("b").driver == ByDensity(2700.0)


@given(st.floats(0.1, 5.0))
def test_the_totals_scale_with_the_fifth_power_of_the_one_length_that_all_are_typed_with(scale):
    named = with_entry(Assembly("one"), NameEntry("size", "100 mm"))
    part = typed(
        Part("a", "disc", ShapeBody(Cylinder(0.1, 0.2)), ByDensity(2700.0)), named, dimension__diameter="size",
        dimension__length="2*size", position__0="3*size",
    )
    before = replace(named, members=(part,))
    after = with_entry(before, NameEntry("size", f"{scale!r} * 100 mm"))
    assert ledger_of(after).total.inertia == pytest.approx(ledger_of(before).total.inertia * scale**5, rel=1e-12)


def test_what_no_name_touches_is_the_same_object_afterwards():
    before = dial()
    after = with_entry(before, NameEntry("wall", "12 mm"))
    assert after.node("p") is before.node("p")
    assert with_entry(before, NameEntry("plate_d", "400 mm", "a note")).members is before.members


def test_a_number_changed_in_another_way_has_let_go_of_its_text():
    before = dial()
    dragged = before.replaced(replace(before.node("a"), pose=Pose((0.0, 0.0, 0.5))))
    assert with_entry(dragged, NameEntry("wall", "12 mm")).node("a").pose.position == (0.0, 0.0, 0.5)


def test_a_change_is_one_step_of_the_history_and_undone_in_one():
    before = Machine(dial())
    after = before.with_assembly(with_entry(before.assembly, NameEntry("plate_d", "600 mm")))
    history = History(before).edited("plate_d", after)
    assert history.undone().present is before
    assert value_of(history.undone().redone().present.assembly.node("b"), "dimension.outer_diameter") == 0.6


@pytest.mark.parametrize(
    ("entry", "sentence"),
    [
        (NameEntry("wall", "3 kg"), 'rim_d: different kinds of quantity are added; read "plate_d - 2*wall"'),
        (NameEntry("steel", "3 mm"), 'rim, density → steel: "steel" measures a length, but a density is wanted; read "steel"'),
        (NameEntry("holes", "2.5"), "rim → holes: a quantity is a whole number; read 2.5"),
        (NameEntry("wall", "0 mm"), "rim → rim_d → wall: "),
        (NameEntry("wall", "300 mm"), "rim → rim_d → wall: "),
        (NameEntry("plate_d", "rim_d"), "plate_d: a named dimension depends on itself; read plate_d → rim_d → plate_d"),
    ],
)
def test_a_value_that_a_line_cannot_take_is_refused_with_the_line_and_the_chain(entry, sentence):
    with pytest.raises(MasswrightError) as refused:
        with_entry(dial(), entry)
    assert str(refused.value).startswith(sentence)


def test_a_used_name_is_not_deleted_and_the_lines_that_use_it_are_named():
    with pytest.raises(EditRefused) as refused:
        without_name(dial(), "plate_d")
    assert str(refused.value) == (
        'rim_d ("plate_d - 2*wall"); plate, diameter ("plate_d"); bore, diameter ("plate_d/20"); '
        'rim, outer diameter ("plate_d"): the named dimension "plate_d" is used. Change those first.'
    )
    with pytest.raises(EditRefused, match=r'rim, density \("steel"\): the named dimension "steel" is used'):
        with_entries(dial(), [entry for entry in ENTRIES if entry.name != "steel"])


def test_a_name_that_nothing_uses_is_deleted():
    free = with_entry(dial(), NameEntry("spare", "1 mm"))
    assert without_name(free, "spare") == dial()


def test_renaming_changes_every_text_and_no_number():
    before = dial()
    after = with_name_changed(before, "plate_d", "dial_diameter")
    assert dict(after.node("a").typed)["dimension.diameter"] == "dial_diameter"
    assert dict(after.cut("c").typed)["dimension.diameter"] == "dial_diameter/20"
    assert [(one.name, one.text) for one in after.names][:2] == [("dial_diameter", "400 mm"), ("rim_d", "dial_diameter - 2*wall")]
    assert after.node("a").body == before.node("a").body
    assert with_name_changed(after, "dial_diameter", "plate_d") == before
    assert len(uses_of(after, "dial_diameter")) == len(uses_of(before, "plate_d")) == 4


@pytest.mark.parametrize(
    ("old", "new", "sentence"),
    [("plate_d", "wall", "another named dimension has this name; read wall"), ("plate_d", "mm", "mm is a unit"),
     ("nothing", "x", "there is no named dimension of this name; read nothing")],
)
def test_a_name_that_cannot_be_is_no_new_name(old, new, sentence):
    with pytest.raises((EditRefused, QuantityError), match=sentence):
        with_name_changed(dial(), old, new)


def test_a_document_keeps_its_names_and_reads_their_values_from_their_texts(tmp_path):
    save_document(Machine(dial()), tmp_path / "dial.masswright")
    read = read_document_bytes((tmp_path / "dial.masswright").read_bytes()).assembly
    assert read == dial()
    assert with_entry(read, NameEntry("plate_d", "500 mm")) == with_entry(dial(), NameEntry("plate_d", "500 mm"))


def test_a_document_with_names_that_depend_on_themselves_is_refused(tmp_path):
    save_document(Machine(dial()), tmp_path / "dial.masswright")
    entries = unpacked((tmp_path / "dial.masswright").read_bytes())
    entries["assembly.json"] = entries["assembly.json"].replace(b'"text": "400 mm"', b'"text": "rim_d"')
    with pytest.raises(DocumentError, match="plate_d → rim_d → plate_d"):
        read_document_bytes(packed(entries))
