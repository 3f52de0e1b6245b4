"""Documents: open, save, the question about unsaved work, refused files, dropped files, what a crash leaves."""

from __future__ import annotations

import os
import subprocess
import sys
import zipfile
from typing import TYPE_CHECKING

import pytest
from PySide6.QtCore import QMimeData, QPointF, Qt, QUrl
from PySide6.QtGui import QDragEnterEvent, QDropEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QFileDialog, QMessageBox
from window_driver import box_facets, dial, dialog, enter, field, names, no_dialog, trigger, write_stl

from app.window import autosave
from app.window.settings import Settings
from app.window.start import SAMPLES
from core.document import read_document, save_document
from core.machine import Machine

if TYPE_CHECKING:
    from pathlib import Path

pytestmark = pytest.mark.gui


@pytest.fixture
def saved(tmp_path):
    path = tmp_path / "dial & co.masswright"
    save_document(Machine(dial()), path)
    return path


@pytest.fixture
def dirty(window, saved):
    """Show a window in which a saved document was changed."""
    window.files.open_path(saved)
    window.session.select(frozenset({"hub"}))
    window.delete()
    return window


def press(box, words):
    next(button for button in box.buttons() if button.text() == words).click()
    QApplication.processEvents()


def test_a_document_opens_and_is_the_newest_of_the_recent_ones(window, saved):
    trigger(window, "File", "Open…")
    box = dialog(window)
    assert isinstance(box, QFileDialog)
    box.filesSelected.emit([str(saved)])
    box.reject()
    assert names(window)[:2] == ["top", ".plate"]
    assert window.windowTitle() == "dial & co.masswright[*] — Masswright"
    assert not window.isWindowModified()
    assert Settings().recent == [saved]
    window.session.start_new()
    window.actions_.recent.aboutToShow.emit()
    window.actions_.recent.actions()[0].trigger()
    assert window.session.path == saved


def test_saving_writes_where_the_document_is_and_clears_the_mark(dirty, saved):
    assert dirty.isWindowModified()
    QTest.keyClick(dirty, Qt.Key.Key_S, Qt.KeyboardModifier.ControlModifier)
    assert not dirty.isWindowModified()
    assert "hub" not in read_document(saved).assembly
    assert dirty.told.text() == "Saved dial & co.masswright"
    dirty.undo()
    assert dirty.isWindowModified()
    dirty.redo()
    assert not dirty.isWindowModified()


def test_a_new_document_asks_where_and_gets_the_ending(window, tmp_path):
    window.add_shape("cylinder")
    trigger(window, "File", "Save")
    box = dialog(window)
    assert box.acceptMode() == QFileDialog.AcceptMode.AcceptSave
    assert box.defaultSuffix() == "masswright"
    box.fileSelected.emit(str(tmp_path / "dial v1.2"))
    box.reject()
    assert window.session.path == tmp_path / "dial v1.2.masswright"
    assert len(read_document(window.session.path).assembly.members) == 1


def test_a_document_without_a_name_takes_that_of_its_file_and_keeps_what_can_be_undone(window, tmp_path):
    window.add_shape("cylinder")
    window.files.save_under(tmp_path / "reel")
    assert read_document(tmp_path / "reel.masswright").assembly.name == "reel"
    assert window.session.assembly.name == "reel"
    assert not window.isWindowModified()
    window.files.save_under(tmp_path / "reel, second try")
    assert window.session.assembly.name == "reel"
    assert window.session.history.undo_name == "Add cylinder"
    window.undo()
    assert window.session.assembly.members == ()


def test_a_file_that_the_user_did_not_choose_is_not_replaced(window, saved):
    before = saved.read_bytes()
    window.add_shape("cylinder")
    window.files.save_under(saved.with_suffix(""))
    assert saved.read_bytes() == before
    assert "is there already" in window.notice.words.text()
    assert window.session.unsaved


def test_a_save_that_fails_says_so_and_the_work_stays_unsaved(window, tmp_path):
    window.add_shape("cylinder")
    (tmp_path / "file").write_text("")
    window.files.save_under(tmp_path / "file" / "dial.masswright")
    assert window.notice.isVisible()
    assert window.session.unsaved
    assert window.session.path is None


@pytest.mark.parametrize("command", ["New", "Quit", "Winding reel"])
def test_cancel_keeps_the_unsaved_work(dirty, command):
    if command == "Winding reel":
        sample_menu(dirty)[command].trigger()
    else:
        trigger(dirty, "File", command)
    box = dialog(dirty)
    assert isinstance(box, QMessageBox)
    assert {button.text() for button in box.buttons()} == {"Save", "Do not save", "Cancel"}
    assert box.defaultButton().text() == "Save"
    QTest.keyClick(box, Qt.Key.Key_Escape)
    assert no_dialog(dirty)
    assert dirty.isVisible()
    assert ".hub" not in names(dirty)
    assert dirty.session.unsaved


