"""Hands for the window's tests: they type, click and read as a user does."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QItemSelectionModel, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QDialog, QLineEdit, QWidget

from app.window.ledger.columns import INDEX
from core.assembly import Assembly, DataSheet, Group, KnownAxial, Part, ShapeBody, walk
from core.material import ByDensity, NotSet, Weighed
from core.placement import Pose, Ring
from core.shapes import SHAPES

if TYPE_CHECKING:
    from pathlib import Path

    from numpy.typing import ArrayLike
    from PySide6.QtCore import QModelIndex

    from app.window.main import MainWindow

STEEL = 7850.0


def solid(key: str, shape: str, at: tuple[float, float, float] = (0, 0, 0), **dimensions: float) -> Part:
    """Return a steel part; dimensions in mm."""
    body = ShapeBody(SHAPES[shape].of({name: value / 1000 for name, value in dimensions.items()}))
    return Part(key, key, body, ByDensity(STEEL), Pose(at))


def dial() -> Assembly:
    """Return a plate with a hub and pins in one group, and a weighed ring, a rotor and an unknown cover in another."""
    plate = solid("plate", "cylinder", diameter=400, length=20)
    hub = solid("hub", "cylinder", (0, 0, -0.04), diameter=80, length=40)
    pins = solid("pins", "cylinder", (0.15, 0, 0.02), diameter=20, length=30)
    pins = Part("pins", "pins", pins.body, pins.driver, pins.pose, Ring(6))
    ring = Part("ring", "ring", ShapeBody(SHAPES["tube"].of({})), Weighed(1.2), Pose((0, 0, -0.1)))
    rotor = Part("rotor", "rotor", KnownAxial(1.9, (0, 0, 0), 0.0021, 0.08, "data sheet, page 3"), DataSheet())
    cover = Part("cover", "cover", ShapeBody(SHAPES["cylinder"].of({})), NotSet(), Pose((0, 0, 0.1)))
    return Assembly("dial", (Group("top", "top", (plate, hub, pins)), Group("below", "below", (ring, rotor, cover))))


def names(window: MainWindow) -> list[str]:
    """Return the names of all lines in the document's order, each behind as many dots as it lies deep."""
    return ["." * depth + node.name for node, depth in walk(window.session.assembly.members)]


def keys(window: MainWindow) -> list[str]:
    return [node.key for node, _ in walk(window.session.assembly.members)]


def cell(window: MainWindow, key: str, column: str) -> QModelIndex:
    return window.ledger.tree.lines.index_of(key, INDEX[column])


def text_of(window: MainWindow, key: str, column: str) -> str:
    return str(cell(window, key, column).data())


def choose_cells(window: MainWindow, *places: tuple[str, str]) -> None:
    """Select cells, the last one current, with the keyboard in the ledger."""
    tree = window.ledger.tree
    tree.setFocus()
    tree.selectionModel().clearSelection()
    for key, column in places:
        index = cell(window, key, column)
        tree.selectionModel().setCurrentIndex(index, QItemSelectionModel.SelectionFlag.Select)


def open_editor(window: MainWindow, key: str, column: str, how: Qt.Key = Qt.Key.Key_F2) -> QLineEdit:
    """Open a cell's editor by key, and return it."""
    choose_cells(window, (key, column))
    QTest.keyClick(window.ledger.tree, how)
    editor = QApplication.focusWidget()
    assert isinstance(editor, QLineEdit), f"no editor, but {editor}"
    return editor


def type_cell(window: MainWindow, key: str, column: str, text: str, end: Qt.Key = Qt.Key.Key_Return) -> QLineEdit:
    """Type a text over a cell's and end with a key; return the editor, which stays where it was refused."""
    editor = open_editor(window, key, column)
    QTest.keyClicks(editor, text)
    if editor.completer() is not None:
        put_away(window, editor)
    QTest.keyClick(editor, end)
    QApplication.processEvents()
    return editor


def put_away(window: MainWindow, editor: QLineEdit) -> None:
    """Close the list of proposals below an editor, and give the keyboard back to the window."""
    editor.completer().popup().hide()
    window.activateWindow()
    QApplication.processEvents()


def field(page: QWidget, name: str) -> QLineEdit:
    """Return a page's line to type in by the name a screen reader says."""
    found = [line for line in page.findChildren(QLineEdit) if line.accessibleName() == name and not line.isHidden()]
    assert found, f"no field {name!r} among {[line.accessibleName() for line in page.findChildren(QLineEdit)]}"
    return found[0]


def enter(line: QLineEdit, text: str, end: Qt.Key | None = Qt.Key.Key_Return) -> None:
    """Type a text over the one in a field; end with a key."""
    line.setFocus()
    line.selectAll()
    if text:
        QTest.keyClicks(line, text)
    else:
        QTest.keyClick(line, Qt.Key.Key_Delete)
    if end is not None:
        QTest.keyClick(line, end)


def choose(box: QWidget, words: str) -> None:
    """Choose an entry of a combo box as a user does, by its words."""
    at = box.findText(words)
    assert at >= 0, words
    box.setCurrentIndex(at)
    box.activated.emit(at)


def clipboard() -> str:
    return QGuiApplication.clipboard().text()


def pasted(mark: str = ".") -> list[list[float | str]]:
    """Return the cells as a spreadsheet takes them: tabs part cells, and what is written as a number is one."""

    def as_cell(text: str) -> float | str:
        swapped = text.replace(mark, ".") if mark != "." else text
        if mark != "." and "." in text:
            return text
        try:
            return float(swapped)
        except ValueError:
            return text

    return [[as_cell(text) for text in line.split("\t")] for line in clipboard().rstrip("\n").split("\n")]


def dialog(window: MainWindow) -> QDialog:
    """Return the dialog that is open over the window."""
    QApplication.processEvents()
    found = [each for each in window.findChildren(QDialog) if each.isVisible()]
    assert len(found) == 1, found
    return found[0]


def no_dialog(window: MainWindow) -> bool:
    QApplication.processEvents()
    return not any(each.isVisible() for each in window.findChildren(QDialog))


def trigger(window: MainWindow, menu: str, words: str) -> None:
    """Choose a command of a menu by its words."""
    action = next(action for action in window.menuBar().actions() if action.text().replace("&", "") == menu)
    found = [entry for entry in action.menu().actions() if entry.text().split("\t")[0] == words]
    assert len(found) == 1, (words, [entry.text() for entry in action.menu().actions()])
    assert found[0].isEnabled(), words
    found[0].trigger()


def box_facets(x: float, y: float, z: float) -> ArrayLike:
    """Return the twelve facets of a box with one corner in the origin, wound outwards."""
    corners = np.array([[i, j, k] for i in (0, 1) for j in (0, 1) for k in (0, 1)], float) * (x, y, z)
    sides = ((0, 1, 3, 2), (4, 6, 7, 5), (0, 4, 5, 1), (2, 3, 7, 6), (0, 2, 6, 4), (1, 5, 7, 3))
    return corners[np.array([way for a, b, c, d in sides for way in ((a, b, c), (a, c, d))])]


def write_stl(path: Path, facets: ArrayLike) -> Path:
    """Write facets as a binary STL."""
    triangles = np.asarray(facets)
    rows = np.zeros(len(triangles), dtype=[("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])
    rows["corners"] = triangles
    path.write_bytes(b"part".ljust(80) + np.uint32(len(triangles)).tobytes() + rows.tobytes())
    return path
