"""The bar in the corner of the view for placing by hand: steps, and along what and at which point handles stand."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QObject
from PySide6.QtGui import QAction, QActionGroup
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLayout, QMenu, QPushButton, QVBoxLayout

from app.window.fields import QuantityField
from app.window.style import GRID, Words
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from PySide6.QtGui import QKeyEvent, QMouseEvent

    from app.window.session import Session
    from app.window.view import ViewPane

_FIELD_WIDTH = 52
_CORNER = GRID
# Words of a choice → the field of the manner and its value.
CHOICES: tuple[tuple[tuple[str, str, str], ...], ...] = (
    (("Along the document's axes", "along", "document"), ("Along the line's own axes", "along", "own")),
    (("At the line's origin", "pivot", "origin"), ("At its centre of mass", "pivot", "centre")),
)


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
        self._choices: dict[QAction, tuple[str, str]] = {}
        self._lay_out()
        for field, name in ((self._length, "length_step"), (self._angle, "angle_step")):
            field.entered.connect(lambda value, _text, field=field, name=name: self._take_step(field, name, value))
        view.installEventFilter(self)
        view.aimed.connect(self.refresh)
        for signal in (
            session.selection_changed, session.changed, session.placed_differently, session.shown_differently
        ):
            signal.connect(self.refresh)
        self.refresh()

    def _lay_out(self) -> None:
        layout = QVBoxLayout(self)
        layout.setContentsMargins(GRID, GRID // 2, GRID, GRID // 2)
        layout.setSpacing(GRID // 2)
        layout.setSizeConstraint(QLayout.SizeConstraint.SetFixedSize)
        row = QHBoxLayout()
        row.setSpacing(GRID // 2)
        layout.addLayout(row)
        tip = "What dragging a handle snaps to, and a nudge by key moves or turns by. 0: dragging is free."
        for widget in (Words("step", "quiet"), self._length, self._angle):
            widget.setToolTip(tip)
            row.addWidget(widget)
        button = QPushButton("Handles")
        button.setToolTip("Along what handles and nudges run, and where they stand; turns go about that point.")
        button.setMenu(self._menu())
        row.addWidget(button)
        for field in (self._length, self._angle):
            field.wrong.setFixedWidth(row.sizeHint().width())
            layout.addWidget(field.wrong)

    def _menu(self) -> QMenu:
        menu = QMenu("Handles", self)
        for choices in CHOICES:
            group = QActionGroup(menu)
            for words, name, value in choices:
                action = group.addAction(words)
                action.setCheckable(True)
                action.triggered.connect(lambda _on, name=name, value=value: self._choose(**{name: value}))
                menu.addAction(action)
                self._choices[action] = (name, value)
            menu.addSeparator()
        return menu

    def refresh(self) -> None:
        """Show the manner as it is now, where there is something to place."""
        manner = self._session.manner
        self._length.set_value(manner.length_step)
        self._angle.set_value(manner.angle_step)
        for action, (name, value) in self._choices.items():
            action.setChecked(getattr(manner, name) == value)
        self._settle()

    def _settle(self) -> None:
        """Take the corner of the view, where there is something to place and the bar has room."""
        self.move(_CORNER, _CORNER)
        wanted = self._session.manner.handles and bool(self._session.selected) and self._view.aim is None
        fits = wanted and self.sizeHint().width() <= self._view.width() - 2 * _CORNER
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
            self._settle()
        return super().eventFilter(watched, event)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Keep keys that a field leaves from turning the view behind it."""
        event.accept()

    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Keep a press beside a field from reaching the view behind it."""
        event.accept()
