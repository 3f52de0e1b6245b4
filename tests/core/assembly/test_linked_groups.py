"""Linked groups as values: what is taken from the other document, what stays, what may not be edited, what is told."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from strategies import assemblies, poses, rings

from core.assembly import Assembly, Cut, Group, Part, ShapeBody, findings_of, ledger_of, walk
from core.assembly.assembly import MeantOverlap
from core.assembly.link import Link
from core.assembly.linked_groups import (
    LinkedDocument,
    check_linked_lines,
    held_by,
    with_link_read,
    with_linked_group,
    without_link,
)
from core.assembly.names import NameEntry
from core.assembly.naming import with_entries
from core.assembly.selection import selected
from core.errors import EditRefused
from core.handover import sheet_of_assembly
from core.handover.lines import SheetChoice
from core.material import ByDensity
from core.placement import Pose, Ring, Several
from core.quantity import DEFAULT_UNITS
from core.shapes import Box, Cylinder

ALUMINIUM, STEEL = ByDensity(2700.0), ByDensity(7850.0)


def fixture(width: float = 0.06) -> Assembly:
    """A block with a bore and a pin in it, as its own document, on a dimension with a name."""
    bore = Cut("c1", "bore", Cylinder(0.02, 0.01), typed=(("dimension.diameter", "20 mm"),))
    block = Part("p1", "block", ShapeBody(Box(width, 0.05, 0.03)), ALUMINIUM, typed=(("dimension.length_x", "w"),), cuts=(bore,))
    pin = Part("p2", "pin", ShapeBody(Cylinder(0.01, 0.04)), STEEL, Pose((0.0, 0.02, 0.03)))
    pins = Group("g1", "pins", (pin,), only_in=("with pins",))
    made = Assembly("fixture", (block, pins), variants=("bare", "with pins"), meant=(MeantOverlap("p1", "p2", "p1"),))
    return with_entries(made, [NameEntry("w", f"{width * 1000} mm")])


def document(assembly: Assembly, digit: str = "a") -> LinkedDocument:
    return LinkedDocument(Link("/parts/fixture.masswright", digit * 64), "fixture", assembly)


def host() -> Assembly:
    """A plate, and six fixtures on a ring, far out and turned."""
    plate = Part("p1", "plate", ShapeBody(Cylinder(0.4, 0.02)), STEEL)
    placed = with_linked_group(Assembly("dial", (plate,)), document(fixture()), None, None)
    group = placed.node("g1")
    return placed.replaced(replace(group, pose=Pose((0.15, 0.4, 3.0), (0.3, -1.1, 2.0)), copies=Ring(6)))


def ordinary() -> Assembly:
    """The host with the same lines typed by hand: no link, keys and texts of its own."""
    group = host().node("g1")
    return host().replaced(replace(group, link=None))


def test_a_linked_group_weighs_what_the_other_document_weighs() -> None:
    """Against the other document's own total, moved by hand (parallel-axis theorem in Moments.mapped)."""
    alone = fixture()
    placed = with_linked_group(Assembly("dial"), document(alone), None, None)
    assert placed.total.mass == pytest.approx(float(alone.total.mass), rel=1e-15)
    np.testing.assert_allclose(placed.total.spread, alone.total.spread, rtol=1e-13, atol=1e-18)
    line = next(line for line in ledger_of(host()).lines if line.key == "g1")
    assert line.mass == pytest.approx(6 * float(alone.total.mass), rel=1e-14)


def test_only_the_lines_of_the_chosen_variant_are_taken_and_no_text_variant_or_name() -> None:
    bare = replace(fixture(), variant="bare")
    placed = with_linked_group(Assembly("dial"), document(bare), None, None)
    assert [node.key for node, _ in walk(placed.members)] == ["g1", "g1/p1"]
    whole = with_linked_group(Assembly("dial"), document(fixture()), None, None)
    for node, _ in walk(whole.members):
        assert node.typed == ()
        assert node.only_in == ()
    assert [cut.typed for cut in whole.node("g1/p1").cuts] == [()]
    assert whole.names == ()


