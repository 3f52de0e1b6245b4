"""Faults, keyboard, names for screen readers, themes and sizes: what every part of the window owes the user."""

from __future__ import annotations

import sys
import threading
from dataclasses import replace

import pytest
from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import (
    QAbstractButton,
    QAbstractItemView,
    QAbstractSpinBox,
    QApplication,
    QComboBox,
    QLineEdit,
    QMenu,
    QMessageBox,
    QTabBar,
    QWidget,
)
from window_driver import (
    box_facets,
    cell,
    clipboard,
    dial,
    dialog,
    enter,
    field,
    names,
    open_editor,
    trigger,
    write_stl,
)

from app.window.crash import CrashReporter, log_path
from app.window.style import Words
from core.drive import TurnsWith
from core.machine import Machine

pytestmark = pytest.mark.gui


# --- faults of the program --------------------------------------------------------------------------------------


@pytest.fixture
def reporter(window, monkeypatch):
    """Install the reporter for one test."""
    monkeypatch.setattr(sys, "excepthook", sys.excepthook)
    monkeypatch.setattr(threading, "excepthook", threading.excepthook)
    made = CrashReporter(window)
    made.install()
    return made


class Bell(QObject):
    rung = Signal()


def shown_box(qtbot):
    boxes = lambda: [each for each in QApplication.topLevelWidgets() if isinstance(each, QMessageBox) and each.isVisible()]  # noqa: E731
    qtbot.waitUntil(lambda: len(boxes()) == 1)
    return boxes()[0]


@pytest.mark.usefixtures("reporter")
def test_a_fault_in_a_slot_is_shown_logged_and_leaves_the_document(filled, qtbot):
    before = filled.session.assembly
    bell = Bell()
    bell.rung.connect(lambda: {}["no such key"])
    bell.rung.emit()
    bell.rung.emit()
    box = shown_box(qtbot)
    assert box.text().startswith("Something unexpected went wrong. The document is as it was before")
    assert "KeyError" in box.informativeText()
    assert str(log_path()) in box.informativeText()
    next(button for button in box.buttons() if button.text() == "Copy details").click()
    assert "Traceback" in clipboard()
    assert "KeyError: 'no such key'" in clipboard()
    box.close()
    assert log_path().read_text(encoding="utf-8").count("KeyError: 'no such key'") == 2
    assert str(log_path()).startswith(str(log_path().parents[2]))
    assert filled.session.assembly is before
    filled.add_shape("cylinder")
    assert "cylinder" in names(filled)[-1]


@pytest.mark.usefixtures("reporter")
def test_a_fault_in_a_thread_is_shown_in_the_window(qtbot):
    thread = threading.Thread(target=lambda: 1 / 0)
    thread.start()
    thread.join()
    box = shown_box(qtbot)
    assert "ZeroDivisionError" in box.informativeText()
    box.close()


@pytest.mark.usefixtures("reporter")
def test_a_fault_inside_an_edit_leaves_the_document_whole(filled, qtbot):
    before, past = filled.session.assembly, filled.session.history.past

    def change(_assembly):
        raise ZeroDivisionError

    bell = Bell()
    bell.rung.connect(lambda: filled.session.edit("broken", change))
    bell.rung.emit()
    shown_box(qtbot).close()
    assert filled.session.assembly is before
    assert filled.session.history.past == past


def test_calls_into_qt_do_not_use_up_none(qtbot):
    """PySide 6.12.0 below Python 3.12 drops a reference to None with every call that returns nothing, until it dies."""
    label = Words("x")
    qtbot.addWidget(label)
    before = sys.getrefcount(None)
    for _ in range(1000):
        label.setToolTip("x")
    assert sys.getrefcount(None) > before - 500


# --- software view ----------------------------------------------------------------------------------------------


@pytest.mark.usefixtures("dressed")
@pytest.mark.qt_log_ignore("^This plugin does not support")
def test_the_view_is_drawn_in_software_when_asked_for_and_says_so(qtbot, monkeypatch):
    monkeypatch.setenv("MASSWRIGHT_VIEW", "software")
    from app.window.main import MainWindow
    from app.window.view.soft_view import SoftView

    made = MainWindow()
    qtbot.addWidget(made, before_close_func=lambda each: setattr(each, "_given_up", True))
    made.session.take(Machine(dial()), None)
    made.show()
    qtbot.waitExposed(made)
    assert isinstance(made.view.canvas, SoftView)
    assert "software" in made.view.canvas.note.lower()
    picture = made.view.grab().toImage()
    seen = {picture.pixel(x, y) for x in range(0, picture.width(), 7) for y in range(0, picture.height(), 7)}
    assert len(seen) > 3


# --- names and keys ---------------------------------------------------------------------------------------------

CONTROLS = (QAbstractButton, QLineEdit, QComboBox, QAbstractItemView, QAbstractSpinBox)


