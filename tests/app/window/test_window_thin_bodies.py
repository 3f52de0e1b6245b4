"""The Part page of sheets, rods and point masses: what can say their mass there, and what follows from it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtWidgets import QComboBox, QLabel
from window_driver import choose, enter, field

from app.window.pages.part_mass import DRIVERS
from core.assembly import Assembly, Part, ShapeBody
from core.machine import Machine
from core.material import NotSet, PerArea, PerLength, Weighed
from core.shapes import SHAPES

if TYPE_CHECKING:
    from app.window.main import MainWindow


def show(window: MainWindow, shape: str, driver: object = None) -> None:
    part = Part("k", "cover", ShapeBody(SHAPES[shape].of({})), driver or NotSet())
    window.session.take(Machine(Assembly("a", (part,))), None)
    window.session.select(frozenset({"k"}))
    window.pages.setCurrentWidget(window.part)


def choice(window: MainWindow) -> QComboBox:
    boxes = window.part.findChildren(QComboBox)
    return next(box for box in boxes if box.accessibleName() == "What says the mass")


@pytest.mark.parametrize("measure", sorted(DRIVERS))
def test_the_part_page_offers_what_can_say_the_mass_of_the_body(window: MainWindow, measure: str):
    show(window, next(key for key in sorted(SHAPES) if SHAPES[key].measure == measure))
    box = choice(window)
    assert [box.itemText(at) for at in range(box.count())] == [words for words, _ in DRIVERS[measure]]


@pytest.mark.parametrize(
    ("shape", "words", "text", "driver"),
    [
        ("thin disc", "a mass per area", "12 kg/m²", PerArea(12.0)),
        ("thin rod", "a mass per length", "800 g/m", PerLength(0.8)),
        ("point mass", "a weighed mass", "1,2", Weighed(1.2)),
    ],
)
def test_a_thin_body_is_given_its_mass_on_the_part_page(window, shape, words, text, driver):
    show(window, shape)
    choose(choice(window), words)
    name = "weighed mass of one" if isinstance(driver, Weighed) else words.removeprefix("a ")
    enter(field(window.part, name), text)
    assert window.session.assembly.node("k").driver == driver


def test_the_page_says_what_follows_from_a_mass_per_area(window):
    show(window, "thin sheet", PerArea(12.0))
    said = [label.text() for label in window.part.findChildren(QLabel)]
    (follows,) = [words for words in said if words.startswith("One piece")]
    assert follows == "One piece: area 60000 mm², mass 0.7200 kg, mass per area 12.00 kg/m²"


def test_changing_to_a_weighed_mass_and_back_keeps_the_mass_of_a_sheet(window):
    show(window, "thin sheet", PerArea(12.0))
    choose(choice(window), "a weighed mass")
    assert window.session.assembly.node("k").driver.mass == pytest.approx(0.72, rel=1e-14)
    choose(choice(window), "a mass per area")
    assert window.session.assembly.node("k").driver.mass_per_area == pytest.approx(12.0, rel=1e-14)
