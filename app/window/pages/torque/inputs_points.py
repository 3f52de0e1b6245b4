"""The points of one limit of the motor as a table: typed, pasted from a data sheet, taken out."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QHBoxLayout, QLabel, QPushButton, QVBoxLayout, QWidget

from app.window.fields import NARROW_WIDTH, QuantityField, kept_text
from app.window.pages.drive_section import as_typed
from app.window.pages.torque.inputs_points_table import PointsModel, PointsTable
from app.window.pages.torque.paste_marks import PasteMarks
from app.window.style import GRID, Words, heading_font
from core.drive.fields import with_typed_number
from core.drive.limit_points import (
    path_of_points,
    points_at,
    points_of_block,
    with_point,
    with_points,
    without_points,
)
from core.errors import MasswrightError
from core.quantity import Kind, for_clipboard, parse

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.drive import DriveSettings
    from core.drive.limit_points import Limit
    from core.quantity.block import DecimalMark

TITLES: dict[Limit, str] = {"continuous": "Continuous torque", "peak": "Peak torque"}
NOTHING = "Not judged yet: add points of the motor's data sheet, or paste rows of speed and torque."


class PointsBox(QWidget):
    """One limit: its points, two fields for a new one, and what is refused."""

    def __init__(self, session: Session, limit: Limit) -> None:
        super().__init__()
        self.session = session
        self.limit: Limit = limit
        self.model = PointsModel(session, limit, self)
        self.table = PointsTable(TITLES[limit], self.model)
        self.advice = Words(NOTHING, "quiet")
        self.wrong = Words("", "failed")
        for words in (self.advice, self.wrong):
            words.setWordWrap(True)
        self.wrong.hide()
        self.marks = PasteMarks(self._paste_as)
        self.speed = QuantityField(session, f"{TITLES[limit]}, new speed", Kind.SPEED, width=NARROW_WIDTH)
        self.torque = QuantityField(session, f"{TITLES[limit]}, new torque", Kind.TORQUE, width=NARROW_WIDTH)
        self.add = QPushButton("Add point")
        self.remove_button = QPushButton("Delete")
        self.paste_button = QPushButton("Paste")
        self._lay_out()
        self._connect()

    def _lay_out(self) -> None:
        title = QLabel(TITLES[self.limit])
        title.setFont(heading_font(title))
        new = QHBoxLayout()
        new.setSpacing(GRID // 2)
        for words, field in (("speed", self.speed), ("torque", self.torque)):
            field.line.setPlaceholderText(words)
            new.addWidget(field)
        buttons = QHBoxLayout()
        buttons.setSpacing(GRID // 2)
        for button in (self.add, self.remove_button, self.paste_button):
            button.setStyleSheet("padding: 2px 8px;")
            button.setAccessibleName(f"{TITLES[self.limit]}: {button.text()}")
            buttons.addWidget(button)
        buttons.addStretch(1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, GRID, 0)
        layout.setSpacing(GRID // 2)
        for widget in (title, self.advice):
            layout.addWidget(widget)
        layout.addWidget(self.table, 1)
        layout.addWidget(self.wrong)
        layout.addWidget(self.marks)
        layout.addLayout(new)
        layout.addLayout(buttons)

    def _connect(self) -> None:
        self.model.typed.connect(self._typed)
        self.table.removed.connect(self.remove)
        self.table.pasted.connect(self.paste)
        self.table.copying.connect(self.copy)
        self.add.clicked.connect(lambda _checked=False: self.add_point())
        self.torque.line.returnPressed.connect(self.add_point)
        self.remove_button.clicked.connect(lambda _checked=False: self.remove())
        self.paste_button.clicked.connect(lambda _checked=False: self.paste(QGuiApplication.clipboard().text()))

    def refresh(self) -> None:
        """Show the points as they are now."""
        points = points_at(self.session.drive, self.limit)
        self.model.show(points)
        self.advice.setVisible(not points)
        self.remove_button.setEnabled(bool(points))
        for field in (self.speed, self.torque):
            field.set_value(None)
        self.tell("")

    def tell(self, sentence: str) -> None:
        """Say in place what is refused; "" says nothing."""
        self.wrong.setText(sentence)
        self.wrong.setVisible(bool(sentence))
        self.marks.hide()

    def _attempt(self, words: str, change: Callable[[DriveSettings], DriveSettings]) -> bool:
        refusal = self.session.attempt_drive(words, change)
        self.tell(refusal)
        return not refusal

    def _typed(self, row: int, column: int, text: str) -> None:
        kind = (Kind.SPEED, Kind.TORQUE)[column]
        words = f"{TITLES[self.limit]}, {('speed', 'torque')[column]} of point {row + 1}"
        try:
            value = parse(text, kind, self.session.units[kind], where=words, names=self.session.names).value
        except MasswrightError as error:
            self.table.stay()
            self.tell(str(error))
            return
        path = f"{path_of_points(self.limit)}.{row}.{column}"
        texts = as_typed(text, self.session.units[kind])
        if not self._attempt(f"{words}: {text}", lambda settings: with_typed_number(settings, path, value, *texts)):
            self.table.stay()

    def add_point(self) -> None:
        """Put the point that was typed in by its speed; the keyboard goes back for the next one."""
        read = [field.read() for field in (self.speed, self.torque)]
        if read[0] is None or read[1] is None:
            return
        point = (read[0].value, read[1].value)
        texts = (kept_text(read[0].text), kept_text(read[1].text))
        words = f"Add a point to {TITLES[self.limit].lower()}"
        for field in (self.speed, self.torque):
            field.line.setModified(False)
        if self._attempt(words, lambda settings: with_point(settings, self.limit, point, texts)):
            self.speed.line.setFocus(Qt.FocusReason.OtherFocusReason)

    def remove(self) -> None:
        """Take the selected points out."""
        rows = sorted({index.row() for index in self.table.selectedIndexes()})
        if rows:
            words = f"Delete point {rows[0] + 1}" if len(rows) == 1 else f"Delete {len(rows)} points"
            self._attempt(
                f"{words} of {TITLES[self.limit].lower()}",
                lambda settings: without_points(settings, self.limit, rows),
            )

    def paste(self, text: str) -> None:
        """Put the rows of a block in the place of all points, all of them or none."""
        self._paste_as(text, None)

    def _paste_as(self, text: str, mark: DecimalMark | None) -> None:
        units = self.session.units
        try:
            points = points_of_block(text, units[Kind.SPEED], units[Kind.TORQUE], mark)
        except MasswrightError as error:
            self.tell(str(error))
            self.marks.offer(text, mark, error)
            return
        self._attempt(
            f"Paste {len(points)} points of {TITLES[self.limit].lower()}",
            lambda settings: with_points(settings, self.limit, points),
        )

    def copy(self) -> None:
        """Put the points on the clipboard, a row each: speed and torque."""
        speed, torque = self.session.units[Kind.SPEED], self.session.units[Kind.TORQUE]
        mark = "," if self.session.decimal_mark == "," else "."
        lines = [
            f"{for_clipboard(speed.from_si(point[0]), mark)}\t{for_clipboard(torque.from_si(point[1]), mark)}"
            for point in points_at(self.session.drive, self.limit)
        ]
        if lines:
            QGuiApplication.clipboard().setText("\n".join(lines) + "\n")
            self.session.said.emit(f"Copied {len(lines)} points: speed in {speed.symbol}, torque in {torque.symbol}")
