"""The gallery of shapes in the window: it is opened, searched, typed into, kept or dropped with the keyboard."""

from __future__ import annotations

import time

import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QPushButton, QWidget
from window_driver import choose, enter, field, keys, names, trigger

from app.window.gallery.families import GROUPS, SECTIONS, SIZES, choices, size_named_for
from app.window.gallery.picture import ShapePicture, Wanted, image_of
from app.window.style import DARK, LIGHT
from core.material import ByMaterial, material
from core.shapes import SHAPES

pytestmark = pytest.mark.gui


def press(key: Qt.Key) -> None:
    QTest.keyClick(QApplication.focusWidget(), key)
    QApplication.processEvents()


def type_text(text: str) -> None:
    QTest.keyClicks(QApplication.focusWidget(), text)


def making(window, search: str) -> None:
    """Open the gallery and choose what a search finds first."""
    trigger(window, "Part", "Add shape…")
    type_text(search)
    press(Qt.Key.Key_Return)


def last(window):
    return window.session.assembly.node(keys(window)[-1])


def ghost(window):
    return window.view._ghost


def test_every_registered_shape_stands_in_a_group(window):
    trigger(window, "Part", "Add shape…")
    shown = [item.text() for item in window.gallery.chooser.pictures.shown()]
    assert sorted(shown) == sorted(kind.title for kind in SHAPES.values())
    groups = [choice.group for choice in choices()]
    assert groups == sorted(groups, key=GROUPS.index)
    assert len({choice.title for choice in choices()}) == len(SHAPES)


def test_the_gallery_opens_within_a_fifth_of_a_second(window):
    trigger(window, "Part", "Add shape…")
    window.gallery.close_gallery()
    start = time.perf_counter()
    trigger(window, "Part", "Add shape…")
    QApplication.processEvents()
    assert time.perf_counter() - start < 0.2


def test_every_picture_gets_painted(window, qtbot):
    trigger(window, "Part", "Add shape…")
    pictures = window.gallery.chooser.pictures
    qtbot.waitUntil(lambda: not pictures._painting.isActive(), timeout=20_000)
    for item in pictures.shown():
        image = item.icon().pixmap(112, 112).toImage()
        inked = sum(image.pixelColor(x, y).alpha() > 200 for x in range(0, 112, 3) for y in range(0, 112, 3))
        assert inked > 20, item.text()


@pytest.mark.parametrize("theme", [LIGHT, DARK], ids=["light", "dark"])
def test_a_picture_is_drawn_in_the_colours_of_the_theme(qapp, theme):
    image = image_of(Wanted(SHAPES["box"].of({}), 128, 128, 1.0, qapp.font().family(), theme))
    seen = {image.pixelColor(x, y).name() for x in range(128) for y in range(128) if image.pixelColor(x, y).alpha() == 255}
    assert theme.raised in seen
    assert theme.text in seen


def test_a_shape_is_found_made_and_kept_with_the_keyboard_alone(window):
    making(window, "cyl")
    assert QApplication.focusWidget() is field(window.gallery, "diameter")
    type_text("120")
    assert ghost(window).body.shape.values()["diameter"] == pytest.approx(0.12, rel=1e-15)
    assert names(window) == []
    press(Qt.Key.Key_Tab)
    type_text("2*25.4")
    press(Qt.Key.Key_Return)
    assert names(window) == ["cylinder"]
    assert last(window).body.shape.values() == pytest.approx({"diameter": 0.12, "length": 0.0508}, rel=1e-15)
    assert dict(last(window).typed) == {"dimension.length": "2*25.4"}
    assert window.session.history.undo_name == "Add cylinder"
    assert ghost(window) is None
    assert window.right.currentWidget() is window.pages
    trigger(window, "Edit", "Undo")
    assert names(window) == []


def test_escape_drops_it_even_while_a_number_is_being_typed(window):
    before = window.session.assembly
    making(window, "tube")
    type_text("95")
    assert ghost(window) is not None
    press(Qt.Key.Key_Escape)
    assert ghost(window) is None
    assert window.session.assembly is before
    assert window.right.currentWidget() is window.pages
    assert not window.gallery.maker.findChildren(ShapePicture) or window.gallery.maker._draft is None


def test_arrow_keys_go_through_the_pictures_and_return_chooses(window):
    trigger(window, "Part", "Add shape…")
    press(Qt.Key.Key_Down)
    first = window.gallery.chooser.pictures.currentItem().text()
    press(Qt.Key.Key_Right)
    second = window.gallery.chooser.pictures.currentItem().text()
    assert first != second
    press(Qt.Key.Key_Return)
    assert window.gallery.currentWidget() is window.gallery.maker
    press(Qt.Key.Key_Return)
    assert names(window) == [second]


def test_what_is_refused_is_said_in_place_and_not_kept(window):
    making(window, "tube")
    press(Qt.Key.Key_Tab)
    type_text("130")
    words = "tube: the bore 130 mm is wider than the tube's outer diameter 80 mm"
    assert window.gallery.maker.result.text().startswith(words)
    press(Qt.Key.Key_Return)
    assert names(window) == []
    assert QApplication.focusWidget() is field(window.gallery, "bore")
    enter(field(window.gallery, "bore"), "30")
    assert names(window) == ["tube"]


