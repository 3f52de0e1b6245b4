"""The user's own list as files: what is written is read, nothing is replaced, what is damaged is told and left alone."""

from __future__ import annotations

import os
import tomllib
from dataclasses import replace
from typing import TYPE_CHECKING

import pytest
from hypothesis import given
from hypothesis import strategies as st
from strategies import TEXTS, known_axials, known_tensors

from core.assembly import Assembly, KnownAxial, KnownTensor, Part, ShapeBody
from core.assembly.linked_groups import with_linked_group
from core.document import read_document, read_linked, save_document
from core.document.own_list import (
    KNOWN_PARTS,
    OWN_MATERIALS,
    Imported,
    OwnPart,
    group_files,
    read_list,
    with_entries_exported,
    with_entries_imported,
    with_entry_kept,
    with_group_exported,
    with_group_imported,
    with_group_kept,
    without_entry,
    without_group,
)
from core.document.own_list.text import entries_of, text_of, with_appended, without
from core.errors import EditRefused, FileRefused, MasswrightError
from core.machine import Machine
from core.material import MATERIALS, ByDensity, ByMaterial, Material, material, plain_name
from core.shapes import Box

if TYPE_CHECKING:
    from pathlib import Path

MELT = Material("melt A", 7790.0, 7780.0, 7800.0, "mill certificate 12", "own list", ("A-melt",))
FOAM = Material("rigid foam", 80.0, 80.0, 80.0, "", "own list")
ROTOR = OwnPart("6-pole rotor", KnownAxial(1.9, (0.0, 0.0, 0.05), 0.0021, 0.08, "data sheet 17, page 3, 2026-03-02"))
PUMP = OwnPart("pump", KnownTensor(4.0, (0.0, 0.01, 0.0), (0.02, 0.03, 0.04, 0.001, 0.0, -0.002), "origin", "sheet"))
BY_HAND = """\
# weighed at the saw
[[material]]
name = "cast A"
density = "7.15 g/cm^3"   # dense
source = "our own weighing"

# bought in spring
[[material]]
name = "cast B"
density = "0.26 lb/in^3"
low = "7100 kg/m³"
high = "7300 kg/m³"
also = ["B-cast"]
"""


def refusal_of(kind, text: str) -> str:
    with pytest.raises(FileRefused) as refusal:
        entries_of(kind, text)
    return str(refusal.value)


# --- the text --------------------------------------------------------------------------------------------------------


# What is typed as a name: signs that can be seen, blanks between them.
SIGNS = st.text(st.characters(exclude_categories=["C", "Z"]), min_size=1, max_size=8)
NAMES = st.lists(SIGNS, min_size=1, max_size=3).map(" ".join)
MATERIAL_NAMES = NAMES.map(lambda name: f"m{name}")
densities = st.floats(20.0, 2.3e4)
materials = st.builds(
    lambda name, values, source, also: Material(name, sorted(values)[1], min(values), max(values), source, "own list", tuple(also)),
    MATERIAL_NAMES, st.tuples(densities, densities, densities), TEXTS, st.lists(TEXTS, max_size=3),
)
own_parts = st.builds(OwnPart, NAMES, st.one_of(known_tensors(), known_axials()))


def differing(entries):
    return st.lists(entries, max_size=4, unique_by=lambda entry: plain_name(entry.name)).map(tuple)


@given(differing(materials))
def test_any_materials_come_back_from_their_text_to_the_last_bit(entries):
    text = with_appended(OWN_MATERIALS, "", entries)
    assert entries_of(OWN_MATERIALS, text) == entries


@given(differing(own_parts))
def test_any_known_parts_come_back_from_their_text_to_the_last_bit(entries):
    text = with_appended(KNOWN_PARTS, "", entries)
    assert entries_of(KNOWN_PARTS, text) == entries


@given(differing(materials).filter(bool), st.data())
def test_what_is_taken_out_leaves_the_others(entries, data):
    gone = data.draw(st.sampled_from(entries))
    text = without(OWN_MATERIALS, with_appended(OWN_MATERIALS, "", entries), gone.name)
    assert entries_of(OWN_MATERIALS, text) == tuple(entry for entry in entries if entry != gone)