def test_do_not_save_leaves_the_file_and_goes_on(dirty, saved):
    trigger(dirty, "File", "New")
    press(dialog(dirty), "Do not save")
    assert names(dirty) == []
    assert "hub" in read_document(saved).assembly


def test_save_saves_and_goes_on(dirty, saved):
    trigger(dirty, "File", "New")
    press(dialog(dirty), "Save")
    assert names(dirty) == []
    assert "hub" not in read_document(saved).assembly


def test_save_of_a_new_document_goes_on_only_once_a_place_was_chosen(window, tmp_path):
    window.add_shape("cylinder")
    trigger(window, "File", "New")
    press(dialog(window), "Save")
    place = dialog(window)
    assert isinstance(place, QFileDialog)
    assert names(window) == ["cylinder"]
    place.reject()
    assert names(window) == ["cylinder"]
    trigger(window, "File", "New")
    press(dialog(window), "Save")
    place = dialog(window)
    place.fileSelected.emit(str(tmp_path / "one.masswright"))
    place.reject()
    assert names(window) == []
    assert (tmp_path / "one.masswright").is_file()


@pytest.mark.parametrize(("answer", "closes"), [("Do not save", True), ("Save", True), ("Cancel", False)])
def test_closing_with_unsaved_work_asks_once(dirty, saved, answer, closes):
    dirty.close()
    assert dirty.isVisible()
    box = dialog(dirty)
    dirty.close()
    assert dialog(dirty) is box
    press(box, answer)
    assert dirty.isVisible() is not closes
    assert no_dialog(dirty)
    assert ("hub" in read_document(saved).assembly) is (answer != "Save")


def test_closing_without_changes_asks_nothing_and_remembers_how_the_window_stood(window):
    window.halves.setSizes([200, 500])
    window.ledger.tree.header().resizeSection(0, 321)
    window.close()
    assert not window.isVisible()
    from app.window.main import MainWindow

    again = MainWindow()
    assert again.ledger.tree.header().sectionSize(0) == 321
    again.close()
    again.deleteLater()


def test_text_still_being_typed_counts_as_unsaved_work_on_closing(window, saved):
    window.files.open_path(saved)
    window.session.select(frozenset({"hub"}))
    window.pages.setCurrentWidget(window.part)
    enter(field(window.part, "diameter"), "77", end=None)
    window.close()
    press(dialog(window), "Save")
    assert read_document(saved).assembly.node("hub").body.shape.values()["diameter"] == pytest.approx(0.077)


def damaged(path: Path, how: str) -> Path:
    if how == "no document":
        path.write_text("a letter")
    elif how == "damaged":
        save_document(Machine(dial()), path)
        path.write_bytes(path.read_bytes()[:-200])
    elif how == "from the future":
        save_document(Machine(dial()), path)
        with zipfile.ZipFile(path) as archive:
            text = archive.read("assembly.json").decode()
        import json

        data = json.loads(text)
        version = next(key for key in data if "version" in key or "schema" in key)
        data[version] = {**data[version], "major": 99} if isinstance(data[version], dict) else 99
        with zipfile.ZipFile(path, "w") as archive:
            archive.writestr("assembly.json", json.dumps(data))
    return path


@pytest.mark.parametrize("how", ["no document", "damaged", "from the future", "not there"])
def test_a_refused_file_leaves_the_open_document_and_says_one_sentence(filled, tmp_path, how):
    before, path = filled.session.assembly, filled.session.path
    filled.files.open_path(damaged(tmp_path / "bad.masswright", how))
    assert filled.session.assembly is before
    assert filled.session.path == path
    assert filled.notice.isVisible()
    assert "bad.masswright" in filled.notice.words.text()
    assert filled.notice.words.text().endswith(".")
    assert "\n" not in filled.notice.words.text()
    assert no_dialog(filled)
    filled.add_shape("cylinder")
    assert not filled.notice.isVisible()


def sample_menu(window):
    """The commands of the File menu that open a sample, by their words."""
    file = next(action for action in window.menuBar().actions() if action.text() == "&File").menu()
    samples = next(action for action in file.actions() if action.text() == "Open a sample").menu()
    return {action.text(): action for action in samples.actions()}


@pytest.mark.skipif(not all(sample.path.is_file() for sample in SAMPLES), reason="no samples in this installation")
@pytest.mark.parametrize("sample", SAMPLES, ids=[sample.words for sample in SAMPLES])
def test_a_sample_opens_sound_as_a_new_document_that_saving_does_not_overwrite(window, sample):
    offered = {action.text(): action for action in window.start.samples.actions()}
    assert list(offered) == list(sample_menu(window)) == ["Indexing dial", "Winding reel", "Tilting flap"]
    offered[sample.words].trigger()
    assert window.session.assembly == read_document(sample.path).assembly
    assert [finding.check.text for finding in window.session.findings if not finding.check.ok] == []
    assert window.session.path is None
    assert not window.session.unsaved


