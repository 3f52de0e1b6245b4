"""The outline of a profile is edited as a table and on a canvas; what bounds no area is refused in place."""

from __future__ import annotations

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtCore import QPoint, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QPushButton, QWidget
from window_driver import choose, clipboard, dialog, field, keys, names, trigger

from app.window.outline.draft import (
    fault_places,
    grid_step,
    lines_of,
    places,
    snapped,
    with_hole,
    with_point_behind,
    without_point,
)
from app.window.outline.section import OutlineSection
from app.window.pages.part_cuts import CutsSection
from core.assembly.names import NameEntry
from core.assembly.naming import with_entry
from core.errors import ShapeError
from core.quantity import UNITS
from core.shapes import Outline, OutlinePoint

pytestmark = pytest.mark.gui
SQUARE = ((OutlinePoint(0, 0), OutlinePoint(0.04, 0), OutlinePoint(0.04, 0.03), OutlinePoint(0, 0.03)),)


def section(page) -> OutlineSection:
    found = [each for each in page._sections if isinstance(each, OutlineSection)]
    assert len(found) == 1
    return found[0]


def outline(window) -> Outline:
    return window.session.assembly.node(keys(window)[-1]).body.shape.outline


def points(window, loop: int = 0) -> list[tuple[float, float]]:
    """Return the points of a loop in mm."""
    return [(round(point.x * 1e3, 9), round(point.y * 1e3, 9)) for point in outline(window).loops[loop]]


@pytest.fixture
def plate(window):
    """Show a plate of 80 × 50 mm with a hole, and no rounded corners."""
    window.resize(1280, 900)
    window.add_shape("extruded profile")
    paste(window, "0\t0\n80\t0\n80\t50\n0\t50\n\n50\t25\t0\t10\n30\t25\t0\t10")
    return window


def last_cut(window):
    return window.session.assembly.members[0].cuts[-1]


def paste(window, text: str) -> None:
    QGuiApplication.clipboard().setText(text)
    table = section(window.part).table
    table.setFocus()
    QTest.keyClick(table, Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)
    QApplication.processEvents()


def type_cell(window, row: int, column: int, text: str) -> None:
    """Type over a cell of the table and finish with Return."""
    table = section(window.part).table
    table.setFocus()
    table.setCurrentCell(row, column)
    QTest.keyClicks(table, text[0])
    editor = QApplication.focusWidget()
    QTest.keyClicks(editor, text[1:])
    QTest.keyClick(editor, Qt.Key.Key_Return)
    QApplication.processEvents()


def drag(window, place, to, modifier=Qt.KeyboardModifier.NoModifier) -> None:
    """Drag a point of the canvas to (x, y) mm."""
    canvas = section(window.part).canvas
    start = outline(window).loops[place[0]][place[1]]
    spots = [canvas.spot_of(start.x, start.y).toPoint(), canvas.spot_of(to[0] / 1e3, to[1] / 1e3).toPoint()]
    QTest.mousePress(canvas, Qt.MouseButton.LeftButton, modifier, spots[0])
    for share in (0.3, 0.7, 1.0):
        way = spots[1] - spots[0]
        QTest.mouseMove(canvas, spots[0] + QPoint(round(way.x() * share), round(way.y() * share)))
        QApplication.processEvents()
    QTest.mouseRelease(canvas, Qt.MouseButton.LeftButton, modifier, spots[1])
    QApplication.processEvents()


def test_a_table_is_pasted_from_a_spreadsheet_with_a_hole_behind_an_empty_row(plate):
    assert points(plate) == [(0, 0), (80, 0), (80, 50), (0, 50)]
    assert points(plate, 1) == [(50, 25), (30, 25)]
    # 80 · 50 less a circle of radius 10, in mm².
    assert float(outline(plate).plane.area) == pytest.approx((4000 - 100 * np.pi) * 1e-6, rel=1e-12)
    assert plate.session.history.undo_name == "Paste outline of extruded profile"
    trigger(plate, "Edit", "Undo")
    assert points(plate) == [(0, 0), (80, 0), (80, 50), (0, 50)]
    assert outline(plate).loops[0][0].rounding == pytest.approx(0.008)


def test_a_typed_cell_is_one_undo_step_with_the_name_of_the_point(plate):
    type_cell(plate, 2, 0, "3 in")
    assert points(plate)[2] == (76.2, 50)
    assert plate.session.history.undo_name == "x of point 3 of extruded profile"
    trigger(plate, "Edit", "Undo")
    assert points(plate)[2] == (80, 50)
    assert section(plate.part).table.item(2, 0).text() == "80"
    type_cell(plate, 1, 2, "5,5")
    assert outline(plate).loops[0][1].rounding == pytest.approx(0.0055, rel=1e-15)