def unnamed(root):
    """Return the controls that a screen reader could only call "edit" or "list"."""
    found = []
    for widget in root.findChildren(QWidget):
        inside_combo = any(isinstance(above, QComboBox) for above in ancestors(widget))
        if not isinstance(widget, CONTROLS) or inside_combo or not widget.isVisibleTo(root):
            continue
        if isinstance(widget.parent(), (QTabBar, QMenu)) or widget.objectName().startswith("qt_"):
            continue
        text = widget.text() if isinstance(widget, QAbstractButton) else ""
        if not (widget.accessibleName() or text):
            found.append(widget)
    return found


def ancestors(widget):
    above = widget.parent()
    while above is not None:
        yield above
        above = above.parent()


def test_every_control_has_a_name_that_can_be_read_out(filled):
    for key in ("plate", "pins", "rotor", "ring", "top"):
        filled.session.select(frozenset({key}))
        for page in (filled.part, filled.sheet, filled.checks):
            filled.pages.setCurrentWidget(page)
            assert unnamed(filled) == []
    filled.session.start_new()
    assert unnamed(filled) == []


def test_every_control_of_the_dialogs_has_a_name(filled, tmp_path, qtbot):
    for words, menu in (("Add known part…", "Part"), ("New axis…", "Axis"), ("Edit drive axis…", "Axis")):
        trigger(filled, menu, words)
        box = dialog(filled)
        assert unnamed(box) == []
        box.reject()
    filled.add_meshes([write_stl(tmp_path / "a.stl", box_facets(1, 2, 3))])
    box = dialog(filled)
    qtbot.waitUntil(lambda: not box.bar.isVisible())
    assert unnamed(box) == []
    box.reject()


def tab_round(start, steps=80):
    """Return the widgets that Tab goes through, until it comes back to one."""
    start.setFocus()
    seen = []
    for _ in range(steps):
        now = QApplication.focusWidget()
        if now is None:
            # A row of a list that was just made anew had it; QTest ends the process when handed no widget.
            start.setFocus()
            continue
        if now in seen:
            break
        seen.append(now)
        QTest.keyClick(now, Qt.Key.Key_Tab)
    return seen


def test_tab_reaches_every_control_of_the_window(filled):
    filled.session.select(frozenset({"pins"}))
    for page, wanted in (
        (filled.part, [field(filled.part, name) for name in ("Name", "diameter", "density", "position x", "quantity")]),
        (filled.sheet, [filled.sheet.of, filled.sheet.about, filled.sheet.products, filled.sheet.copy_all, filled.sheet.table]),
        (filled.checks, [filled.checks.list]),
    ):
        filled.pages.setCurrentWidget(page)
        reached = tab_round(filled.ledger.tree)
        common = [filled.ledger.tree, filled.view, filled.pages.tabBar(), filled.actions_.axes, filled.actions_.units,
                  filled.actions_.shape_button]
        missing = [each.accessibleName() or each for each in [*common, *wanted] if each not in reached]
        assert missing == []


def test_on_the_part_page_tab_goes_down_the_fields_in_the_order_they_stand(filled):
    filled.session.select(frozenset({"pins"}))
    filled.pages.setCurrentWidget(filled.part)
    page = filled.part.widget()
    reached = [each for each in tab_round(field(filled.part, "Name")) if page.isAncestorOf(each)]
    places = [each.mapTo(page, each.rect().topLeft()) for each in reached]
    order = [(round(place.y() / 12), place.x()) for place in places]
    assert len(reached) >= 12
    assert order == sorted(order)


def test_the_focus_is_seen_on_fields_buttons_and_cells(filled):
    filled.session.select(frozenset({"plate"}))
    filled.pages.setCurrentWidget(filled.part)
    line = field(filled.part, "diameter")
    for widget in (line, filled.actions_.units, filled.actions_.shape_button):
        filled.view.setFocus()
        QApplication.processEvents()
        without = widget.grab().toImage()
        widget.setFocus(Qt.FocusReason.TabFocusReason)
        QApplication.processEvents()
        if isinstance(widget, QLineEdit):
            widget.deselect()
        assert widget.grab().toImage() != without, widget.accessibleName()
    tree = filled.ledger.tree
    tree.setFocus()
    tree.setCurrentIndex(cell(filled, "plate", "mass"))
    with_focus = tree.viewport().grab().toImage()
    filled.view.setFocus()
    QApplication.processEvents()
    assert tree.viewport().grab().toImage() != with_focus


def test_escape_drops_what_is_typed_in_every_kind_of_field(filled):
    filled.session.select(frozenset({"plate"}))
    filled.pages.setCurrentWidget(filled.part)
    before = filled.session.assembly
    for name, old in (("Name", "plate"), ("diameter", "400"), ("position x", "0")):
        line = field(filled.part, name)
        enter(line, "77", end=Qt.Key.Key_Escape)
        assert line.text() == old
    editor = open_editor(filled, "plate", "name")
    QTest.keyClicks(editor, "disc")
    QTest.keyClick(editor, Qt.Key.Key_Escape)
    assert filled.session.assembly is before


