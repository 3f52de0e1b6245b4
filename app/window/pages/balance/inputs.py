"""What balance is judged by: the rotor with its speed and grade, its bearings, and the planes for corrections."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QHBoxLayout, QPushButton, QToolButton, QWidget

from app.window.fields import NARROW_WIDTH, ChoiceField, Form, QuantityField
from app.window.pages.drive_section import DriveSection, shafts_of
from app.window.style import GRID, Words
from core.drive import GRADES
from core.drive.entering import (
    usual_bearings,
    usual_plane,
    with_bearings,
    with_correcting,
    with_rotor_shaft,
)
from core.drive.fields import with_number
from core.drive.items import with_item, without_item
from core.quantity import Kind, compact

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.drive import BalanceSettings, DriveSettings
    from core.drive.balance import By

BALANCE = "balance"
PLANES = "balance.planes"
MOST_PLANES = 2
OWN = "own"
LABEL_WIDTH = 112
BY: list[tuple[str, object]] = [("adding masses", "adding"), ("removing material", "removing")]


class BalanceSection(DriveSection):
    """Fields of the settings of balance; choices are refused below themselves."""

    def __init__(self, session: Session, form: Form, root: str = BALANCE, name: str = BALANCE) -> None:
        super().__init__(session, form, root, name)
        self._refusals: list[Words] = []

    @property
    def wanted(self) -> BalanceSettings:
        """The settings as they are now."""
        return self.session.drive.balance

    def forget_refusals(self) -> None:
        """Say no longer what was refused."""
        for words in self._refusals:
            words.hide()

    def refusal(self) -> Words:
        """Add the place for the sentence that refuses a choice or a button."""
        words = self.form.say("", "failed")
        words.hide()
        self._refusals.append(words)
        return words

    def attempt_in_place(self, words: Words, name: str, change: Callable[[DriveSettings], DriveSettings]) -> None:
        """Try an edit; a refusal is said in these words, and the fields show what counts."""
        refused = self.attempt(name, change)
        if refused:
            self.show()
        words.setText(refused)
        words.setVisible(bool(refused))


class RotorSection(BalanceSection):
    """Which shaft is the rotor, how fast it runs, and the grade wanted."""

    def __init__(self, session: Session, form: Form) -> None:
        super().__init__(session, form)
        form.heading("Rotor")
        self.shaft = ChoiceField("Shaft of the rotor", [])
        self.shaft.setSizeAdjustPolicy(ChoiceField.SizeAdjustPolicy.AdjustToContents)
        form.add("turns with", self.shaft, "The shaft whose parts are the rotor.")
        self.shaft.chosen.connect(self._choose_shaft)
        self.speed = self.open_number(
            "service speed", "speed", "not known", "The speed that the rotor runs at; grades and forces need it."
        )
        self.grade = ChoiceField("Balance quality grade wanted", [
            ("none", None), *((f"G {grade:g}", grade) for grade in GRADES), ("own number", OWN),
        ])
        form.add(
            "grade wanted", self.grade,
            "Balance quality grade of ISO 21940-11: the speed e·ω that the centre of mass may have, in mm/s.",
        )
        self._refused = self.refusal()
        self.own = self.open_number("own grade, mm/s", "grade", "none", "A grade of your own, e·ω in mm/s.")
        self.grade.chosen.connect(self._choose_grade)
        self._own_wanted = False

    def show(self) -> None:
        """Show the rotor, and the shafts that it could turn with."""
        super().show()
        train = self.session.drive.train
        self.shaft.clear()
        for words, name in shafts_of(self.session):
            self.shaft.addItem(words, name)
        self.shaft.setCurrentIndex(train.index(self.wanted.shaft))
        listed = self.wanted.grade in (None, *GRADES) and not self._own_wanted
        self.grade.set_value(self.wanted.grade if listed else OWN)
        self.form.show_row(self.own, wanted=not listed)

    def forget_refusals(self) -> None:
        """Say no longer what was refused; a grade of the list is shown as that."""
        super().forget_refusals()
        self._own_wanted = False

    def _choose_shaft(self, name: object) -> None:
        words = f"Rotor: {self.shaft.currentText()}"
        self.attempt_in_place(self._refused, words, lambda settings: with_rotor_shaft(settings, str(name)))

    def _choose_grade(self, chosen: object) -> None:
        self._own_wanted = chosen == OWN
        if chosen == OWN:
            self.show()
            self.own.line.setFocus()
            return
        grade = chosen if isinstance(chosen, float) else None
        words = "No balance grade wanted" if grade is None else f"Balance grade G {compact(grade)}"
        self.attempt_in_place(self._refused, words, lambda settings: with_number(settings, self.path("grade"), grade))


class BearingsSection(BalanceSection):
    """Where the two bearings are, or that nobody said."""

    def __init__(self, session: Session, form: Form) -> None:
        super().__init__(session, form)
        form.heading("Bearings")
        tip = "Station along the axis, from its point; bearings and planes may lie anywhere along it."
        self.first = self.number("bearing 1 at", "bearings.0", tip)
        self.second = self.number("bearing 2 at", "bearings.1", tip)
        self.give = QPushButton("Give two bearings")
        self.take = QPushButton("Take them away")
        form.add_row(in_a_row(self.give, self.take))
        self._refused = self.refusal()
        self.give.clicked.connect(lambda: self._change("Two bearings", usual_bearings))
        self.take.clicked.connect(lambda: self._change("No bearings", lambda *_: None))

    def show(self) -> None:
        """Show the stations."""
        super().show()
        there = self.wanted.bearings is not None
        for field in (self.first, self.second):
            self.form.show_row(field, wanted=there)
        self.give.setVisible(not there)
        self.take.setVisible(there)

    def _change(self, words: str, bearings: Callable[..., tuple[float, float] | None]) -> None:
        assembly = self.session.assembly
        self.attempt_in_place(
            self._refused, words, lambda settings: with_bearings(settings, bearings(assembly, settings))
        )


class PlaneSection(BalanceSection):
    """One correction plane."""

    def __init__(self, session: Session, form: Form, at: int) -> None:
        super().__init__(session, form, f"{PLANES}.{at}", f"correction plane {at + 1}")
        self._at = at
        name = f"plane {at + 1}"
        self.station = QuantityField(session, f"{name}, station", Kind.LENGTH, width=NARROW_WIDTH)
        self.bind(self.station, "station", "station")
        self.take = QToolButton()
        self.take.setObjectName("way")
        self.take.setText("×")
        self.take.setAccessibleName(f"Take correction plane {at + 1} away")
        self.take.setToolTip(f"Takes correction plane {at + 1} away.")
        tip = "Along the axis, from its point."
        form.add(f"{name}, station", in_a_row(self.station, self.take), tip)
        self.radius = QuantityField(session, f"{name}, radius", Kind.LENGTH, width=NARROW_WIDTH)
        self.bind(self.radius, "radius", "radius")
        form.add(f"{name}, radius", self.radius, "From the axis: of a mass's centre, of a hole's mouth.")
        self._refused = self.refusal()
        self.take.clicked.connect(self._take_away)

    def show(self) -> None:
        """Show the plane, where there is one."""
        super().show()
        self.form.setVisible(len(self.wanted.planes) > self._at)

    def _take_away(self) -> None:
        words = f"Take correction plane {self._at + 1} away"
        self.attempt_in_place(self._refused, words, lambda settings: without_item(settings, PLANES, self._at))


class PlanesSection(BalanceSection):
    """How a correction is made, and a way to another plane."""

    def __init__(self, session: Session, form: Form) -> None:
        super().__init__(session, form)
        self.more = QPushButton("Add a correction plane")
        self._row = in_a_row(self.more)
        form.add_row(self._row)
        self._refused = self.refusal()
        self.by = ChoiceField("How the unbalance is corrected", BY)
        form.add("correct by", self.by, "Masses go on the light side; material comes off the heavy side.")
        self.more.clicked.connect(self._add)
        self.by.chosen.connect(self._choose)

    def show(self) -> None:
        """Show how, and whether another plane can be."""
        super().show()
        self.form.show_row(self._row, wanted=len(self.wanted.planes) < MOST_PLANES)
        self.by.set_value(self.wanted.by)
        self.form.show_row(self.by, wanted=bool(self.wanted.planes))

    def _add(self) -> None:
        assembly = self.session.assembly
        self.attempt_in_place(
            self._refused, "Add a correction plane",
            lambda settings: with_item(settings, PLANES, usual_plane(assembly, settings)),
        )

    def _choose(self, by: object) -> None:
        chosen: By = "removing" if by == "removing" else "adding"
        words = f"Correct by {chosen}"
        self.attempt_in_place(self._refused, words, lambda settings: with_correcting(settings, chosen))


def in_a_row(*widgets: QWidget) -> QWidget:
    """Return widgets side by side, as one."""
    holder = QWidget()
    row = QHBoxLayout(holder)
    row.setContentsMargins(0, 0, 0, 0)
    row.setSpacing(GRID)
    for widget in widgets:
        row.addWidget(widget)
    row.addStretch(1)
    return holder