def test_keys_inside_are_those_of_the_other_document_behind_the_groups_own() -> None:
    assert [node.key for node, _ in walk(host().members)] == ["p1", "g1", "g1/p1", "g1/g1", "g1/p2"]
    assert host().is_cut("g1/c1")
    twice = with_linked_group(host(), document(fixture()), None, None)
    assert "g2/p1" in twice
    assert twice.node("g2").name == "fixture 2"


def test_a_key_left_over_from_a_broken_link_is_not_given_again() -> None:
    """The lines of the broken group keep keys that begin with "g1/"."""
    loose = without_link(host(), "g1").moved("g1/p2").removed(("g1",))
    assert "g1" not in loose
    again = with_linked_group(loose, document(fixture()), None, None)
    assert {"g1/p2", "g2/p2"} <= {node.key for node, _ in walk(again.members)}


@given(assemblies(), poses, rings)
def test_any_document_may_be_linked_and_counts_as_its_lines_do(other: Assembly, pose: Pose, ring: Ring) -> None:
    placed = with_linked_group(Assembly("dial"), document(other), None, None)
    placed = placed.replaced(replace(placed.node("g1"), pose=pose, copies=ring))
    by_hand = Assembly("dial", (Group("x", "x", other.members, pose, ring),))
    assert placed.total.mass.tobytes() == by_hand.total.mass.tobytes()
    assert placed.total.spread.tobytes() == by_hand.total.spread.tobytes()
    assert len(ledger_of(placed).lines) == len(ledger_of(by_hand).lines)


# --- reading again ---------------------------------------------------------------------------------------------------


def test_reading_again_changes_the_members_and_keeps_pose_copies_and_name() -> None:
    before = host().replaced(replace(host().node("g1"), name="holders"))
    after = with_link_read(before, "g1", document(fixture(0.09), "b"))
    group = after.node("g1")
    assert (group.name, group.pose, group.copies) == ("holders", before.node("g1").pose, Ring(6))
    assert group.link == Link("/parts/fixture.masswright", "b" * 64)
    # Box less bore (through 10 of 30 mm), and the pin.
    one = 2700 * (0.09 * 0.05 * 0.03 - np.pi / 4 * 0.02**2 * 0.01) + 7850 * np.pi / 4 * 0.01**2 * 0.04
    plate = 7850 * np.pi / 4 * 0.4**2 * 0.02
    assert float(after.total.mass) == pytest.approx(plate + 6 * one, rel=1e-13)


def test_marks_on_lines_inside_survive_reading_again_where_the_line_does() -> None:
    marked = host().with_meant(MeantOverlap("p1", "g1/p1", "p1", "sits in a groove"))
    after = with_link_read(marked, "g1", document(fixture(0.09), "b"))
    assert after.meant_overlap("p1", "g1/p1").note == "sits in a groove"
    assert after.meant_overlap("g1/p1", "g1/p2").carried_by == "g1/p1"
    gone = with_link_read(marked, "g1", document(fixture().removed(("p1",)), "c"))
    assert gone.meant == ()


def test_a_mark_of_this_document_counts_rather_than_the_other_documents() -> None:
    own = MeantOverlap("g1/p1", "g1/p2", "g1/p2", "own")
    after = with_link_read(host().with_meant(own), "g1", document(fixture(), "b"))
    assert after.meant_overlap("g1/p1", "g1/p2") == own


def test_only_a_linked_group_of_this_document_is_read_again() -> None:
    with pytest.raises(EditRefused, match="this is no linked group"):
        with_link_read(ordinary(), "g1", document(fixture()))
    nested = with_linked_group(Assembly("line"), replace_link(document(host()), "/parts/dial.masswright"), None, None)
    with pytest.raises(EditRefused) as refusal:
        with_link_read(nested, "g1/g1", document(fixture(), "b"))
    assert str(refusal.value) == (
        "fixture: this line belongs to the linked document dial.masswright, and is only read here. Edit it there and "
        "read it again, or break the link on the Part page of the group."
    )


def replace_link(linked: LinkedDocument, path: str) -> LinkedDocument:
    return replace(linked, link=Link(path, linked.link.sha256))