def test_the_wheel_over_a_field_without_focus_changes_nothing(filled):
    from PySide6.QtCore import QPoint, QPointF
    from PySide6.QtGui import QWheelEvent

    box = filled.actions_.units
    filled.ledger.tree.setFocus()
    before = box.currentText()
    event = QWheelEvent(QPointF(5, 5), QPointF(5, 5), QPoint(), QPoint(0, -120), Qt.MouseButton.NoButton,
                        Qt.KeyboardModifier.NoModifier, Qt.ScrollPhase.NoScrollPhase, False)
    QApplication.sendEvent(box, event)
    assert box.currentText() == before
    assert not event.isAccepted()


def test_no_two_commands_share_a_key(filled):
    keys = [
        entry.shortcut().toString()
        for menu in filled.menuBar().actions()
        for entry in menu.menu().actions()
        if not entry.shortcut().isEmpty()
    ]
    assert len(keys) == len(set(keys))
    assert {"Ctrl+Z", "Ctrl+S", "Ctrl+J", "Ctrl+G", "Del"} <= set(keys)


# --- sizes, themes ----------------------------------------------------------------------------------------------


def clipped(root):
    """Return the labels and buttons whose words do not fit into them."""
    found = []
    for widget in root.findChildren(QWidget):
        if not widget.isVisible() or not isinstance(widget, (Words, QAbstractButton)) or not widget.text():
            continue
        if isinstance(widget, Words) and (widget.wordWrap() or widget in (root.totals, root.told)):
            if widget.wordWrap() and widget.heightForWidth(widget.width()) > widget.height() + 1:
                found.append(widget.text())
        elif widget.minimumSizeHint().width() > widget.width() + 1:
            found.append(widget.text())
    return found


@pytest.mark.parametrize("size", [(1280, 720), (1400, 880)])
def test_no_words_are_cut_off_at_the_usual_sizes(filled, size):
    filled.resize(*size)
    for key in ("plate", "pins", "rotor", "ring", "cover", "top"):
        filled.session.select(frozenset({key}))
        for page in (filled.part, filled.sheet, filled.checks):
            filled.pages.setCurrentWidget(page)
            QApplication.processEvents()
            assert clipped(filled) == []
            bar = filled.part.horizontalScrollBar()
            assert filled.part.widget().minimumSizeHint().width() <= filled.part.viewport().width(), bar
    assert filled.width() == size[0]


def contrast(one, other):
    def light(colour):
        parts = [value / 12.92 if value <= 0.04045 else ((value + 0.055) / 1.055) ** 2.4 for value in colour.getRgbF()[:3]]
        return 0.2126 * parts[0] + 0.7152 * parts[1] + 0.0722 * parts[2]

    high, low = sorted((light(one), light(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)


def test_all_text_has_the_contrast_of_wcag_in_both_themes():
    from PySide6.QtGui import QColor

    from app.window.style import DARK, LIGHT

    for theme in (LIGHT, DARK):
        for ground in (theme.ground, theme.raised, theme.selection):
            for role in ("text", "quiet", "failed", "estimate", "sound", "blue"):
                wanted = 4.5 if ground != theme.selection or role == "text" else 3.0
                ratio = contrast(QColor(getattr(theme, role)), QColor(ground))
                assert ratio >= wanted, (role, getattr(theme, role), ground, round(ratio, 2))


def test_words_icons_and_checks_follow_a_change_of_theme(filled, dressed, monkeypatch):
    from app.window import style

    light = filled.sheet.told.words.styleSheet()
    monkeypatch.setattr(style, "is_dark", lambda: True)
    style._repaint(dressed)
    QApplication.processEvents()
    try:
        assert filled.sheet.told.words.styleSheet() != light
        assert style.DARK.quiet in filled.sheet.told.words.styleSheet()
        item = filled.checks.list.topLevelItem(0)
        assert item.foreground(0).color().name() == style.DARK.failed
        assert QGuiApplication.palette().window().color().name() == style.DARK.raised
    finally:
        monkeypatch.undo()
        style._repaint(dressed)
    QApplication.processEvents()
    assert filled.sheet.told.words.styleSheet() == light


@pytest.mark.parametrize(("width", "height", "least"), [(1400, 880, 300), (1280, 720, 180)])
def test_no_page_takes_the_room_of_the_ledger(filled, width, height, least):
    filled.resize(width, height)
    for at in range(filled.pages.count()):
        filled.pages.setCurrentIndex(at)
        QApplication.processEvents()
        assert filled.ledger.height() >= least, filled.pages.tabText(at)


def test_the_foot_says_so_when_some_parts_do_not_turn_with_the_load(filled):
    assert "J about Spindle" in filled.totals.text()
    filled.session.edit_drive("Stand still", lambda before: replace(before, turning=(*before.turning, TurnsWith("hub", "fixed"))))
    assert "J of all parts about Spindle" in filled.totals.text()
