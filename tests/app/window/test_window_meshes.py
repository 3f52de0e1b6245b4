"""Adding meshes: read in a worker, with the unit chosen by seeing size and mass, one file after the other."""

from __future__ import annotations

import threading

import pytest
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QComboBox
from window_driver import box_facets, choose, dialog, enter, names, no_dialog, text_of, write_stl

from core.assembly import MeshBody
from core.errors import Cancelled
from core.material import ByMaterial, NotSet, Weighed
from core.mesh import MeshAsset

pytestmark = pytest.mark.gui
UNITS = ("mm", "cm", "m", "in", "ft")


@pytest.fixture
def files(tmp_path):
    """Write three boxes of 40 × 30 × 20, 10 × 10 × 10 and 1 × 2 × 3."""
    sides = {"block": (40, 30, 20), "cube": (10, 10, 10), "brick": (1, 2, 3)}
    return [write_stl(tmp_path / f"{name}.stl", box_facets(*side)) for name, side in sides.items()]


def start(window, qtbot, paths):
    window.add_meshes(paths)
    box = dialog(window)
    qtbot.waitUntil(lambda: not box.bar.isVisible())
    return box


def row(box, unit):
    return [box.table.item(UNITS.index(unit), column).text() for column in range(3)]


def test_size_and_mass_stand_in_every_unit_and_nothing_is_chosen_beforehand(window, qtbot, files):
    box = start(window, qtbot, files[:1])
    assert box.file.text() == "block.stl: 12 facets, binary STL"
    assert box.verdict.text().startswith("Verdict: closed.")
    enter(box.material, "7850 kg/m3", end=None)
    assert row(box, "mm") == ["mm", "40.00 × 30.00 × 20.00 mm", "0.1884 kg"]
    assert row(box, "in")[1] == "1016 × 762.0 × 508.0 mm"
    assert float(row(box, "in")[2].split()[0]) == pytest.approx(7850 * 0.0254**3 * 24000, rel=1e-3)
    assert not box.take_button.isEnabled()
    box.take()
    assert names(window) == []
    box.table.selectRow(UNITS.index("in"))
    assert box.take_button.isEnabled()
    box.take_button.click()
    assert no_dialog(window)
    part = window.session.assembly.node(next(iter(window.session.selected)))
    assert isinstance(part.body, MeshBody)
    assert part.body.metres_per_unit == 0.0254
    assert part.single.mass == pytest.approx(7850 * 0.0254**3 * 24000, rel=1e-7)
    assert window.session.history.undo_name == "Add block"
    window.undo()
    assert names(window) == []


def test_the_file_is_read_off_the_windows_thread(window, qtbot, files, monkeypatch):
    readers = []
    read = MeshAsset.read

    def noted(path, progress=None):
        readers.append(threading.current_thread())
        return read(path, progress)

    monkeypatch.setattr(MeshAsset, "read", noted)
    start(window, qtbot, files[:1]).reject()
    assert readers != []
    assert threading.main_thread() not in readers


def test_cancel_while_reading_stops_the_reader_and_adds_nothing(window, qtbot, files, monkeypatch):
    stopped = threading.Event()

    def endless(_path, progress):
        progress.begin(2)
        while not stopped.wait(0.01):
            try:
                progress.advance(0)
            except Cancelled:
                stopped.set()
                raise

    monkeypatch.setattr(MeshAsset, "read", endless)
    window.add_meshes(files)
    box = dialog(window)
    qtbot.wait(100)
    assert box.bar.isVisible()
    assert not box.take_button.isEnabled()
    box.take()
    assert box.isVisible()
    box.reject()
    assert stopped.is_set()
    assert names(window) == []
    assert no_dialog(window)


def test_several_files_are_gone_through_one_by_one_without_a_unit_taken_over(window, qtbot, files):
    box = start(window, qtbot, files)
    box.table.selectRow(0)
    enter(box.material, "S235", end=None)
    box.take_button.click()
    qtbot.waitUntil(lambda: "cube.stl:" in box.file.text())
    assert box.table.selectedItems() == []
    assert not box.take_button.isEnabled()
    assert names(window) == ["block"]
    box.table.selectRow(2)
    box.take_button.click()
    qtbot.waitUntil(lambda: "brick.stl:" in box.file.text())
    assert not box.all_alike.isVisible()
    box.table.selectRow(0)
    box.take_button.click()
    assert names(window) == ["block", "cube", "brick"]
    factors = [node.body.metres_per_unit for node in window.session.assembly.members]
    assert factors == [0.001, 1.0, 0.001]
    assert len(window.session.history.past) == 3