# --- what may be edited ----------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("change", "named"),
    [
        (lambda a: a.replaced(replace(a.node("g1/p1"), name="slab")), "block"),
        (lambda a: a.replaced(replace(a.node("g1/p2"), driver=ALUMINIUM)), "pin"),
        (lambda a: a.replaced_cut(replace(a.cut("g1/c1"), pose=Pose((1e-3, 0, 0)))), "block"),
        (lambda a: a.replaced(replace(a.node("g1/g1"), pose=Pose((0, 0, 1.0)))), "pins"),
        (lambda a: a.removed(("g1/p2",)), "pin"),
        (lambda a: a.moved("g1/p2"), "pin"),
        (lambda a: a.moved("p1", "g1"), "plate"),
        (lambda a: a.moved("g1/g1", "g1", 0), "block"),
        (lambda a: a.inserted_cut(Cut("c9", "more", Cylinder(0.005, 0.01)), "g1/p1"), "block"),
    ],
)
def test_an_edit_of_a_line_inside_is_refused_and_the_line_is_named(change, named: str) -> None:
    before = host()
    with pytest.raises(EditRefused) as refusal:
        check_linked_lines(before, change(before))
    assert str(refusal.value).startswith(f"{named}: this line belongs to the linked document fixture.masswright")


@pytest.mark.parametrize(
    "change",
    [
        lambda a: a.replaced(replace(a.node("g1"), pose=Pose((1.0, 0, 0)), name="holders", copies=Several(2), note="n")),
        lambda a: a.removed(("g1",)),
        lambda a: a.replaced(replace(a.node("p1"), driver=ALUMINIUM)),
        lambda a: a.with_meant(MeantOverlap("p1", "g1/p1")),
        lambda a: without_link(a, "g1"),
        lambda a: with_link_read(a, "g1", document(fixture(0.09), "b")),
        lambda a: with_link_read(a, "g1", document(fixture(0.09))),
        lambda a: a.inserted(Group("x", "x")).moved("g1", "x"),
    ],
)
def test_the_group_itself_and_all_around_it_may_be_edited(change) -> None:
    before = host()
    check_linked_lines(before, change(before))


def test_a_broken_link_leaves_an_ordinary_group_whose_lines_may_be_edited() -> None:
    before = without_link(host(), "g1")
    assert before == ordinary()
    check_linked_lines(before, before.replaced(replace(before.node("g1/p1"), name="slab")))
    assert held_by(before, "g1/p1") is None


def test_the_holder_of_a_line_is_the_outermost_linked_group() -> None:
    nested = with_linked_group(Assembly("line"), replace_link(document(host()), "/parts/dial.masswright"), None, None)
    assert held_by(nested, "g1") is None
    assert held_by(nested, "g1/g1").key == "g1"
    assert held_by(nested, "g1/g1/p2").key == "g1"
    assert held_by(nested, "g1/g1/c1").key == "g1"


# --- what is known of the file ---------------------------------------------------------------------------------------


def linked_findings(assembly: Assembly) -> list[tuple[str, bool, str]]:
    return [
        (finding.key, finding.check.ok, finding.check.text)
        for finding in findings_of(assembly)
        if finding.check.name == "linked file"
    ]


def test_nothing_is_said_of_a_file_that_nobody_has_looked_at() -> None:
    assembly = host()
    assert linked_findings(assembly) == []
    assert ledger_of(assembly).total.basis == "computed"


def test_a_missing_file_is_a_failed_check_and_marks_every_value_that_rests_on_it() -> None:
    assembly = host()
    assembly.node("g1").link.note(None)
    sentence = (
        "fixture: linked file missing: last values of /parts/fixture.masswright count. Put it back, choose the file on "
        "the Part page of the group, or break the link."
    )
    assert linked_findings(assembly) == [("g1", False, sentence)]
    lines = {line.key: line for line in (*ledger_of(assembly).lines, ledger_of(assembly).total)}
    missing = "last values: linked file missing"
    assert {key: line.basis for key, line in lines.items()} == {
        "p1": "computed", "g1": missing, "g1/p1": missing, "g1/c1": missing, "g1/g1": missing, "g1/p2": missing,
        "": f"some {missing}",
    }
    assert {key for key, line in lines.items() if line.doubtful} == set(lines) - {"p1"}
    assert lines["g1"].material == "last values, file missing: fixture.masswright"
    assert lines[""].material == "2 of 3 last values"
    assert lines["g1"].mass == pytest.approx(6 * float(fixture().total.mass), rel=1e-14)