@given(st.text(max_size=200))
def test_any_text_is_read_or_refused_in_one_sentence(text):
    try:
        entries_of(OWN_MATERIALS, text)
    except MasswrightError as error:
        assert "\n" not in str(error)  # noqa: PT017  # reading may also succeed


def test_the_text_can_be_read_by_a_person_and_by_any_reader_of_toml():
    assert text_of(OWN_MATERIALS, MELT) == (
        '[[material]]\nname = "melt A"\ndensity = "7790.0 kg/m³"\nlow = "7780.0 kg/m³"\nhigh = "7800.0 kg/m³"\n'
        'source = "mill certificate 12"\nalso = ["A-melt"]\n'
    )
    table = tomllib.loads(text_of(KNOWN_PARTS, PUMP))["known_part"][0]
    assert table["tensor"] == ["0.02 kg·m²", "0.03 kg·m²", "0.04 kg·m²", "0.001 kg·m²", "0.0 kg·m²", "-0.002 kg·m²"]


def test_a_text_written_by_hand_has_units_of_its_own_and_notes():
    first, second = entries_of(OWN_MATERIALS, BY_HAND)
    assert (first.name, first.density, first.low, first.high) == ("cast A", 7150.0, 7150.0, 7150.0)
    # 0.26 lb/in³ with 0.45359237 kg and 0.0254 m by definition.
    assert second.density == pytest.approx(0.26 * 0.45359237 / 0.0254**3, rel=1e-15)
    assert second.also == ("B-cast",)


def test_page_and_date_may_stand_by_themselves():
    text = text_of(KNOWN_PARTS, replace(ROTOR, body=replace(ROTOR.body, source="sheet 17"))) + 'page = "p. 3"\ndate = "2026"\n'
    assert entries_of(KNOWN_PARTS, text)[0].body.source == "sheet 17, p. 3, 2026"


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("[[material]", "the text cannot be read; read "),
        ("x = 1", 'this is no list of materials; read "x". Mend it in a text editor, or put it aside.'),
        ("[material]\nname = 'a'", "each material has to stand under [[material]]."),
        ("material = 3", "each material has to stand under [[material]]."),
        ('[[material]]\ndensity = "1 kg/l"', "material number 1, name: a value is missing."),
        ('[[material]]\nname = "a"\ndensity = 7850', 'material "a", density: this has to be a text of at most 200 signs'),
        ('[[material]]\nname = "a"\ndensity = "7850"', 'material "a", density: a unit is missing'),
        ('[[material]]\nname = "a"\ndensity = "7850 kg"', 'material "a", density: '),
        ('[[material]]\nname = "a"\ndensity = "7850 g/m³"', 'material "a", density: a density lies between'),
        ('[[material]]\nname = "a"\ndensity = "1e999 kg/m³"', 'material "a", density: '),
        ('[[material]]\nname = "a"\ndensity = "__import__(\'os\')"', 'material "a", density: '),
        ('[[material]]\nname = "a"\ndensity = "8 kg/l"\nlow = "9 kg/l"', 'material "a", a: the density lies between low and high'),
        ('[[material]]\nname = "7075"\ndensity = "8 kg/l"', 'material "7075", name: the name of a material begins with a letter'),
        ('[[material]]\nname = "a\\nb"\ndensity = "8 kg/l"', "a name is one line of text"),
        ('[[material]]\nname = "a"\ndensity = "8 kg/l"\ncolour = "red"', 'this version knows no such value; read "colour"'),
        ('[[material]]\nname = "a"\ndensity = "8 kg/l"\n[[material]]\nname = "A"\ndensity = "7 kg/l"', "two entries have the same name"),
        ("a = " + "[" * 100_000, "the values nest deeper than in any list"),
        ("a = " + "9" * 10_000, "the text cannot be read"),
    ],
)
def test_a_text_that_cannot_be_a_list_is_refused_in_one_sentence(text, sentence):
    said = refusal_of(OWN_MATERIALS, text)
    assert sentence in said
    assert "\n" not in said