# --- dropping ---------------------------------------------------------------------------------------------------


def drop(window, *paths):
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(path)) for path in paths])
    left, none = Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier
    entering = QDragEnterEvent(window.rect().center(), Qt.DropAction.CopyAction, data, left, none)
    QApplication.sendEvent(window, entering)
    assert entering.isAccepted()
    QApplication.sendEvent(
        window, QDropEvent(QPointF(window.rect().center()), Qt.DropAction.CopyAction, data, left, none)
    )


def test_a_dropped_document_opens(window, saved):
    drop(window, saved)
    assert window.session.path == saved


def test_dropped_meshes_are_asked_about(window, tmp_path, qtbot):
    drop(window, write_stl(tmp_path / "a.stl", box_facets(1, 2, 3)), write_stl(tmp_path / "b.STL", box_facets(1, 2, 3)))
    box = dialog(window)
    qtbot.waitUntil(lambda: "a.stl" in box.file.text() and not box.bar.isVisible())
    box.reject()


def test_a_mixture_is_not_taken_at_all(window, saved, tmp_path):
    drop(window, saved, write_stl(tmp_path / "a.stl", box_facets(1, 2, 3)))
    assert names(window) == []
    assert "Nothing was taken" in window.notice.words.text()
    assert no_dialog(window)


def test_text_dropped_on_the_window_is_not_accepted(window):
    data = QMimeData()
    data.setText("plate")
    entering = QDragEnterEvent(
        window.rect().center(), Qt.DropAction.CopyAction, data, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier
    )
    QApplication.sendEvent(window, entering)
    assert not entering.isAccepted()


# --- autosave and recovery --------------------------------------------------------------------------------------


def test_the_work_is_written_within_ten_seconds_and_removed_once_it_is_saved(window, qtbot, tmp_path):
    timer = window.files.autosave._timer
    assert timer.interval() <= 8000  # and two seconds for the writing
    window.add_shape("cylinder")
    assert timer.isActive()
    left = timer.remainingTime()
    window.add_shape("sphere")
    assert timer.remainingTime() <= left
    window.files.autosave.write()
    path = autosave.folder() / f"{os.getpid()}.masswright"
    qtbot.waitUntil(path.is_file)
    qtbot.waitUntil(window.files.autosave._running.done)
    assert len(read_document(path).assembly.members) == 2
    window.files.save_under(tmp_path / "two.masswright")
    qtbot.waitUntil(lambda: not path.exists())


def test_autosave_writes_by_itself(window, qtbot):
    window.files.autosave._timer.setInterval(50)
    window.add_shape("cylinder")
    qtbot.waitUntil((autosave.folder() / f"{os.getpid()}.masswright").is_file)


@pytest.fixture
def left_by_a_crash():
    """Leave the work of a process that has ended without closing."""
    ended = subprocess.Popen([sys.executable, "-c", ""])
    ended.wait()
    path = autosave.folder() / f"{ended.pid}.masswright"
    save_document(Machine(dial()), path)
    return path


def offer(window, words):
    return next(button for button in window.notice._offers if button.text() == words)


def test_work_left_by_a_crash_is_offered_and_opened_as_unsaved(left_by_a_crash, window, qtbot):
    window.files.offer_recovery()
    assert window.notice.isVisible()
    window.add_shape("cylinder")
    window.undo()
    assert window.notice.isVisible()  # an edit does not take the offer away
    offer(window, "Open it").click()
    assert names(window)[:2] == ["top", ".plate"]
    assert window.session.unsaved
    assert not window.notice.isVisible()
    qtbot.waitUntil(lambda: not left_by_a_crash.exists())
    assert read_document(autosave.folder() / f"{os.getpid()}.masswright").assembly.node("plate")


def test_recovery_asks_before_it_takes_the_place_of_unsaved_work(left_by_a_crash, window):
    window.add_shape("cylinder")
    window.files.offer_recovery()
    offer(window, "Open it").click()
    press(dialog(window), "Cancel")
    assert names(window) == ["cylinder"]
    assert left_by_a_crash.exists()


def test_discarded_work_is_offered_no_more(left_by_a_crash, window):
    window.files.offer_recovery()
    offer(window, "Discard it").click()
    assert not left_by_a_crash.exists()
    assert autosave.left_behind() == []


def test_unreadable_work_is_left_where_it_is_and_said(left_by_a_crash, window):
    left_by_a_crash.write_bytes(b"torn")
    window.files.offer_recovery()
    offer(window, "Open it").click()
    assert left_by_a_crash.exists()
    assert "could not be read" in window.notice.words.text()
    assert names(window) == []


def test_work_that_cannot_be_kept_safe_is_said_once(window, qtbot):
    window.files.autosave._path = autosave.folder() / "no" / "such" / "folder.masswright"
    window.add_shape("cylinder")
    window.files.autosave.write()
    qtbot.waitUntil(window.notice.isVisible)
    assert "not kept safe" in window.notice.words.text()