def test_a_changed_file_is_a_failed_check_until_it_is_read_again() -> None:
    assembly = host()
    assembly.node("g1").link.note("b" * 64)
    (finding,) = linked_findings(assembly)
    assert finding[1] is False
    assert finding[2].startswith("fixture: the linked file /parts/fixture.masswright has changed; the values of before")
    assert assembly.bases["g1/p2"] == "last values: linked file has changed"
    fresh = document(fixture(), "b")
    fresh.link.note("b" * 64)
    assert linked_findings(with_link_read(assembly, "g1", fresh)) == [
        ("g1", True, "fixture: the linked file /parts/fixture.masswright holds what was read from it")
    ]


def test_what_is_found_later_is_told_of_an_assembly_that_was_looked_at_before() -> None:
    assembly = host()
    bases = []
    for found in ("a" * 64, None, "b" * 64, "a" * 64):
        assembly.node("g1").link.note(found)
        bases.append((ledger_of(assembly).lines[1].basis, selected(assembly).bases))
    missing, changed = "last values: linked file missing", "last values: linked file has changed"
    assert bases == [
        ("computed", ("computed",)), (missing, ("computed", missing)), (changed, ("computed", changed)),
        ("computed", ("computed",)),
    ]


def test_what_was_noted_of_a_file_holds_for_every_assembly_that_shares_the_link() -> None:
    """So that undo brings back no old news."""
    before = host()
    after = before.replaced(replace(before.node("g1"), name="holders"))
    after.node("g1").link.note(None)
    assert before.node("g1").link.state == "missing"
    assert before == host()


def test_the_sheet_of_the_whole_and_of_the_group_say_that_a_file_is_missing() -> None:
    assembly = host()
    assembly.node("g1").link.note(None)
    for key in (None, "g1"):
        sheet = sheet_of_assembly(assembly, SheetChoice(), DEFAULT_UNITS, key)
        assert [check.name for check in sheet.failed] == ["linked file"]
    assert sheet.basis == "last values: linked file missing"
    assert selected(assembly).bases == ("computed", "last values: linked file missing")
    assert sheet_of_assembly(assembly, SheetChoice(), DEFAULT_UNITS, "p1").failed == ()


def test_a_file_behind_a_line_of_another_linked_document_is_mended_there() -> None:
    nested = with_linked_group(Assembly("line"), replace_link(document(host()), "/parts/dial.masswright"), None, None)
    inner = nested.node("g1/g1").link
    inner.note("b" * 64)
    assert linked_findings(nested)[0][2].endswith("Open dial.masswright, and read it again there.")
    inner.note(None)
    assert linked_findings(nested)[0][2].endswith("Put it back, or mend the link in dial.masswright.")


def test_a_linked_group_outside_the_chosen_variant_is_not_judged() -> None:
    assembly = replace(host(), variants=("bare", "full"), variant="bare")
    assembly = assembly.replaced(replace(assembly.node("g1"), only_in=("full",)))
    assembly.node("g1").link.note(None)
    assert linked_findings(assembly) == []


def test_the_lines_inside_are_told_apart_in_the_ledger() -> None:
    assert {line.key for line in ledger_of(host()).lines if line.read_only} == {"g1/p1", "g1/c1", "g1/g1", "g1/p2"}


@given(st.sampled_from(["C:\\parts\\fixture.masswright", "/parts/fixture.masswright", "fixture.masswright"]))
def test_the_name_of_the_file_is_told_whichever_system_wrote_the_path(path: str) -> None:
    assert Link(path, "0" * 64).file_name == "fixture.masswright"