@pytest.mark.parametrize(
    ("old", "new", "sentence"),
    [
        ('mass = "1.9 kg"', 'mass = "1.9 m"', 'known part "6-pole rotor", mass: '),
        ('mass = "1.9 kg"\n', "", "mass: a value is missing"),
        ('"0.0 m", "0.0 m", ', '"0.0 m", ', "centre: this has to be a list of 3 texts"),
        ("inertia_about_axis = ", 'about = "centre"\ntensor = ', "tensor: this has to be a list of at most 6 texts"),
        ('inertia_about_axis = "0.0021 kg·m²"\n', "", "either a tensor or an inertia about its axis"),
    ],
)
def test_a_known_part_that_cannot_be_is_refused_and_named(old, new, sentence):
    text = text_of(KNOWN_PARTS, ROTOR)
    assert old in text
    assert sentence in refusal_of(KNOWN_PARTS, text.replace(old, new))


# --- the files -------------------------------------------------------------------------------------------------------


def test_an_empty_list_has_no_file_and_the_first_entry_makes_it(tmp_path: Path):
    folder = tmp_path / "not there yet"
    assert read_list(OWN_MATERIALS, folder) == ()
    assert with_entry_kept(OWN_MATERIALS, folder, MELT) == (MELT,)
    assert with_entry_kept(OWN_MATERIALS, folder, FOAM) == (MELT, FOAM)
    assert read_list(OWN_MATERIALS, folder) == (MELT, FOAM)
    assert with_entry_kept(KNOWN_PARTS, folder, ROTOR) == (ROTOR,)
    assert sorted(path.name for path in folder.iterdir()) == ["known_parts.toml", "materials.toml"]


def test_what_was_written_by_hand_stays_to_the_letter_when_something_is_added_or_taken_out(tmp_path: Path):
    path = tmp_path / "materials.toml"
    path.write_text(BY_HAND, encoding="utf-8")
    with_entry_kept(OWN_MATERIALS, tmp_path, MELT)
    assert path.read_text(encoding="utf-8") == f"{BY_HAND}\n{text_of(OWN_MATERIALS, MELT)}"
    without_entry(OWN_MATERIALS, tmp_path, "melt A")
    assert path.read_text(encoding="utf-8").rstrip("\n") == BY_HAND.rstrip("\n")
    without_entry(OWN_MATERIALS, tmp_path, "cast A")
    left = path.read_text(encoding="utf-8")
    assert left.startswith('# weighed at the saw\n# bought in spring\n[[material]]\nname = "cast B"')


@pytest.mark.parametrize("name", ["melt A", "MELT-a", MATERIALS[0].name])
def test_an_entry_whose_name_is_taken_is_refused_and_the_file_stays(tmp_path: Path, name: str):
    with_entry_kept(OWN_MATERIALS, tmp_path, MELT)
    before = (tmp_path / "materials.toml").read_bytes()
    with pytest.raises(EditRefused, match=r"has a material of this name already; read .* Choose another name\."):
        with_entry_kept(OWN_MATERIALS, tmp_path, replace(FOAM, name=name))
    assert (tmp_path / "materials.toml").read_bytes() == before


@pytest.mark.parametrize("damage", [b"[[material", b"\xff\xfe", b"other = 1\n", b'[[material]]\nname = "a"\n'])
def test_a_damaged_file_is_told_and_neither_added_to_nor_replaced(tmp_path: Path, damage: bytes):
    path = tmp_path / "materials.toml"
    path.write_bytes(damage)
    for call in (
        lambda: read_list(OWN_MATERIALS, tmp_path),
        lambda: with_entry_kept(OWN_MATERIALS, tmp_path, MELT),
        lambda: without_entry(OWN_MATERIALS, tmp_path, "melt A"),
    ):
        with pytest.raises(FileRefused, match=r"^materials\.toml"):
            call()
    assert path.read_bytes() == damage
    assert read_list(KNOWN_PARTS, tmp_path) == ()
    assert [each.name for each in tmp_path.iterdir()] == ["materials.toml"]