def test_the_mass_and_inertia_it_would_have_are_said_before_it_is_kept(window):
    making(window, "box")
    maker = window.gallery.maker
    assert maker.result.text() == "Its mass is not known yet: choose what says it, now or later."
    box = next(one for one in maker.findChildren(QWidget) if one.accessibleName() == "What says the mass")
    choose(box, "a material")
    line = field(window.gallery, "Material")
    line.setText("steel")
    line.editingFinished.emit()
    steel = material("steel")
    mass = 0.1 * 0.06 * 0.04 * steel.density
    inertia = mass * (0.1**2 + 0.06**2) / 12
    total = maker.result.text()
    assert f"{mass:.3g}"[:4] in total
    assert "J about Spindle" in total
    assert f"{inertia:.2g}"[2:] in total or "e" in f"{inertia:.2g}"
    maker.again.click()
    assert last(window).driver == ByMaterial(steel.name, steel.density)
    maker.keep.click()
    assert names(window) == ["box", "box 2"]
    making(window, "cylinder")
    window.gallery.maker.keep.click()
    assert last(window).driver == ByMaterial(steel.name, steel.density)


def test_keep_and_add_another_stays_at_the_fields(window):
    making(window, "sphere")
    window.gallery.maker.again.click()
    assert names(window) == ["sphere"]
    assert window.right.currentWidget() is window.gallery
    assert QApplication.focusWidget() is field(window.gallery, "diameter")
    press(Qt.Key.Key_Return)
    assert names(window) == ["sphere", "sphere 2"]


def test_a_standard_size_is_found_by_its_name_and_only_its_length_is_typed(window):
    making(window, "ipe 200")
    assert QApplication.focusWidget() is field(window.gallery, "length")
    type_text("1.25 m")
    press(Qt.Key.Key_Return)
    part = last(window)
    assert part.name == "IPE 200"
    assert window.session.history.undo_name == "Add IPE 200"
    assert part.body.shape.values()["length"] == pytest.approx(1.25, rel=1e-15)
    # EN 10365, from memory: an IPE 200 has 28.5 cm².
    assert part.extent / 1.25 == pytest.approx(28.5e-4, rel=2e-3)
    assert size_named_for(part.body.shape) == "IPE 200"


def test_a_section_takes_another_standard_size_in_one_step(window):
    making(window, "i section")
    press(Qt.Key.Key_Return)
    box = next(one for one in window.part.findChildren(QWidget) if one.accessibleName() == "Standard size")
    choose(box, "HE 200 B")
    assert last(window).body.shape.values()["width"] == pytest.approx(0.2)
    assert window.session.history.undo_name == "Size of I section: HE 200 B"


def test_searching_narrows_the_pictures_and_says_when_nothing_is_found(window):
    trigger(window, "Part", "Add shape…")
    type_text("shell")
    chooser = window.gallery.chooser
    assert all("shell" in item.text() for item in chooser.pictures.shown())
    enter(chooser.search, "HEB 1", None)
    assert {choice.group for choice in choices("he 200")} == {SIZES}
    enter(chooser.search, "no such thing", None)
    assert chooser.pictures.shown() == []
    assert chooser.nothing.isVisible()
    assert {choice.group for choice in choices("standard")} == {SECTIONS}


@pytest.mark.parametrize("where", ["toolbar", "start"])
def test_the_buttons_open_the_gallery(window, where):
    button = window.actions_.shape_button if where == "toolbar" else window.start.shape
    QTest.mouseClick(button, Qt.MouseButton.LeftButton)
    assert window.gallery.chooser.isVisible()
    assert QApplication.focusWidget() is window.gallery.chooser.search


def test_the_part_page_shows_where_a_dimension_is_measured_while_its_field_has_the_keyboard(filled):
    filled.session.select(frozenset({"plate"}))
    filled.pages.setCurrentWidget(filled.part)
    picture = filled.part.findChild(ShapePicture)
    assert picture.shape == filled.session.assembly.node("plate").body.shape
    field(filled.part, "length").setFocus()
    QApplication.processEvents()
    assert picture.focused == "length"
    field(filled.part, "Name").setFocus()
    QApplication.processEvents()
    assert picture.focused == ""
    enter(field(filled.part, "length"), "33")
    assert picture.shape.values()["length"] == pytest.approx(0.033)


def test_everything_in_the_gallery_has_a_name_to_be_said(window):
    making(window, "tube")
    for button in window.gallery.findChildren(QPushButton):
        assert button.text()
    picture = window.gallery.maker.findChild(ShapePicture)
    assert picture.accessibleName() == (
        "Picture of the tube with its dimensions: outer diameter ⌀D, bore ⌀d, length L"
    )


def test_a_length_beyond_any_drawing_is_typed_through_without_harm(window):
    making(window, "cylinder")
    for text in ("1e99", "1e-99"):
        QApplication.focusWidget().selectAll()
        type_text(text)
        QApplication.processEvents()
    press(Qt.Key.Key_Escape)
    assert names(window) == []


def test_the_view_fits_what_is_being_made_until_its_camera_is_moved(window):
    making(window, "cylinder")
    near = window.view.camera.distance
    type_text("5000")
    assert window.view.camera.distance > 10 * near
    press(Qt.Key.Key_Escape)
