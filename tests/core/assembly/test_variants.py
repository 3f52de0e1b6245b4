"""Variants: lines that are in some of them only, totals of each, and the ledger of the chosen one."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import TYPE_CHECKING

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from strategies import varied_assemblies

from core.assembly import Assembly, Cut, Group, Part, ShapeBody, findings_of, ledger_of
from core.assembly.selection import selected
from core.assembly.variants import (
    totals_by_variant,
    with_membership,
    with_variant_added,
    with_variant_renamed,
    without_variant,
)
from core.document import read_document_bytes, save_document
from core.errors import EditRefused
from core.handover import SheetChoice, sheet_of_assembly
from core.handover.answer import answer_of_machine
from core.machine import Machine
from core.material import ByDensity, NotSet
from core.placement import Pose, Ring
from core.quantity import DEFAULT_UNITS
from core.shapes import Cylinder

if TYPE_CHECKING:
    from core.assembly import Node

EMPTY, FULL = "payload empty", "payload full"


def disc(key: str, diameter: float = 0.1, x: float = 0.0, **more: object) -> Part:
    return Part(key, f"disc {key}", ShapeBody(Cylinder(diameter, 0.02)), ByDensity(2700.0), Pose((x, 0.1, 0.0)), **more)


def machine(variant: str = "") -> Assembly:
    """Frame a, group g of four with b in it always and c in FULL only, d in EMPTY only with a bore, e in FULL only."""
    bore = Cut("k", "bore", Cylinder(0.02, 0.02))
    load = Group("g", "load", (disc("b"), disc("c", 0.2, 0.3, only_in=(FULL,))), Pose((0.5, 0.0, 0.0)), Ring(4))
    tray = disc("d", 0.3, cuts=(bore,), only_in=(EMPTY,))
    return Assembly("machine", (disc("a"), load, tray, disc("e", only_in=(FULL,))), variants=(EMPTY, FULL), variant=variant)


def without(assembly: Assembly, *keys: str) -> Assembly:
    return replace(assembly.removed(keys), variant="")


def test_a_variant_weighs_what_the_same_document_weighs_without_the_other_lines():
    for variant, left_out in ((EMPTY, ("c", "e")), (FULL, ("d",))):
        chosen, pruned = machine(variant), without(machine(), *left_out)
        assert float(chosen.total.mass) == pytest.approx(float(pruned.total.mass), rel=1e-15)
        assert ledger_of(chosen).total.inertia == pytest.approx(ledger_of(pruned).total.inertia, rel=1e-15)
        assert (chosen.bounds == pruned.bounds).all()
        for line in ledger_of(pruned).lines:
            same = next(other for other in ledger_of(chosen).lines if other.key == line.key)
            assert (same.mass, same.own_inertia, same.transfer) == (line.mass, line.own_inertia, line.transfer)
            assert same.counts


def test_lines_of_another_variant_stay_in_the_ledger_without_values():
    lines = {line.key: line for line in ledger_of(machine(FULL)).lines}
    assert [line.key for line in ledger_of(machine(FULL)).lines] == ["a", "g", "b", "c", "d", "k", "e"]
    assert {key for key, line in lines.items() if not line.counts} == {"d", "k"}
    assert lines["d"].mass is lines["d"].inertia is lines["k"].mass is lines["d"].share is None
    assert {line.key for line in ledger_of(machine(EMPTY)).lines if not line.counts} == {"c", "e"}
    assert all(line.counts for line in ledger_of(machine()).lines)


def test_a_group_that_is_not_in_a_variant_takes_all_it_holds_with_it():
    outer = Group("o", "outer", (Group("i", "inner", (disc("p"),)), disc("q")), only_in=(EMPTY,))
    assembly = Assembly("two", (outer, disc("r")), variants=(EMPTY, FULL), variant=FULL)
    assert [part.key for part in assembly.table.parts] == ["r"]
    assert [line.counts for line in ledger_of(assembly).lines] == [False, False, False, False, True]
    assert selected(assembly, "i").parts == ()


def test_every_line_counts_while_no_variant_is_chosen():
    whole = machine()
    assert whole.counted is whole
    assert len(whole.table.parts) == 5


def test_totals_stand_side_by_side_and_each_is_that_of_its_variant_chosen():
    totals = totals_by_variant(machine(EMPTY))
    assert [each.variant for each in totals] == [EMPTY, FULL]
    for each in totals:
        total = ledger_of(machine(each.variant)).total
        assert float(each.moments.mass) == pytest.approx(total.mass, rel=1e-15)
        assert each.inertia == pytest.approx(total.inertia, rel=1e-12)
        assert each.without_mass == 0
    assert [each.variant for each in totals_by_variant(Assembly("none", (disc("a"),)))] == [""]


def test_a_variant_of_parts_without_mass_tells_how_many_it_leaves_out():
    part = replace(disc("a", only_in=(FULL,)), driver=NotSet())
    totals = totals_by_variant(Assembly("m", (part,), variants=(EMPTY, FULL)))
    assert [(each.inertia, each.without_mass) for each in totals] == [(0.0, 0), (0.0, 1)]


@given(st.lists(st.sets(st.sampled_from(["p", "q", "r"])), min_size=1, max_size=5))
def test_lines_in_one_variant_each_share_the_whole_out_among_the_variants(memberships):
    members = tuple(disc(f"k{at}", x=0.1 * at, only_in=tuple(sorted(each))) for at, each in enumerate(memberships))
    assembly = Assembly("m", members, variants=("p", "q", "r"))
    whole = float(assembly.total.mass)
    counted = sum(len(each) or 3 for each in memberships) / len(memberships)
    assert sum(float(each.moments.mass) for each in totals_by_variant(assembly)) == pytest.approx(whole * counted, rel=1e-12)


def test_findings_and_sheet_are_those_of_the_chosen_variant():
    unset = replace(disc("u", only_in=(FULL,)), driver=NotSet())
    assembly = machine(EMPTY).inserted(unset)
    assert "u" not in {finding.key for finding in findings_of(assembly)}
    assert "u" in {finding.key for finding in findings_of(replace(assembly, variant=FULL))}
    sheet = sheet_of_assembly(assembly, SheetChoice(), DEFAULT_UNITS)
    assert sheet.notes[0] == 'Values of the variant "payload empty": lines that are not in it are left out.'
    of_line = sheet_of_assembly(assembly, SheetChoice(), DEFAULT_UNITS, "u")
    assert of_line.title == "disc u"
    assert all(entry.si is None for entry in of_line.entries)


def test_a_line_is_put_into_variants_and_all_of_them_means_new_ones_too():
    put = with_membership(machine(), "a", frozenset({FULL}))
    assert put.node("a").only_in == (FULL,)
    assert with_membership(put, "a", frozenset({EMPTY, FULL})).node("a").only_in == ()
    assert with_membership(put, "a", frozenset()).node("a").only_in == ()
    with pytest.raises(EditRefused, match="the document has no such variant; read half"):
        with_membership(put, "a", frozenset({"half"}))


def test_renaming_a_variant_follows_on_every_line_and_in_the_choice():
    renamed = with_variant_renamed(machine(FULL), FULL, "loaded")
    assert (renamed.variants, renamed.variant) == ((EMPTY, "loaded"), "loaded")
    assert renamed.node("c").only_in == renamed.node("e").only_in == ("loaded",)
    assert with_variant_renamed(renamed, "loaded", FULL) == machine(FULL)


def test_deleting_a_variant_is_refused_while_a_line_is_in_it_only():
    with pytest.raises(EditRefused) as refused:
        without_variant(machine(), FULL)
    assert str(refused.value) == (
        'disc c, disc e: lines are in the variant "payload full" only, and would come to be in all of them. '
        "Delete them, or put them into another variant first."
    )
    more = with_variant_added(machine(), "half")
    wider = with_membership(with_membership(more, "c", frozenset({FULL, "half"})), "e", frozenset({FULL, "half"}))
    left = without_variant(replace(wider, variant=FULL), FULL)
    assert (left.variants, left.variant, left.node("c").only_in) == ((EMPTY, "half"), "", ("half",))


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda: with_variant_added(machine(), EMPTY), "two variants have the same name"),
        (lambda: with_variant_added(machine(), "  "), "a variant needs a name"),
        (lambda: replace(machine(), variant="half"), "the document has no such variant; read half"),
        (lambda: machine().inserted(disc("z", only_in=("half",))), "disc z: the line belongs to a variant that the document does not have"),
        (lambda: without_variant(machine(), "half"), "the document has no such variant"),
        (lambda: with_variant_renamed(machine(), "half", "x"), "the document has no such variant"),
    ],
)
def test_what_cannot_be_a_variant_is_refused(make, sentence):
    with pytest.raises(EditRefused, match=sentence):
        make()


def test_a_document_keeps_its_variants_and_one_without_them_has_no_such_entries(tmp_path):
    save_document(Machine(machine(FULL)), tmp_path / "m.masswright")
    assert read_document_bytes((tmp_path / "m.masswright").read_bytes()).assembly == machine(FULL)
    save_document(Machine(Assembly("plain", (disc("a"),))), tmp_path / "p.masswright")
    text = (tmp_path / "p.masswright").read_bytes()
    assert not any(word in text for word in (b"variant", b"only_in", b'"names"'))


def test_the_answer_for_programs_says_the_variant_and_the_totals_of_each():
    answer = answer_of_machine(Machine(machine(FULL)), "m.masswright")
    assert answer["variant"] == FULL
    assert [each["name"] for each in answer["variants"]] == [EMPTY, FULL]
    assert answer["variants"][1]["mass_kg"] == pytest.approx(answer["mass_kg"], rel=1e-15)
    assert answer["variants"][1]["axis_inertia_kgm2"] == pytest.approx(answer["axis"]["inertia_kgm2"], rel=1e-12)
    assert {line["key"]: line["counts"] for line in answer["ledger"]}["d"] is False
    assert "variants" not in answer_of_machine(Machine(Assembly("plain", (disc("a"),))), "p.masswright")


PROPERTY = settings(deadline=None, max_examples=30, suppress_health_check=list(HealthCheck))


def left_out(members: tuple[Node, ...], variant: str) -> list[str]:
    """Return the keys of the outermost lines that name variants, and not this one."""
    keys = []
    for node in members:
        if variant and node.only_in and variant not in node.only_in:
            keys.append(node.key)
        elif isinstance(node, Group):
            keys += left_out(node.members, variant)
    return keys


@PROPERTY
@given(varied_assemblies())
def test_any_variant_is_the_document_with_the_other_lines_taken_out(assembly):
    pruned = replace(assembly.removed(tuple(left_out(assembly.members, assembly.variant))), variant="")
    size = max(float(abs(assembly.table.moments.centre).max(initial=0.0)), 1.0)
    assert float(assembly.total.mass) == pytest.approx(float(pruned.total.mass), rel=1e-12)
    assert assembly.total.centre == pytest.approx(pruned.total.centre, abs=1e-12 * size)
    counting = {line.key: line for line in ledger_of(assembly).lines if line.counts}
    for line in ledger_of(pruned).lines:
        assert counting[line.key].mass == (None if line.mass is None else pytest.approx(line.mass, rel=1e-12))
    assert set(counting) == {line.key for line in ledger_of(pruned).lines}


@PROPERTY
@given(varied_assemblies())
def test_any_document_with_variants_is_read_as_it_was_saved(assembly):
    with TemporaryDirectory() as folder:
        save_document(Machine(assembly), Path(folder) / "m.masswright")
        assert read_document_bytes((Path(folder) / "m.masswright").read_bytes()).assembly == assembly