def test_a_file_that_is_too_large_or_none_is_refused(tmp_path: Path, monkeypatch: pytest.MonkeyPatch):
    (tmp_path / "known_parts.toml").mkdir()
    with pytest.raises(FileRefused, match="larger than any list, or no file"):
        read_list(KNOWN_PARTS, tmp_path)
    with_entry_kept(OWN_MATERIALS, tmp_path, MELT)
    monkeypatch.setattr("core.document.own_list.lists.MOST_BYTES", 50)
    with pytest.raises(FileRefused, match="larger than any list"):
        read_list(OWN_MATERIALS, tmp_path)


def test_a_list_in_which_tables_are_written_in_a_row_is_not_spoilt(tmp_path: Path):
    path = tmp_path / "materials.toml"
    path.write_text('material = [{name = "a", density = "8 kg/l"}, {name = "b", density = "7 kg/l"}]\n')
    before = path.read_bytes()
    with pytest.raises(FileRefused, match="the text cannot be read"):
        with_entry_kept(OWN_MATERIALS, tmp_path, MELT)
    assert path.read_bytes() == before
    assert [entry.name for entry in without_entry(OWN_MATERIALS, tmp_path, "a")] == ["b"]


def test_a_file_that_cannot_be_written_stays_and_nothing_is_left_beside_it(tmp_path: Path, monkeypatch: pytest.MonkeyPatch):
    with_entry_kept(OWN_MATERIALS, tmp_path, MELT)
    before = (tmp_path / "materials.toml").read_bytes()

    def full(_handle: int) -> None:
        raise OSError(28, os.strerror(28))

    monkeypatch.setattr("os.fsync", full)
    with pytest.raises(FileRefused, match=r"materials\.toml: the file cannot be written; read No space left on device"):
        with_entry_kept(OWN_MATERIALS, tmp_path, FOAM)
    assert (tmp_path / "materials.toml").read_bytes() == before
    assert [each.name for each in tmp_path.iterdir()] == ["materials.toml"]


def test_taking_out_what_is_not_there_is_refused(tmp_path: Path):
    with pytest.raises(EditRefused, match='your list has no known part of this name; read "pump"'):
        without_entry(KNOWN_PARTS, tmp_path, "pump")


# --- import and export -----------------------------------------------------------------------------------------------


def test_exported_entries_are_imported_elsewhere(tmp_path: Path):
    with_entries_exported(KNOWN_PARTS, (ROTOR, PUMP), tmp_path / "for a colleague.toml")
    assert with_entries_imported(KNOWN_PARTS, tmp_path / "other", tmp_path / "for a colleague.toml") == Imported(
        ("6-pole rotor", "pump"), (), ()
    )
    assert read_list(KNOWN_PARTS, tmp_path / "other") == (ROTOR, PUMP)


def test_an_export_replaces_no_file(tmp_path: Path):
    path = tmp_path / "mine.toml"
    path.write_text("a letter")
    with pytest.raises(FileRefused) as refusal:
        with_entries_exported(OWN_MATERIALS, (MELT,), path)
    assert str(refusal.value) == "mine.toml: it is there already, and is not replaced. Choose another name."
    assert path.read_text() == "a letter"


def test_an_export_that_fails_leaves_no_empty_file(tmp_path: Path):
    with pytest.raises(FileRefused):
        with_entries_exported(OWN_MATERIALS, (replace(MELT, source="\ud800"),), tmp_path / "mine.toml")
    assert list(tmp_path.iterdir()) == []


def test_an_import_gives_other_names_to_what_is_there_with_other_values(tmp_path: Path):
    steel = replace(MELT, name="steel")
    with_entry_kept(OWN_MATERIALS, tmp_path / "mine", MELT)
    with_entry_kept(OWN_MATERIALS, tmp_path / "mine", FOAM)
    (tmp_path / "theirs.toml").write_text(
        with_appended(OWN_MATERIALS, "", (replace(MELT, density=7795.0), FOAM, steel)), encoding="utf-8"
    )
    came = with_entries_imported(OWN_MATERIALS, tmp_path / "mine", tmp_path / "theirs.toml")
    assert came == Imported(
        ("melt A (2)", "steel (2)"), (("melt A", "melt A (2)"), ("steel", "steel (2)")), ("rigid foam",)
    )
    assert read_list(OWN_MATERIALS, tmp_path / "mine")[:2] == (MELT, FOAM)
    again = with_entries_imported(OWN_MATERIALS, tmp_path / "mine", tmp_path / "theirs.toml")
    assert again.added == ("melt A (3)", "steel (3)")


