"""The part "Stops": how fast the load turns when the drive fails or is cut off, and what brakes it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.window.pages.drive_section import shafts_of
from app.window.pages.torque.entries import Entry
from app.window.pages.torque.entries_panel import Addition, EntriesPanel
from app.window.pages.torque.entry_section import EntrySection
from core.drive.first_stop import first_stop
from core.quantity import Kind, compact

if TYPE_CHECKING:
    from app.window.fields import Form
    from app.window.pages.drive_section import DriveSection
    from app.window.session import Session
    from core.drive import StopCase

STOPS = "stops"
BRAKES = "train's brakes"
NOTHING = "No stop yet: add one to see how long and how far the load runs on when a brake stops it."


class StopSection(EntrySection):
    """A stop to work out."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.number("speed", "speed", "Of the load when braking begins; negative backwards.")
        self.open_number("braking torque", "torque", BRAKES, "At the braked shaft; empty: all brakes of the train.")
        self.shaft_choice("The shaft that is braked.")
        self.number("angle", "angle", "Of the load when braking begins.")


class StopsPanel(EntriesPanel):
    """The stops to work out."""

    def __init__(self, session: Session) -> None:
        super().__init__(session, "Stops", ("Stop", "From", "By", "On shaft"))
        for column, width in enumerate((80, 110, 110)):
            self.table.setColumnWidth(column, width)
        self.table.stretch(3)

    def additions(self) -> list[Addition]:
        """Return a stop that comes about."""
        return [Addition("Stop", STOPS, lambda: first_stop(self.session.machine.at_once.drive_answer))]

    def entries(self) -> list[Entry]:
        """Return the stops."""
        return [
            Entry(f"{STOPS}.{at}", STOPS, f"stop {at + 1}", case, self._cells(at, case))
            for at, case in enumerate(self.session.drive.stops)
        ]

    def sections(self, form: Form, entry: Entry) -> list[DriveSection]:
        """Return the fields of a stop."""
        return [StopSection(self.session, form, entry.root, entry.name)]

    def fields_depend_on(self, entry: Entry) -> object:
        """Return the shafts."""
        return tuple(words for words, _ in shafts_of(self.session))

    def advice(self) -> str:
        """Return that there is no stop yet, where there is none."""
        return "" if self.session.drive.stops else NOTHING

    def words_of(self, item: object) -> str:
        """Return "stop"."""
        return "stop"

    def _cells(self, at: int, case: StopCase) -> tuple[str, ...]:
        by = BRAKES if case.torque is None else self._said(case.torque, Kind.TORQUE)
        return f"stop {at + 1}", self._said(case.speed, Kind.SPEED), by, self.session.drive.train.words_of(case.shaft)

    def _said(self, value: float, kind: Kind) -> str:
        unit = self.session.units[kind]
        return f"{compact(unit.from_si(value), 5, decimal_mark=self.session.decimal_mark)} {unit.symbol}"
