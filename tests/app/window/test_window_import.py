"""What the add-mesh dialog finds out for its user, and the file that changes behind a part."""

from __future__ import annotations

import pytest
from PySide6.QtWidgets import QPushButton
from window_driver import box_facets, dial, dialog, enter, names, write_stl

from core.assembly import Group, MeshBody
from core.document import save_document
from core.machine import Machine

pytestmark = pytest.mark.gui
MM, INCH = 1e-3, 0.0254


def start(window, qtbot, *paths):
    window.add_meshes(list(paths))
    box = dialog(window)
    qtbot.waitUntil(lambda: not box.bar.isVisible())
    return box


def only_part(window):
    return window.session.assembly.table.parts[0]


def obj_of(*boxes) -> str:
    lines, first = [], 1
    for number, facets in enumerate(boxes):
        lines.append(f"o body{number}")
        lines += [f"v {x} {y} {z}" for x, y, z in facets.reshape(-1, 3)]
        lines += [f"f {at} {at + 1} {at + 2}" for at in range(first, first + 3 * len(facets), 3)]
        first += 3 * len(facets)
    return "\n".join(lines)


def test_a_known_dimension_picks_the_unit(window, qtbot, tmp_path):
    box = start(window, qtbot, write_stl(tmp_path / "block.stl", box_facets(4, 3, 2)))
    enter(box.units.length.line, "102 mm")
    assert box.units.factor == INCH
    enter(box.units.length.line, "17 mm")
    assert box.units.factor == INCH
    assert "No side of it is that long" in box.units.length.wrong.text()


def test_a_known_mass_picks_the_unit_once_the_material_is_set(window, qtbot, tmp_path):
    box = start(window, qtbot, write_stl(tmp_path / "block.stl", box_facets(40, 30, 20)))
    enter(box.units.mass.line, "0.2 kg")
    assert box.units.factor is None
    assert "Set a material or a density" in box.units.mass.wrong.text()
    enter(box.material, "7850 kg/m3", end=None)
    enter(box.units.mass.line, "0.19 kg")
    assert box.units.factor == MM


def test_a_file_with_two_bodies_becomes_a_group(window, qtbot, tmp_path):
    path = tmp_path / "pair.obj"
    path.write_text(obj_of(box_facets(40, 30, 20), box_facets(10, 10, 10) + 100))
    box = start(window, qtbot, path)
    assert "in 2 bodies, which become a group" in box.file.text()
    box.table.selectRow(0)
    box.take_button.click()
    assert len(names(window)) == 3
    assert isinstance(window.session.assembly.members[0], Group)


def test_a_mesh_can_be_put_with_its_centre_of_mass_on_the_drive_axis(window, qtbot, tmp_path):
    box = start(window, qtbot, write_stl(tmp_path / "block.stl", box_facets(40, 30, 20)))
    enter(box.material, "7850 kg/m3", end=None)
    box.table.selectRow(0)
    box.standing.set_value("mass")
    box.take_button.click()
    assert window.session.ledger.total.transfer == pytest.approx(0.0, abs=1e-12)
    assert only_part(window).pose.position == pytest.approx((-0.02, -0.015, 0.0))


def test_the_restored_curvature_counts_where_that_was_chosen(window, qtbot, tmp_path):
    box = start(window, qtbot, write_stl(tmp_path / "block.stl", box_facets(40, 30, 20)))
    box.table.selectRow(0)
    box.counts.set_value("restored")
    box.take_button.click()
    assert only_part(window).body.counts == "restored"


def test_a_file_that_changed_is_offered_again_with_the_differences(window, qtbot, tmp_path):
    path = write_stl(tmp_path / "block.stl", box_facets(40, 30, 20))
    box = start(window, qtbot, path)
    enter(box.material, "7850 kg/m3", end=None)
    box.table.selectRow(0)
    box.take_button.click()
    before = window.session.ledger.total.mass
    watcher = window.changed_files
    watcher.look()
    qtbot.waitUntil(lambda: not watcher.busy)
    assert not window.notice.isVisible()
    write_stl(path, box_facets(44, 30, 20))
    watcher.look()
    qtbot.waitUntil(lambda: not watcher.busy)
    assert window.notice.words.text().startswith("The file of block has changed: volume 10.0 %")
    next(each for each in window.notice.findChildren(QPushButton) if each.text() == "Take it anew").click()
    assert window.session.ledger.total.mass == pytest.approx(1.1 * before, rel=1e-6)
    assert window.session.history.undo_name == "Take block anew"
    window.undo()
    assert window.session.ledger.total.mass == pytest.approx(before, rel=1e-12)


def test_a_part_whose_file_is_gone_is_left_alone(window, qtbot, tmp_path):
    path = write_stl(tmp_path / "block.stl", box_facets(40, 30, 20))
    box = start(window, qtbot, path)
    box.table.selectRow(0)
    box.take_button.click()
    path.unlink()
    window.changed_files.look()
    qtbot.waitUntil(lambda: not window.changed_files.busy)
    assert not window.notice.isVisible()
    assert isinstance(only_part(window).body, MeshBody)


def test_a_large_document_is_opened_off_the_windows_thread(window, qtbot, tmp_path, monkeypatch):
    monkeypatch.setattr("app.window.files.OPENED_AT_ONCE", 100)
    path = tmp_path / "dial.masswright"
    save_document(Machine(dial()), path)
    window.files.open_path(path)
    assert names(window) == []
    assert window.notice.words.text() == "Opening dial.masswright …"
    qtbot.waitUntil(lambda: names(window) != [])
    assert window.session.path == path
    assert not window.session.unsaved
    assert not window.notice.isVisible()


def test_a_large_document_that_cannot_be_read_is_refused_in_one_sentence(window, qtbot, tmp_path, monkeypatch):
    monkeypatch.setattr("app.window.files.OPENED_AT_ONCE", 100)
    path = tmp_path / "broken.masswright"
    path.write_bytes(b"x" * 1000)
    window.files.open_path(path)
    qtbot.waitUntil(lambda: "broken.masswright" in window.notice.words.text() and "Opening" not in window.notice.words.text())
    assert names(window) == []