def test_an_import_of_a_damaged_or_missing_file_changes_nothing(tmp_path: Path):
    with_entry_kept(OWN_MATERIALS, tmp_path, MELT)
    before = (tmp_path / "materials.toml").read_bytes()
    bad = tmp_path / "bad.toml"
    bad.write_text(text_of(OWN_MATERIALS, FOAM) + "[[material]]\n")
    for path in (bad, tmp_path / "gone.toml"):
        with pytest.raises(FileRefused, match=path.name):
            with_entries_imported(OWN_MATERIALS, tmp_path, path)
    assert (tmp_path / "materials.toml").read_bytes() == before


# --- groups ----------------------------------------------------------------------------------------------------------


def block(width: float = 0.06) -> Machine:
    return Machine(Assembly("block", (Part("p1", "block", ShapeBody(Box(width, 0.05, 0.03)), ByDensity(2700.0)),)))


def test_kept_groups_are_documents_and_one_of_a_taken_name_gets_a_number(tmp_path: Path):
    assert group_files(tmp_path) == ()
    first, second = with_group_kept(tmp_path, block(), "holder"), with_group_kept(tmp_path, block(0.09), "Holder")
    assert [path.name for path in group_files(tmp_path)] == ["holder.masswright", "Holder 2.masswright"]
    assert (read_document(first), read_document(second)) == (block(), block(0.09))


@pytest.mark.parametrize(
    ("name", "file"),
    [("../../etc/x", "-..-etc-x"), ("a:b*c?", "a-b-c-"), (" . ", "group"), ("", "group"), ("x" * 300, "x" * 100)],
)
def test_the_name_of_a_group_leads_out_of_no_folder(tmp_path: Path, name: str, file: str):
    path = with_group_kept(tmp_path, block(), name)
    assert path == tmp_path / "groups" / f"{file}.masswright"


def test_an_imported_group_finds_its_linked_files_from_its_new_place(tmp_path: Path):
    save_document(block(), tmp_path / "block.masswright")
    holder = with_linked_group(Assembly("holder"), read_linked(tmp_path / "block.masswright"), None, None)
    save_document(Machine(holder), tmp_path / "holder.masswright")
    kept = with_group_imported(tmp_path / "data" / "list", tmp_path / "holder.masswright")
    assert read_document(kept).assembly == holder
    with_group_exported(kept, tmp_path / "again.masswright")
    assert read_document(tmp_path / "again.masswright").assembly == holder


def test_a_group_is_exported_over_no_file_and_imported_from_no_other_one(tmp_path: Path):
    kept = with_group_kept(tmp_path, block(), "block")
    (tmp_path / "there.masswright").write_text("a letter")
    with pytest.raises(FileRefused, match="it is there already, and is not replaced"):
        with_group_exported(kept, tmp_path / "there.masswright")
    assert (tmp_path / "there.masswright").read_text() == "a letter"
    with pytest.raises(FileRefused, match="no Masswright document"):
        with_group_imported(tmp_path, tmp_path / "there.masswright")
    assert group_files(tmp_path) == (kept,)
    without_group(kept)
    assert group_files(tmp_path) == ()


# --- materials by name -----------------------------------------------------------------------------------------------


def test_an_own_material_is_found_beside_the_tables():
    assert material("melt-a", (MELT, FOAM)) is MELT
    assert material("foam", (MELT, FOAM)) is FOAM
    assert material("a melt", (MELT,)) is MELT
    assert material("steel", (MELT,)).group != "own list"
    with pytest.raises(MasswrightError, match="no material has this name"):
        material("melt a")


def test_an_own_material_stands_in_the_place_of_one_of_the_table_with_its_name():
    """A newer table may come to have a name that the list had before."""
    own = replace(MELT, name="Steel, C45")
    assert material("steel c45", (own,)) is own
    assert ByMaterial(own.name, own.density).mass_of(2.0) == 2 * 7790.0
