"""Linked groups in the window: saved, placed, marked, read again with the difference, broken, and only read inside."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QFileDialog, QPushButton
from window_driver import cell, choose_cells, dial, dialog, enter, field, names, no_dialog, solid, text_of, trigger

from app.window.ledger.columns import INDEX
from core.assembly import Assembly
from core.document import read_document, save_document
from core.machine import Machine
from core.placement import Pose

if TYPE_CHECKING:
    from pathlib import Path

pytestmark = pytest.mark.gui
STEEL = 7850.0
# A box of 60 × 50 × 30 mm in steel.
BLOCK_KG = STEEL * 0.06 * 0.05 * 0.03


def holder(width: float = 60.0) -> Assembly:
    return Assembly("holder", (solid("p1", "box", length_x=width, length_y=50, length_z=30),))


@pytest.fixture
def file(tmp_path) -> Path:
    path = tmp_path / "parts" / "holder.masswright"
    path.parent.mkdir()
    save_document(Machine(holder()), path)
    return path


def rest(window, qtbot) -> None:
    """Wait until nothing is being read any more."""
    qtbot.waitUntil(lambda: not window.changed_files.busy)


@pytest.fixture
def linked(window, qtbot, tmp_path, file):
    """Show a saved dial with the holder placed in it, turned about and on a ring."""
    window.session.take(Machine(dial()), None)
    window.session.save(tmp_path / "dial.masswright")
    place(window, qtbot, file)
    moved = replace(window.session.assembly.node("g1"), pose=Pose((0.1, 0.0, 0.05)))
    window.session.edit("Move", lambda before: before.replaced(moved))
    window.session.save(window.session.path)
    rest(window, qtbot)
    return window


def place(window, qtbot, path) -> None:
    trigger(window, "Part", "Place a linked group…")
    box = dialog(window)
    assert isinstance(box, QFileDialog)
    box.filesSelected.emit([str(path)])
    box.reject()
    qtbot.waitUntil(lambda: "Reading" not in window.notice.words.text() or not window.notice.isVisible())


def button(widget, words):
    return next(each for each in widget.findChildren(QPushButton) if each.text() == words and not each.isHidden())


def show_page(window, key):
    window.session.select(frozenset({key}))
    window.pages.setCurrentWidget(window.part)


def texts(widget) -> str:
    from app.window.style import Words

    QApplication.processEvents()  # shows what was just put into a layout
    return "\n".join(each.text() for each in widget.findChildren(Words) if not each.isHidden())


def line(window, key):
    return next(each for each in window.session.ledger.lines if each.key == key)


# --- saving and placing ----------------------------------------------------------------------------------------------


def test_a_group_is_saved_as_a_document_of_its_own_and_this_one_stays(filled, tmp_path):
    before = filled.session.machine
    filled.session.select(frozenset({"top"}))
    trigger(filled, "Part", "Save group as a document…")
    box = dialog(filled)
    assert box.acceptMode() == QFileDialog.AcceptMode.AcceptSave
    box.fileSelected.emit(str(tmp_path / "top"))
    box.reject()
    made = read_document(tmp_path / "top.masswright").assembly
    assert made.members == before.assembly.node("top").members
    assert filled.session.machine is before
    assert filled.session.path is None
    assert filled.told.text() == "Saved top as top.masswright"


def test_a_group_is_not_saved_over_the_open_document_or_a_file_that_was_not_chosen(filled, tmp_path):
    filled.session.save(tmp_path / "dial.masswright")
    before = (tmp_path / "dial.masswright").read_bytes()
    filled.linked.save_group_under(filled.session.assembly.node("top"), tmp_path / "dial.masswright")
    assert "this is the file of the open document" in filled.notice.words.text()
    filled.linked.save_group_under(filled.session.assembly.node("top"), tmp_path / "dial")
    assert "is there already" in filled.notice.words.text()
    assert (tmp_path / "dial.masswright").read_bytes() == before


@pytest.mark.parametrize("words", ["Save group as a document…", "Read linked group again…", "Break the link"])
def test_without_a_group_the_commands_say_what_to_select(filled, words):
    before = filled.session.machine
    for keys in ((), ("plate",), ("top", "below")):
        filled.session.select(frozenset(keys))
        trigger(filled, "Part", words)
        assert filled.notice.words.text().startswith("Select ")
        assert no_dialog(filled)
    assert filled.session.machine is before


def test_an_ordinary_group_is_no_linked_one(filled):
    filled.session.select(frozenset({"top"}))
    trigger(filled, "Part", "Break the link")
    assert filled.notice.words.text() == "top is an ordinary group. Select a linked group."


def test_a_placed_group_counts_is_named_and_is_one_step_to_undo(linked):
    assert names(linked)[-2:] == ["holder", ".p1"]
    assert line(linked, "g1").mass == pytest.approx(BLOCK_KG, rel=1e-12)
    # Its own J about z, and m·d² from 100 mm out.
    own = BLOCK_KG / 12 * (0.06**2 + 0.05**2)
    assert line(linked, "g1").inertia == pytest.approx(own + BLOCK_KG * 0.1**2, rel=1e-12)
    assert text_of(linked, "g1", "material") == "linked: holder.masswright"
    linked.undo()
    linked.undo()
    assert "holder" not in names(linked)
    linked.redo()
    assert names(linked)[-2:] == ["holder", ".p1"]
    assert linked.session.selected == frozenset() or "g1" in linked.session.assembly


def test_a_group_is_placed_behind_a_selected_linked_group_never_in_it(linked, qtbot, file):
    linked.session.select(frozenset({"g1/p1"}))
    place(linked, qtbot, file)
    assert names(linked)[-4:] == ["holder", ".p1", "holder 2", ".p1"]
    linked.session.select(frozenset({"top"}))
    place(linked, qtbot, file)
    assert linked.session.assembly.groups_above("g3")[0].key == "top"


def test_a_new_shape_goes_behind_a_selected_linked_group(linked):
    linked.session.select(frozenset({"g1"}))
    linked.add_shape("cylinder")
    assert names(linked)[-3:] == ["holder", ".p1", "cylinder"]


def test_a_document_is_not_placed_in_itself(linked, qtbot):
    before = linked.session.machine
    place(linked, qtbot, linked.session.path)
    assert linked.notice.words.text() == (
        "dial.masswright: a document cannot hold itself as a linked group; read dial.masswright → dial.masswright. "
        "Break one of these links first."
    )
    assert linked.session.machine is before


def test_a_damaged_file_is_refused_in_one_sentence(linked, qtbot, tmp_path):
    (tmp_path / "bad.masswright").write_bytes(b"a letter")
    before = linked.session.machine
    place(linked, qtbot, tmp_path / "bad.masswright")
    assert linked.notice.words.text().startswith("bad.masswright: the file is no Masswright document")
    assert linked.session.machine is before


# --- the lines inside ------------------------------------------------------------------------------------------------


def test_lines_inside_have_no_cells_to_type_in_and_pasting_is_refused(linked):
    before = linked.session.machine
    for column in ("name", "count", "material"):
        assert not cell(linked, "g1/p1", column).flags() & Qt.ItemFlag.ItemIsEditable
    choose_cells(linked, ("g1/p1", "material"))
    QApplication.clipboard().setText("steel")
    linked.ledger.paste()
    assert linked.notice.words.text().startswith(
        "p1: this line belongs to the linked document holder.masswright, and is only read here."
    )
    assert linked.session.machine is before


@pytest.mark.parametrize(("keys", "target"), [(["g1/p1"], "top"), (["plate"], "g1")])
def test_lines_are_dragged_neither_out_nor_in(linked, keys, target):
    from PySide6.QtCore import QMimeData

    from app.window.ledger.model import MIME

    data = QMimeData()
    data.setData(MIME, "\n".join(keys).encode())
    before = linked.session.machine
    linked.ledger.tree.lines.dropMimeData(data, Qt.DropAction.MoveAction, -1, 0, cell(linked, target, "name"))
    assert "belongs to the linked document" in linked.notice.words.text()
    assert linked.session.machine is before


def test_a_linked_group_is_dragged_whole_into_another_group(linked):
    from PySide6.QtCore import QMimeData

    from app.window.ledger.model import MIME

    data = QMimeData()
    data.setData(MIME, b"g1")
    linked.ledger.tree.lines.dropMimeData(data, Qt.DropAction.MoveAction, -1, 0, cell(linked, "top", "name"))
    assert linked.session.assembly.groups_above("g1")[0].key == "top"


def test_the_page_of_a_line_inside_says_where_it_is_edited_and_takes_no_typing(linked):
    show_page(linked, "g1/p1")
    assert "Only read here: this line belongs to the linked document holder.masswright." in texts(linked.part)
    assert not field(linked.part, "length along x").isEnabled()
    linked.delete()
    assert "belongs to the linked document" in linked.notice.words.text()
    assert "g1/p1" in linked.session.assembly


def test_doing_the_last_edit_over_does_not_reach_the_lines_inside(linked):
    before = linked.session.machine
    refusal = linked.session.amend("Move", lambda a: a.replaced(replace(a.node("g1/p1"), pose=Pose((1.0, 0, 0)))))
    assert "p1: this line belongs to the linked document holder.masswright" in refusal
    assert linked.session.machine is before


def test_handles_stand_at_the_group_and_at_no_line_inside(linked):
    linked.session.select(frozenset({"g1"}))
    assert linked.placing._handles() is not None
    for keys in ({"g1/p1"}, {"plate", "g1/p1"}):
        linked.session.select(frozenset(keys))
        assert linked.placing._handles() is None
    # Carried by the group, the line moves with it.
    linked.session.select(frozenset({"g1", "g1/p1"}))
    assert linked.placing._handles() is not None


def test_the_group_itself_is_renamed_placed_and_repeated(linked):
    show_page(linked, "g1")
    enter(field(linked.part, "Name"), "clamp")
    enter(field(linked.part, "position x"), "200")
    enter(field(linked.part, "quantity"), "3")
    group = linked.session.assembly.node("g1")
    assert (group.name, group.pose.position[0], group.copies.count) == ("clamp", pytest.approx(0.2), 3)
    assert group.link is not None


def test_the_page_tells_the_whole_path_in_steps_that_may_be_broken_into_lines(linked, file):
    show_page(linked, "g1")
    assert str(file) in texts(linked.part).replace("\u200b", "")


def test_a_broken_link_gives_the_lines_free_and_undo_ties_them_again(linked):
    show_page(linked, "g1")
    button(linked.part, "Break the link").click()
    assert linked.session.history.undo_name == "Break the link of holder"
    show_page(linked, "g1/p1")
    enter(field(linked.part, "length along x"), "70")
    assert linked.session.assembly.node("g1/p1").body.shape.values()["length_x"] == pytest.approx(0.07)
    linked.undo()
    linked.undo()
    show_page(linked, "g1/p1")
    assert not field(linked.part, "length along x").isEnabled()


# --- the file behind it ----------------------------------------------------------------------------------------------


def test_a_changed_file_is_noticed_found_and_offered_with_the_difference_in_numbers(linked, qtbot, file):
    assert not linked.notice.isVisible()
    save_document(Machine(holder(90.0)), file)
    linked.changed_files.look()
    rest(linked, qtbot)
    assert linked.notice.words.text() == "The linked file holder.masswright has changed."
    assert text_of(linked, "g1", "material") == "last values, file changed: holder.masswright"
    failed = [finding for finding in linked.session.findings if finding.check.name == "linked file"]
    assert [(finding.key, finding.check.ok) for finding in failed] == [("g1", False)]
    before = line(linked, "g1")
    button(linked.notice, "Read it again…").click()
    box = dialog(linked)
    qtbot.waitUntil(box.take_button.isEnabled)
    told = texts(box).split("\n")
    at = told.index("mass, kg")
    assert told[at + 1 : at + 4] == ["0.706500", "1.05975", "0.353 kg (50.0 %)"]
    box.take_button.click()
    assert no_dialog(linked)
    assert line(linked, "g1").mass == pytest.approx(1.5 * before.mass, rel=1e-12)
    assert linked.session.history.undo_name == "Read holder again"
    assert text_of(linked, "g1", "material") == "linked: holder.masswright"
    assert not linked.notice.isVisible()
    linked.undo()
    assert line(linked, "g1").mass == before.mass
    assert text_of(linked, "g1", "material") == "last values, file changed: holder.masswright"


def test_a_file_that_is_left_as_it_is_changes_nothing(linked, qtbot, file):
    before = linked.session.machine
    save_document(Machine(holder(90.0)), file)
    show_page(linked, "g1")
    linked.changed_files.look()
    rest(linked, qtbot)
    button(linked.part, "Read again…").click()
    box = dialog(linked)
    qtbot.waitUntil(box.take_button.isEnabled)
    QTest.keyClick(box, Qt.Key.Key_Escape)
    assert no_dialog(linked)
    assert linked.session.machine is before
    assert linked.notice.isVisible()  # the offer stays
    file.unlink()
    linked.changed_files.look()
    rest(linked, qtbot)
    assert not linked.notice.isVisible()


def test_a_file_that_is_the_same_says_so_and_offers_nothing_to_take(linked, qtbot):
    show_page(linked, "g1")
    button(linked.part, "Read again…").click()
    box = dialog(linked)
    qtbot.waitUntil(lambda: "holds what was read from it" in texts(box))
    assert not box.take_button.isEnabled()
    box.reject()


def test_a_missing_file_marks_the_values_and_another_one_may_be_chosen(linked, qtbot, file):
    elsewhere = file.rename(file.with_name("clamp.masswright"))
    linked.changed_files.look()
    rest(linked, qtbot)
    assert text_of(linked, "g1", "material") == "last values, file missing: holder.masswright"
    assert line(linked, "g1").mass == pytest.approx(BLOCK_KG, rel=1e-12)
    assert linked.session.ledger.total.basis.endswith("last values: linked file missing")
    show_page(linked, "g1")
    assert "The file is missing; its last values count." in texts(linked.part)
    button(linked.part, "Read again…").click()
    box = dialog(linked)
    qtbot.waitUntil(lambda: "cannot be taken" in texts(box))
    assert "there is no such document" in box.wrong.text()
    assert not box.take_button.isEnabled()
    box.reject()
    QApplication.processEvents()
    button(linked.part, "Choose file…").click()
    choice = dialog(linked)
    choice.filesSelected.emit([str(elsewhere)])
    choice.reject()
    QApplication.processEvents()
    box = dialog(linked)
    qtbot.waitUntil(box.take_button.isEnabled)
    box.take_button.click()
    rest(linked, qtbot)
    assert text_of(linked, "g1", "material") == "linked: clamp.masswright"
    assert "The file holds what was read from it." in texts(linked.part)


def test_all_groups_of_one_file_are_read_again_together(linked, qtbot, file):
    linked.session.select(frozenset())
    place(linked, qtbot, file)
    save_document(Machine(holder(90.0)), file)
    linked.changed_files.look()
    rest(linked, qtbot)
    button(linked.notice, "Read it again…").click()
    box = dialog(linked)
    qtbot.waitUntil(box.take_button.isEnabled)
    box.take_button.click()
    assert [line(linked, key).mass for key in ("g1", "g2")] == [pytest.approx(1.5 * BLOCK_KG, rel=1e-12)] * 2
    assert linked.session.history.undo_name == "Read holder, holder 2 again"


def test_a_document_opened_with_a_missing_file_is_marked(linked, qtbot, file):
    path = linked.session.path
    linked.session.start_new()
    file.unlink()
    linked.files.open_path(path)
    rest(linked, qtbot)
    assert text_of(linked, "g1", "material") == "last values, file missing: holder.masswright"
    assert INDEX["material"] >= 0
    assert not linked.session.unsaved


def test_saved_into_another_folder_the_file_is_still_found(linked, qtbot, tmp_path):
    (tmp_path / "a" / "b").mkdir(parents=True)
    linked.files.save_under(tmp_path / "a" / "b" / "dial.masswright")
    linked.session.start_new()
    linked.files.open_path(tmp_path / "a" / "b" / "dial.masswright")
    rest(linked, qtbot)
    assert text_of(linked, "g1", "material") == "linked: holder.masswright"
    assert all(finding.check.ok for finding in linked.session.findings if finding.check.name == "linked file")


def test_the_work_is_not_saved_over_the_linked_file(linked, file):
    before = file.read_bytes()
    linked.files.save_under(file)
    assert "a document cannot hold itself as a linked group" in linked.notice.words.text()
    assert file.read_bytes() == before


def test_a_click_with_the_right_button_offers_the_commands_of_the_part_menu(linked):
    tree = linked.ledger.tree
    tree.customContextMenuRequested.emit(tree.visualRect(cell(linked, "g1", "name")).center())
    menu = QApplication.activePopupWidget()
    assert "Break the link" in [action.text() for action in menu.actions()]
    menu.close()
