"""The bar in the corner of the view for placing by hand: steps, and along what and at which point handles stand."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QObject
from PySide6.QtWidgets import QBoxLayout, QFrame, QHBoxLayout, QLayout

from app.window.fields import ChoiceField, QuantityField
from app.window.style import GRID, Words
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from PySide6.QtGui import QKeyEvent, QMouseEvent

    from app.window.session import Session
    from app.window.view import ViewPane

_FIELD_WIDTH = 52
_CORNER = GRID


class PlacingBar(QFrame):
    """Lies over the view while a line is selected and handles are on."""

    def __init__(self, session: Session, view: ViewPane) -> None:
        super().__init__(view)
        self._session = session
        self._view = view
        self.setObjectName("bar")
        self.setAccessibleName("Placing by hand")
        self._length = QuantityField(session, "step of length", Kind.LENGTH, width=_FIELD_WIDTH)
        self._angle = QuantityField(session, "step of angle", Kind.ANGLE, UNITS["°"], _FIELD_WIDTH)
        self._along = ChoiceField("Handles along", [("document", "document"), ("own axes", "own")])
        self._pivot = ChoiceField("Handles at", [("origin", "origin"), ("mass centre", "centre")])
        self._rows = QBoxLayout(QBoxLayout.Direction.LeftToRight, self)
        self._lay_out()
        for field, name in ((self._length, "length_step"), (self._angle, "angle_step")):
            field.entered.connect(lambda value, _text, field=field, name=name: self._take_step(field, name, value))
        self._along.chosen.connect(lambda chosen: self._choose(along=chosen))
        self._pivot.chosen.connect(lambda chosen: self._choose(pivot=chosen))
        view.installEventFilter(self)
        for signal in (
            session.selection_changed, session.changed, session.placed_differently, session.shown_differently
        ):
            signal.connect(self.refresh)
        self.refresh()

    def _lay_out(self) -> None:
        steps = (Words("step", "quiet"), self._length, self._angle)
        choices = (Words("along", "quiet"), self._along, Words("at", "quiet"), self._pivot)
        self._rows.setContentsMargins(GRID, GRID // 2, GRID, GRID // 2)
        self._rows.setSpacing(GRID // 2)
        self._rows.setSizeConstraint(QLayout.SizeConstraint.SetFixedSize)
        for widgets in (steps, choices):
            row = QHBoxLayout()
            row.setSpacing(GRID // 2)
            for widget in widgets:
                row.addWidget(widget)
            row.addStretch(1)
            self._rows.addLayout(row)
        tip = "What dragging a handle snaps to, and a nudge by key moves or turns by. 0: dragging is free."
        for widget in steps:
            widget.setToolTip(tip)
        self._along.setToolTip("Whether handles and nudges run along the document's axes or the line's own.")
        self._pivot.setToolTip("Where the handles stand, and what turns go about.")

    def refresh(self) -> None:
        """Show the manner as it is now, where there is something to place."""
        manner = self._session.manner
        self._length.set_value(manner.length_step)
        self._angle.set_value(manner.angle_step)
        self._along.set_value(manner.along)
        self._pivot.set_value(manner.pivot)
        self._settle(wanted=manner.handles and bool(self._session.selected))

    def _settle(self, *, wanted: bool) -> None:
        """Take the corner of the view: in one row, or in two where that is too wide, or not at all."""
        room = self._view.width() - 2 * _CORNER
        for direction in (QBoxLayout.Direction.LeftToRight, QBoxLayout.Direction.TopToBottom):
            self._rows.setDirection(direction)
            self._rows.activate()
            if self.width() <= room:
                break
        self.move(_CORNER, _CORNER)
        fits = wanted and self.width() <= room
        self.setVisible(fits)
        box = (float(_CORNER), float(_CORNER), float(self.width()), float(self.height()))
        self._view.cover([box] if fits else [])

    def _take_step(self, field: QuantityField, name: str, value: float) -> None:
        if value < 0:
            field.turn_down("A step is at least 0.")
        else:
            self._choose(**{name: value})

    def _choose(self, **chosen: object) -> None:
        self._session.set_manner(replace(self._session.manner, **chosen))  # type: ignore[arg-type]  # one of its fields

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Follow the size of the view."""
        if watched is self._view and event.type() == QEvent.Type.Resize:
            self._settle(wanted=self._session.manner.handles and bool(self._session.selected))
        return super().eventFilter(watched, event)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Keep keys that a field leaves from turning the view behind it."""
        event.accept()

    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Keep a press beside a field from reaching the view behind it."""
        event.accept()
