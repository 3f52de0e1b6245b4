"""Variants in the window: made in a list, chosen at the top, set on the Part page, side by side on the Sheet page."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QCheckBox
from window_driver import choose, dialog, pasted, text_of, trigger

from core.assembly.variants import totals_by_variant

if TYPE_CHECKING:
    from app.window.main import MainWindow


def make_variants(window: MainWindow, *names: str) -> None:
    trigger(window, "Edit", "Variants…")
    variants = dialog(window)
    for name in names:
        variants.name.setText(name)
        QTest.mouseClick(variants.add, Qt.MouseButton.LeftButton)
        assert variants.wrong.isHidden()
    variants.reject()


def box(window: MainWindow, name: str) -> QCheckBox:
    return next(each for each in window.part.findChildren(QCheckBox) if each.text() == name and not each.isHidden())


def put_into(window: MainWindow, key: str, *left_out: str) -> None:
    window.session.select(frozenset({key}))
    window.pages.setCurrentWidget(window.part)
    for name in left_out:
        box(window, name).click()


@pytest.fixture
def varied(filled: MainWindow) -> MainWindow:
    """The dial with the variants "empty" and "full"; the ring is not in "empty"."""
    make_variants(filled, "empty", "full")
    put_into(filled, "ring", "empty")
    return filled


def test_a_document_without_variants_shows_nothing_of_them(filled):
    filled.pages.setCurrentWidget(filled.sheet)
    filled.session.select(frozenset({"ring"}))
    assert not filled.actions_.variants.isVisible()
    assert not filled.sheet.variants.isVisible()
    assert not filled.part.findChildren(QCheckBox)


def test_a_line_is_put_into_some_variants_and_counts_only_there(varied):
    session = varied.session
    assert session.assembly.node("ring").only_in == ("full",)
    assert varied.actions_.variants.isVisible()
    whole = session.ledger.total.mass
    choose(varied.actions_.variants, "empty")
    assert session.assembly.variant == "empty"
    assert session.ledger.total.mass == pytest.approx(whole - 1.2)
    assert text_of(varied, "ring", "mass") == "–"
    choose(varied.actions_.variants, "full")
    assert session.ledger.total.mass == pytest.approx(whole)
    choose(varied.actions_.variants, "all lines")
    assert session.assembly.variant == ""
    session.undo()
    assert varied.actions_.variants.currentText() == "full"


def test_a_line_is_in_one_variant_at_least(varied):
    box(varied, "full").click()
    assert varied.session.assembly.node("ring").only_in == ("full",)
    assert box(varied, "full").isChecked()
    assert "a line is in one variant at least" in varied.notice.words.text()
    box(varied, "empty").click()
    assert varied.session.assembly.node("ring").only_in == ()


def test_the_totals_of_all_variants_stand_side_by_side_and_are_copied_with_their_headings(varied):
    varied.pages.setCurrentWidget(varied.sheet)
    table = varied.sheet.variants
    assert table.isVisible()
    assert [table.item(row, 0).text() for row in range(table.rowCount())] == ["empty", "full"]
    varied.activateWindow()
    table.setFocus()
    table.selectRow(0)
    QApplication.processEvents()
    trigger(varied, "Edit", "Copy")
    rows = pasted()
    assert rows[0] == ["Variant", "Mass kg", "x mm", "y mm", "z mm", "J about Spindle kg·m²"]
    for row, total in zip(rows[1:], totals_by_variant(varied.session.assembly), strict=True):
        assert row[0] == total.variant
        values = [float(total.moments.mass), *(1e3 * total.moments.centre), total.inertia]
        assert row[1:] == pytest.approx(values, rel=1e-12, abs=1e-12)


def test_the_sheet_says_which_variant_its_values_are_of(varied):
    varied.pages.setCurrentWidget(varied.sheet)
    choose(varied.actions_.variants, "empty")
    assert 'Values of the variant "empty"' in varied.sheet.told.text()
    varied.session.select(frozenset({"ring"}))
    varied.sheet.of.setCurrentIndex(varied.sheet.of.findData("selected"))
    varied.sheet.refresh()
    assert varied.sheet.sheet.title == "ring"
    assert all(entry.si is None for entry in varied.sheet.sheet.entries)


def test_variants_are_renamed_and_deleted_in_their_list_or_the_list_says_why_not(varied):
    trigger(varied, "Edit", "Variants…")
    variants = dialog(varied)
    variants.list.item(1).setText("loaded")
    assert varied.session.assembly.node("ring").only_in == ("loaded",)
    variants.list.item(1).setText("empty")
    assert "two variants have the same name" in variants.wrong.text()
    assert variants.list.item(1).text() == "loaded"
    variants.list.setCurrentRow(1)
    QTest.mouseClick(variants.delete, Qt.MouseButton.LeftButton)
    assert 'ring: lines are in the variant "loaded" only' in variants.wrong.text()
    variants.list.setCurrentRow(0)
    QTest.mouseClick(variants.delete, Qt.MouseButton.LeftButton)
    assert varied.session.assembly.variants == ("loaded",)
    assert variants.wrong.isHidden()