def test_the_others_follow_with_the_same_unit_and_material_and_a_bad_one_is_passed_over(window, qtbot, files, tmp_path):
    bad = tmp_path / "bad.stl"
    bad.write_bytes(b"no mesh at all")
    box = start(window, qtbot, [files[0], files[1], bad, files[2]])
    assert box.all_alike.text() == "Add the other 3 files with the same unit and material"
    box.table.selectRow(1)
    enter(box.material, "1,5 kg", end=None)
    box.all_alike.setChecked(True)
    box.take_button.click()
    qtbot.waitUntil(lambda: "bad.stl was not added." in box.file.text())
    assert names(window) == ["block", "cube"]
    assert "bad.stl" in box.wrong.text()
    assert box.take_button.text() == "Next file"
    box.take_button.click()
    qtbot.waitUntil(lambda: no_dialog(window))
    assert names(window) == ["block", "cube", "brick"]
    for node in window.session.assembly.members:
        assert node.driver == Weighed(1.5)
        assert node.body.metres_per_unit == 0.01


@pytest.mark.parametrize("content", [b"", b"no mesh at all", b"x" * 80 + b"\x02\0\0\0" + b"\0" * 50])
def test_a_file_that_is_no_mesh_is_refused_with_its_name_and_the_document_stays(filled, qtbot, tmp_path, content):
    before = filled.session.assembly
    path = tmp_path / "bad.stl"
    path.write_bytes(content)
    box = start(filled, qtbot, [path])
    assert "bad.stl" in box.wrong.text()
    assert box.take_button.text() == "Close"
    box.take_button.click()
    assert no_dialog(filled)
    assert filled.session.assembly is before


def test_a_bad_material_is_refused_in_place(window, qtbot, files):
    box = start(window, qtbot, files[:1])
    box.table.selectRow(0)
    enter(box.material, "cheese", end=None)
    box.take_button.click()
    assert 'read "cheese"' in box.wrong.text()
    assert names(window) == []
    enter(box.material, "", end=None)
    box.take_button.click()
    assert isinstance(window.session.assembly.members[0].driver, NotSet)
    assert text_of(window, window.session.assembly.members[0].key, "material") == "not set"


def test_return_without_a_unit_neither_adds_nor_leaves_the_dialog(window, qtbot, files):
    from PySide6.QtCore import Qt

    box = start(window, qtbot, files[:1])
    enter(box.material, "S235", end=None)
    QTest.keyClick(box.material, Qt.Key.Key_Return)
    assert box.isVisible()
    assert names(window) == []
    box.reject()


def test_an_open_mesh_is_marked_through_to_the_sheet_and_the_checks(window, qtbot, tmp_path):
    path = write_stl(tmp_path / "open.stl", box_facets(40, 30, 20)[2:])
    box = start(window, qtbot, [path])
    assert "open" in box.verdict.text()
    assert "estimated" in box.verdict.text()
    box.table.selectRow(0)
    enter(box.material, "7850 kg/m3", end=None)
    box.take_button.click()
    failed = [finding for finding in window.session.findings if not finding.check.ok]
    assert failed
    assert "holes closed flat" in window.sheet.told.text()
    window.copy_sheet()
    from window_driver import clipboard

    assert "holes closed flat" in clipboard()


def test_the_unit_is_changed_later_and_everything_follows_with_the_fifth_power(window, qtbot, files):
    box = start(window, qtbot, files[:1])
    box.table.selectRow(0)
    enter(box.material, "S235", end=None)
    box.take_button.click()
    key = next(iter(window.session.selected))
    before = window.session.ledger.total.inertia
    unit = next(each for each in window.part.findChildren(QComboBox) if each.accessibleName() == "Length unit of the mesh")
    choose(unit, "in")
    assert window.session.ledger.total.inertia == pytest.approx(25.4**5 * before, rel=1e-9)
    assert window.session.history.undo_name == "Unit of block: in"
    window.undo()
    assert window.session.ledger.total.inertia == pytest.approx(before, rel=1e-15)
    assert isinstance(window.session.assembly.node(key).driver, ByMaterial)


def test_a_programming_fault_in_the_worker_ends_the_reading_and_is_reported(window, qtbot, files, monkeypatch):
    def broken(_path, _progress):
        raise ZeroDivisionError

    monkeypatch.setattr(MeshAsset, "read", broken)
    with qtbot.captureExceptions() as caught:
        box = start(window, qtbot, files[:1])
    assert [kind for kind, *_rest in caught] == [ZeroDivisionError]
    assert "nothing of it was taken" in box.wrong.text()
    box.reject()
    assert names(window) == []