def test_return_in_a_cell_goes_down_one_row(plate):
    type_cell(plate, 0, 1, "-5")
    assert section(plate.part).table.currentRow() == 1
    assert points(plate)[0] == (0, -5)


def test_text_that_is_no_length_is_refused_in_place(plate):
    before = plate.session.assembly
    type_cell(plate, 2, 1, "wide")
    block = section(plate.part)
    assert block.refusal.startswith("point 3, y: ")
    assert block._wrong.isVisibleTo(plate.part)
    assert block.table.item(2, 1).text() == "50"
    assert plate.session.assembly is before


def test_a_line_that_crosses_itself_is_named_and_marked_and_the_old_outline_counts(plate):
    before = plate.session.assembly
    block = section(plate.part)
    type_cell(plate, 2, 0, "-20")
    type_cell(plate, 3, 0, "60")
    assert "crosses or touches itself at" in block.refusal or "crosses or touches the outer line" in block.refusal
    assert len(block.canvas.faults) == 1
    assert plate.session.assembly is before
    # The old one comes back, and nothing is left to mend.
    button = next(each for each in block._mend.findChildren(QPushButton) if each.text() == "Back to the outline that counts")
    button.click()
    assert block.refusal == ""
    assert block.canvas.faults == ()
    assert block.table.item(2, 0).text() == "80"


def test_the_mark_stands_where_two_edges_cross(window):
    window.add_shape("extruded profile")
    paste(window, "0\t0\n40\t0\n0\t30\n40\t30")
    block = section(window.part)
    assert "crosses or touches itself at (20, 15) mm" in block.refusal
    window.add_shape("extruded profile")
    block = section(window.part)
    block._take(SQUARE, "Square")
    block._take((tuple(SQUARE[0][k] for k in (0, 1, 3, 2)),), "Bow")
    assert block.canvas.faults[0] == pytest.approx((0.02, 0.015))


def test_what_is_refused_is_mended_point_by_point_and_then_counts(plate):
    type_cell(plate, 2, 0, "-20")
    assert section(plate.part).refusal
    type_cell(plate, 2, 0, "90")
    assert section(plate.part).refusal == ""
    assert points(plate)[2] == (90, 50)


def test_a_point_is_dragged_and_snaps_to_the_grid(plate):
    block = section(plate.part)
    box = next(one for one in plate.part.findChildren(QWidget) if one.accessibleName() == "Step of the grid")
    choose(box, "grid: 5 mm")
    drag(plate, (0, 2), (71.3, 46.2))
    assert points(plate)[2] == (70, 45)
    assert plate.session.history.undo_name == "point 3 to 70 | 45 mm of extruded profile"
    assert block.table.currentRow() == 2
    trigger(plate, "Edit", "Undo")
    assert points(plate)[2] == (80, 50)
    drag(plate, (0, 2), (71.3, 46.2), Qt.KeyboardModifier.ShiftModifier)
    x, y = points(plate)[2]
    pixel = 1e3 / block.canvas._scale()
    assert (x, y) != (70, 45)
    assert abs(x - 71.3) <= pixel
    assert abs(y - 46.2) <= pixel


def test_arrow_keys_move_the_chosen_point_by_a_step_and_delete_takes_it_out(plate):
    paste(plate, "0\t0\n80\t0\n80\t50\n0\t50")
    block = section(plate.part)
    block.canvas.step = 0.001
    block.canvas.setFocus()
    block.table.choose((0, 1))
    block._choose((0, 1))
    for key in (Qt.Key.Key_Right, Qt.Key.Key_Right, Qt.Key.Key_Down):
        QTest.keyClick(block.canvas, key)
    assert points(plate)[1] == (82, -1)
    QTest.keyClick(block.canvas, Qt.Key.Key_Delete)
    assert len(points(plate)) == 3
    assert plate.session.history.undo_name == "Delete point 2 of extruded profile"
    assert len(names(plate)) == 1


def test_points_and_holes_are_put_in_and_taken_out_by_key_and_button(plate):
    block = section(plate.part)
    block.table.setFocus()
    block.table.setCurrentCell(0, 0)
    QTest.keyClick(block.table, Qt.Key.Key_Insert)
    assert points(plate)[1] == (40, 0)
    QTest.keyClick(block.table, Qt.Key.Key_Delete)
    assert len(points(plate)) == 4
    trigger(plate, "Edit", "Undo")
    trigger(plate, "Edit", "Undo")
    block.table.setCurrentCell(4, 0)
    QTest.keyClick(block.table, Qt.Key.Key_Delete)
    assert len(outline(plate).loops) == 1
    next(each for each in plate.part.findChildren(QPushButton) if each.text() == "Add hole").click()
    assert len(outline(plate).loops) == 2
    assert plate.session.history.undo_name == "New hole 1 of extruded profile"


