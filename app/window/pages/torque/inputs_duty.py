"""The part "Duty": moves, rests and repeats in a table, the fields of the current one beside it."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtGui import QGuiApplication

from app.window.pages.drive_section import DriveSection, as_typed
from app.window.pages.torque.entries import EntriesModel, Entry
from app.window.pages.torque.entries_panel import Addition, EntriesPanel
from app.window.pages.torque.inputs_duty_table import ANGLE, LAW, TIME, TO, DutyModel
from app.window.pages.torque.inputs_steps import MoveSection, RepeatSection, RestSection
from app.window.pages.torque.paste_marks import PasteMarks
from core.drive import ByTime, Duty, Move, Repeat, Rest
from core.drive.fields import with_typed_number
from core.drive.items import with_item_at, with_items
from core.drive.steps import STEPS, StepRow, called, list_of, path_of, step_rows, steps_of_block, with_end
from core.drive.steps import with_repeat as repeated
from core.drive.steps import without_repeat as dissolved
from core.drive.timing import by_time
from core.errors import MasswrightError
from core.quantity import Kind, for_clipboard, parse

if TYPE_CHECKING:
    from app.window.fields import Form
    from app.window.session import Session
    from core.drive import DriveSettings
    from core.quantity.block import DecimalMark

NOTHING = "No duty yet: add a move, or paste rows of angle and time from a spreadsheet."
FIRST = Move(math.pi / 2, ByTime(1.0))
COLUMNS = {0: 104, 1: 66, 2: 66, 3: 66, 4: 64}


class DutyPanel(EntriesPanel):
    """The cycle that the drive goes through."""

    label_width = 92

    def __init__(self, session: Session) -> None:
        self._rows: dict[str, StepRow] = {}
        super().__init__(session, "Duty", ())
        for column, width in COLUMNS.items():
            self.table.setColumnWidth(column, width)
        self.table.stretch(LAW)
        self.table.type_in_cells()
        self.halves.setSizes([470, 310])
        self.marks = PasteMarks(self._paste_as)
        self.column.insertWidget(self.column.indexOf(self.wrong) + 1, self.marks)
        self.table.pasted.connect(self.paste)

    def make_model(self, headings: tuple[str, ...]) -> EntriesModel:  # the table of a duty has its own
        """Return the model of the steps."""
        model = DutyModel(self.session, self)
        model.typed.connect(self._typed)
        return model

    def _fill_buttons(self) -> None:
        super()._fill_buttons()
        self.repeat_button = self._button("Repeat", self.repeat, "Puts the selected steps into a repeat, or undoes one")
        self.paste_button = self._button(
            "Paste", lambda: self.paste(QGuiApplication.clipboard().text()),
            "Puts rows of angle and time behind the current step (Ctrl+V)",
        )

    def additions(self) -> list[Addition]:
        """Return a move and a rest; a repeat is made of steps."""
        return [Addition("Move", STEPS, self._fresh_move), Addition("Rest", STEPS, lambda: Rest(1.0))]

    def _fresh_move(self) -> Move:
        """Return a move as the nearest one above is."""
        return self._like(FIRST)

    def _like(self, otherwise: Move) -> Move:
        last = self.table.currentIndex().row()
        above = (entry.item for entry in reversed(self.model.entries[: last + 1]))
        return next((row.step for row in above if isinstance(row, StepRow) and isinstance(row.step, Move)), otherwise)

    def entries(self) -> list[Entry]:
        """Return where the duty starts, and its steps."""
        duty = self.session.drive.duty
        rows = step_rows(duty)
        self._rows = {path_of(row.place): row for row in rows}
        steps = [
            Entry(root, list_of(row.place), called(row.place), row, depth=len(row.place) - 1)
            for root, row in self._rows.items()
        ]
        return [Entry("duty", "", "start of the duty", duty), *steps]

    def advice(self) -> str:
        """Return that there is no duty yet, where there is none."""
        return "" if self.session.drive.duty.steps else NOTHING

    def sections(self, form: Form, entry: Entry) -> list[DriveSection]:
        """Return the fields of a step."""
        if not isinstance(entry.item, StepRow):
            start = DriveSection(self.session, form, "duty", "the duty")
            start.number("starts at", "start", "The angle of the load at which the cycle begins.")
            return [start]
        step = entry.item.step
        if isinstance(step, Move):
            return [MoveSection(self.session, form, entry.root, entry.name, self._rows.get)]
        section = RestSection if isinstance(step, Rest) else RepeatSection
        return [section(self.session, form, entry.root, entry.name)]

    def fields_depend_on(self, entry: Entry) -> object:
        """Return what decides which fields a step has."""
        step = entry.item.step if isinstance(entry.item, StepRow) else None
        return (type(step), step.law, type(step.timing)) if isinstance(step, Move) else type(step)

    def words_of(self, item: object) -> str:
        """Return "move" or "rest"."""
        return "move" if isinstance(item, Move) else "rest"

    def _allow(self) -> None:
        super()._allow()
        current = self.table.current
        step = current.item.step if current is not None and isinstance(current.item, StepRow) else None
        self.repeat_button.setText("Dissolve" if isinstance(step, Repeat) else "Repeat")
        self.repeat_button.setEnabled(step is not None and current is not None and current.holder == STEPS)

    # Edits

    def place_for(self, holder: str) -> int:
        """Return where a new step goes: behind the current one, or first where the start is current."""
        here = self.table.current
        return 0 if here is not None and isinstance(here.item, Duty) else super().place_for(holder)

    def add_entry(self, addition: Addition) -> None:
        """Add a step behind the current one, in the repeat that this is in."""
        super().add_entry(replace(addition, holder=self._list_here()))

    def _list_here(self) -> str:
        here = self.table.current
        return here.holder if here is not None and here.holder else STEPS

    def _typed(self, row: int, column: int, text: str) -> None:
        """Take what was typed in a cell as an edit, or refuse it below the table."""
        entry = self.model.entries[row]
        kind = Kind.TIME if column == TIME else Kind.ANGLE
        heading = {ANGLE: "Angle", TO: "End", TIME: "Time"}[column]
        words = f"{heading} of {entry.name}"
        try:
            value = parse(text, kind, self.session.units[kind], where=words, names=self.session.names).value
        except MasswrightError as error:
            self.table.stay()
            self.tell(str(error))
            return
        texts = as_typed(text, self.session.units[kind])
        change = partial(_with_cell, entry=entry, column=column, value=value, texts=texts)
        if not self.attempt(f"{words}: {text}", change):
            self.table.stay()

    def repeat(self) -> None:
        """Put the selected steps into a repeat, or dissolve the current one."""
        entry = self.table.current
        if entry is None or not isinstance(entry.item, StepRow):
            return
        if isinstance(entry.item.step, Repeat):
            index = entry.index
            self.attempt(f"Dissolve {entry.name}", lambda settings: dissolved(settings, index))
            self.table.select([entry.root])
            return
        places = [one.index for one in self.table.selected if one.holder == STEPS]
        if places:
            first, last = min(places), max(places)
            words = f"Repeat steps {first + 1} to {last + 1}" if last > first else f"Repeat step {first + 1}"
            if self.attempt(words, lambda settings: repeated(settings, first, last)):
                self.table.select([f"{STEPS}.{first}"])
                self.open_fields()

    # The clipboard

    def paste(self, text: str) -> None:
        """Put the rows of a block behind the current step, all of them or none; one edit."""
        self._paste_as(text, None)

    def _paste_as(self, text: str, mark: DecimalMark | None) -> None:
        angle, time = self.session.units[Kind.ANGLE], self.session.units[Kind.TIME]
        move = self._like(FIRST)
        try:
            steps = steps_of_block(text, angle, time, move if isinstance(move.timing, ByTime) else by_time(move), mark)
        except MasswrightError as error:
            self.tell(str(error))
            self.marks.offer(text, mark, error)
            return
        holder = self._list_here()
        at = self.place_for(holder)
        if self.attempt(f"Paste {len(steps)} step{'s' if len(steps) > 1 else ''}",
                        lambda settings: with_items(settings, holder, steps, at)):
            self.table.select([f"{holder}.{at + len(steps) - 1}"])

    def copy_selection(self) -> None:
        """Put angle and time of the selected moves and rests on the clipboard, a row each."""
        angle, time = self.session.units[Kind.ANGLE], self.session.units[Kind.TIME]
        rows = [entry.item for entry in self.table.selected if isinstance(entry.item, StepRow)]
        mark = "," if self.session.decimal_mark == "," else "."
        lines = [
            f"{for_clipboard(angle.from_si(row.end - row.start), mark)}\t{for_clipboard(time.from_si(row.time), mark)}"
            for row in rows if not isinstance(row.step, Repeat)
        ]
        if lines:
            QGuiApplication.clipboard().setText("\n".join(lines) + "\n")
            self.session.said.emit(f"Copied {len(lines)} steps: angle in {angle.symbol}, time in {time.symbol}")

    def tell(self, sentence: str) -> None:
        """Say in place what is refused; "" says nothing."""
        super().tell(sentence)
        self.marks.hide()


def _with_cell(
    settings: DriveSettings, entry: Entry, column: int, value: float, texts: tuple[str, str]
) -> DriveSettings:
    """Return the settings with another number in a cell; texts: what is kept of what was typed, and how to tell it."""
    row = entry.item
    if not isinstance(row, StepRow):
        return with_typed_number(settings, "duty.start", value, *texts)
    if column == TO:
        return with_end(settings, row.place, value)
    if column == ANGLE:
        return with_typed_number(settings, f"{entry.root}.angle", value, *texts)
    if isinstance(row.step, Rest):
        return with_typed_number(settings, f"{entry.root}.time", value, *texts)
    if isinstance(row.step, Move) and not isinstance(row.step.timing, ByTime):
        # A time typed for a move by limits: it is given by its time from now on.
        settings = with_item_at(settings, entry.holder, entry.index, by_time(row.step))
    return with_typed_number(settings, f"{entry.root}.timing.time", value, *texts)