def test_a_double_click_on_an_edge_puts_a_point_there(plate):
    canvas = section(plate.part).canvas
    canvas.step = 0.001
    QTest.mouseDClick(canvas, Qt.MouseButton.LeftButton, pos=canvas.spot_of(0.03, 0.0).toPoint())
    assert len(points(plate)) == 5
    assert points(plate)[1] == pytest.approx((30, 0), abs=1)


def test_an_ambiguous_decimal_mark_is_asked_in_place(plate):
    before = plate.session.assembly
    paste(plate, "1.500\t1.250\n9.000\t1.250\n9.000\t8.000")
    block = section(plate.part)
    assert "it cannot be told whether" in block.refusal
    assert plate.session.assembly is before
    button = next(each for each in block._marks.findChildren(QPushButton) if each.text() == '"." is the decimal mark')
    assert button.isVisibleTo(plate.part)
    button.click()
    assert points(plate) == [(1.5, 1.25), (9, 1.25), (9, 8)]
    assert block.refusal == ""
    paste(plate, "1.5\t1,5\n3\t0")
    assert "two decimal marks" in block.refusal
    assert not block._marks.isVisibleTo(plate.part)


def test_the_outline_is_copied_as_it_can_be_pasted(plate):
    table = section(plate.part).table
    table.setFocus()
    QTest.keyClick(table, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    assert clipboard().splitlines()[:2] == ["0\t0\t0\t0", "80\t0\t0\t0"]
    before = outline(plate)
    paste(plate, clipboard())
    assert outline(plate) == before


def test_a_turned_profile_has_its_own_columns_and_refuses_to_cross_its_axis(window):
    window.add_shape("turned profile")
    QApplication.processEvents()
    block = section(window.part)
    heads = [block.table.horizontalHeaderItem(column).text() for column in range(4)]
    assert heads == ["radius r\nmm", "height z\nmm", "rounding\nmm", "arc\nmm"]
    type_cell(window, 0, 0, "-3")
    assert "the outline crosses the axis" in block.refusal
    assert block.canvas.faults[0] == pytest.approx((-0.003, 0))


def test_a_profile_is_made_in_the_gallery_live_and_kept_as_one_step(window):
    trigger(window, "Part", "Add shape…")
    window.gallery.chooser.search.setText("extruded")
    QTest.keyClick(window.gallery.chooser.search, Qt.Key.Key_Return)
    block = section(window.gallery.maker)
    block._move((0, 1), (0.1, 0.0))
    assert window.view._ghost.body.shape.outline.loops[0][1].x == pytest.approx(0.1)
    block._move((0, 2), (-0.1, 0.02))
    assert block.refusal
    window.gallery.maker.keep.click()
    assert names(window) == []
    block._restore()
    window.gallery.maker.keep.click()
    assert names(window) == ["extruded profile"]
    assert outline(window).loops[0][1].x == pytest.approx(0.1)
    assert window.session.history.undo_name == "Add extruded profile"
    trigger(window, "Edit", "Undo")
    assert names(window) == []


def test_return_in_a_cell_of_the_gallery_does_not_keep_the_part_yet(window):
    trigger(window, "Part", "Add shape…")
    window.gallery.chooser.search.setText("extruded")
    QTest.keyClick(window.gallery.chooser.search, Qt.Key.Key_Return)
    table = section(window.gallery.maker).table
    table.setFocus()
    table.setCurrentCell(1, 0)
    QTest.keyClicks(table, "9")
    editor = QApplication.focusWidget()
    QTest.keyClicks(editor, "0")
    QTest.keyClick(editor, Qt.Key.Key_Return)
    QApplication.processEvents()
    assert names(window) == []
    assert window.view._ghost.body.shape.outline.loops[0][1].x == pytest.approx(0.09)


def test_the_length_is_still_edited_beside_the_outline(plate):
    line = field(plate.part, "length")
    line.setFocus()
    line.selectAll()
    QTest.keyClicks(line, "35")
    QTest.keyClick(line, Qt.Key.Key_Return)
    assert plate.session.assembly.node(keys(plate)[-1]).body.shape.values()["length"] == pytest.approx(0.035)
    assert points(plate) == [(0, 0), (80, 0), (80, 50), (0, 50)]


SVG = '<svg xmlns="http://www.w3.org/2000/svg"><path d="M0 0 H40 V30 H0 Z"/></svg>'


def test_a_drawing_is_imported_after_its_unit_was_asked(plate, tmp_path):
    pytest.importorskip("svgpathtools")
    file = tmp_path / "plate.svg"
    file.write_text(SVG, encoding="utf-8")
    block = section(plate.part)
    block.ask_unit(str(file))
    asking = dialog(plate)
    assert not asking._ok.isEnabled()
    choose(asking.unit, "in")
    asking._ok.click()
    QApplication.processEvents()
    # An SVG file's y points down.
    extent = np.ptp(outline(plate).bounds, axis=0)
    assert extent == pytest.approx((40 * 0.0254, 30 * 0.0254), rel=1e-9)
    assert plate.session.history.undo_name == "Import plate.svg as outline of extruded profile"


OPEN = '<svg xmlns="http://www.w3.org/2000/svg"><path d="M0 0 H400 V300"/></svg>'


def test_the_open_ends_of_a_drawing_are_shown_on_the_canvas(plate, tmp_path):
    pytest.importorskip("svgpathtools")
    before = plate.session.assembly
    file = tmp_path / "open.svg"
    file.write_text(OPEN, encoding="utf-8")
    block = section(plate.part)
    block.import_file(file, UNITS["mm"])
    assert block.refusal.startswith("open.svg: ")
    assert len(block.canvas.faults) == 2
    for fault in block.canvas.faults:
        assert block.canvas.rect().contains(block.canvas.spot_of(*fault).toPoint())
    assert plate.session.assembly is before


def test_a_file_that_is_no_drawing_is_refused_in_place(plate, tmp_path):
    before = plate.session.assembly
    file = tmp_path / "notes.txt"
    file.write_text("none")
    section(plate.part).import_file(file, UNITS["mm"])
    assert "an outline is read from a DXF or SVG file" in section(plate.part).refusal
    assert plate.session.assembly is before


@pytest.mark.parametrize(("size", "step"), [(0.1, 0.005), (0.02, 0.001), (1.0, 0.05), (0.0035, 0.0002)])
def test_the_grid_is_a_round_number_of_about_thirty_lines(size, step):
    assert grid_step(size) == pytest.approx(step, rel=1e-12)


def test_snapping_gives_the_shortest_number_on_the_grid():
    assert snapped(0.07031, 0.0001) == 0.0703
    assert snapped(-0.0149, 0.005) == -0.015
    assert snapped(0.0123, 0.0) == 0.0123


def test_points_go_in_and_out_of_a_draft():
    more = with_point_behind(SQUARE, (0, 3))
    assert more[0][4] == OutlinePoint(0, 0.015)
    assert without_point(more, (0, 4)) == SQUARE
    holed = with_hole(SQUARE)
    assert len(places(holed)) == 6
    assert Outline(holed).plane.area < Outline(SQUARE).plane.area
    assert without_point(holed, (1, 0)) == SQUARE


def test_a_draft_whose_radii_do_not_fit_is_drawn_straight():
    broken = (tuple(point._replace(rounding=0.5) for point in SQUARE[0]),)
    np.testing.assert_array_equal(lines_of(broken)[0], [point[:2] for point in SQUARE[0]])
    assert len(lines_of((tuple(point._replace(rounding=0.005) for point in SQUARE[0]),))[0]) > 8


def test_the_place_of_a_fault_is_read_from_the_sentence():
    with pytest.raises(ShapeError) as refusal:
        Outline((tuple(SQUARE[0][k] for k in (0, 1, 3, 2)),))
    assert fault_places(refusal.value)[0] == pytest.approx((0.02, 0.015))
    assert fault_places(ShapeError("an outline needs points")) == ()


def test_the_outline_of_a_cut_is_edited_like_that_of_a_part(window):
    window.add_shape("box")
    QApplication.processEvents()
    cuts = next(each for each in window.part._sections if isinstance(each, CutsSection))
    action = next(each for each in cuts.add.menu().actions() if each.text() == "extruded profile")
    action.trigger()
    before = last_cut(window).shape.outline
    block = section(window.part)
    point = before.loops[0][1]
    block._move((0, 1), (point.x * 1.1, point.y))
    assert last_cut(window).shape.outline.loops[0][1].x == pytest.approx(point.x * 1.1, rel=1e-12)
    assert window.session.history.undo_name.startswith("point 2 to ")
    trigger(window, "Edit", "Undo")
    assert last_cut(window).shape.outline == before


def test_a_point_typed_with_a_named_dimension_follows_it_and_says_so(plate):
    plate.session.edit("wide", lambda before: with_entry(before, NameEntry("wide", "80 mm")))
    for row in (1, 2):
        type_cell(plate, row, 0, "wide")
    table = section(plate.part).table
    assert table.item(2, 0).toolTip() == "= wide"
    table.setCurrentCell(0, 0)
    QTest.keyClick(table, Qt.Key.Key_Insert)
    plate.session.edit("wide", lambda before: with_entry(before, NameEntry("wide", "90 mm")))
    assert [x for x, _ in points(plate)] == [0, 40, 90, 90, 0]
    type_cell(plate, 2, 0, "85")
    plate.session.edit("wide", lambda before: with_entry(before, NameEntry("wide", "95 mm")))
    assert [x for x, _ in points(plate)] == [0, 40, 85, 95, 0]
