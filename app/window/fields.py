"""Fields of a page: a quantity with its unit and arithmetic, a choice, a line of text; each refuses in place."""

from __future__ import annotations

import math
import re
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import (
    QComboBox,
    QCompleter,
    QFormLayout,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QVBoxLayout,
    QWidget,
)

from app.window.style import GRID, Words, heading_font
from core.errors import MasswrightError
from core.quantity import Kind, Understood, Unit, compact, parse

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtGui import QKeyEvent

    from app.window.session import Session

LABEL_WIDTH = 148
FIELD_WIDTH = 134
NARROW_WIDTH = 88
SAME_VALUE = 1e-12
BARE_NUMBER = re.compile(r"[-+−]*[0-9.,]*([0-9.,][eE][-+−]?[0-9]+)?")


class QuantityField(QWidget):
    """A number with a unit: takes arithmetic, shows what it understood, keeps what was typed.

    Signals:
        entered: (SI value, text as typed) when a readable text that says something else was finished. A receiver
            that cannot take it calls `turn_down`.
        typing: the SI value that the text means while it is being typed; None while it means nothing.
    """

    entered = Signal(float, str)
    typing = Signal(object)

    def __init__(
        self, session: Session, label: str, kind: Kind, unit: Unit | None = None, width: int = FIELD_WIDTH
    ) -> None:
        super().__init__()
        self._session = session
        self._kind = kind
        self._own_unit = unit
        self._label = label
        self._value: float | None = None
        self._typed = ""
        self._before: tuple[float | None, str] = (None, "")
        self._entered = ""
        self.line = QLineEdit()
        self.line.setAccessibleName(label)
        self.line.setFixedWidth(width)
        self.line.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.unit_words = Words(self.unit.symbol, "quiet")
        self.understood = Words("", "quiet")
        self.wrong = Words("", "failed")
        self.wrong.setWordWrap(True)
        self.wrong.hide()
        row = QHBoxLayout()
        row.setSpacing(GRID)
        for widget in (self.line, self.unit_words, self.understood):
            row.addWidget(widget)
        row.addStretch(1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2)
        layout.addLayout(row)
        layout.addWidget(self.wrong)
        self.line.textEdited.connect(self._preview)
        self.line.editingFinished.connect(self._finish)

    @property
    def unit(self) -> Unit:
        """The unit that a bare number is in."""
        return self._own_unit or self._session.units[self._kind]

    @property
    def value(self) -> float | None:
        """The value in SI that the field stands for; None while it is empty."""
        return self._value

    def set_value(self, value: float | None, typed: str = "") -> None:
        """Show an SI value, as it was typed where that is known; a text being typed is left alone."""
        if self.line.hasFocus() and self.line.isModified():
            return
        self._value, self._typed = value, typed
        self.unit_words.setText(self.unit.symbol)
        self._show()

    def refuse(self, sentence: str) -> None:
        """Say in place why the text is not taken; the value stays what it was."""
        self.wrong.setText(sentence)
        self.wrong.setVisible(bool(sentence))
        self.line.setProperty("wrong", "true" if sentence else "false")
        self.line.style().polish(self.line)

    def turn_down(self, sentence: str) -> None:
        """Say in place why the text that was just entered is not taken; it stays to be mended, the old value counts."""
        self._value, self._typed = self._before
        self.line.setText(self._entered)
        self.line.setModified(True)
        self.understood.setText("")
        self.refuse(sentence)

    def read(self) -> Understood | None:
        """Return what the field's text means, or None after saying in place why it means nothing."""
        if self._value is not None and not self.line.isModified():
            return Understood(self._value, self._typed or self._plain(), self._plain())
        try:
            understood = parse(self.line.text(), self._kind, self.unit, where=self._label, names=self._session.names)
        except MasswrightError as error:
            self.refuse(str(error))
            return None
        self.refuse("")
        return understood

    def restore(self) -> None:
        """Drop the text being typed and show the value again."""
        self.refuse("")
        self._show()

    def _plain(self) -> str:
        if self._value is None:
            return ""
        return compact(self.unit.from_si(self._value), 10, decimal_mark=self._session.decimal_mark)

    def _still_meant(self) -> bool:
        """Tell whether the text as typed still means the value: without a unit it means another one in other units."""
        if not self._typed or self._value is None:
            return False
        try:
            read = parse(self._typed, self._kind, self.unit, names=self._session.names).value
            return math.isclose(read, self._value, rel_tol=SAME_VALUE)
        except MasswrightError:
            return False

    def _show(self) -> None:
        shown = self._still_meant() and self._typed != self._plain()
        self.line.setText(self._typed if shown else self._plain())
        self.line.setModified(False)
        self.line.setCursorPosition(0)
        self.understood.setText(f"= {self._plain()} {self.unit.symbol}" if shown else "")
        self.refuse("")

    def _preview(self, text: str) -> None:
        try:
            understood = parse(text, self._kind, self.unit, names=self._session.names)
        except MasswrightError:
            self.understood.setText("")
            self.typing.emit(None)
            return
        self.typing.emit(understood.value)
        plain = f"{text.strip()} {self.unit.symbol}".strip()
        self.understood.setText("" if understood.shown == plain else f"= {understood.shown}")

    def _finish(self) -> None:
        if not self.line.isModified():
            return
        understood = self.read()
        if understood is not None:
            self.line.setModified(False)
            self._before, self._entered = (self._value, self._typed), understood.text
            self._value, self._typed = understood.value, kept_text(understood.text)
            self._show()
            if (self._value, self._typed) != self._before:
                self.entered.emit(understood.value, self._typed)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Escape drops what is being typed."""
        if event.key() == Qt.Key.Key_Escape and self.line.isModified():
            self.restore()
            return
        super().keyPressEvent(event)


class OpenField(QuantityField):
    """A number that may be left open: an empty text means none, and what holds then stands there in grey.

    Signals:
        cleared: a text that said a value was emptied. A receiver that cannot take it calls `turn_down`.
    """

    cleared = Signal()

    def __init__(
        self, session: Session, label: str, kind: Kind, without: str, unit: Unit | None = None, width: int = FIELD_WIDTH
    ) -> None:
        super().__init__(session, label, kind, unit, width)
        self.line.setPlaceholderText(without)

    def _finish(self) -> None:
        if not self.line.isModified() or self.line.text().strip():
            super()._finish()
            return
        self._before, self._entered = (self._value, self._typed), ""
        self._value, self._typed = None, ""
        self._show()
        if self._before[0] is not None:
            self.cleared.emit()


def kept_text(text: str) -> str:
    """Return the text where it says more than its number: arithmetic, a unit or a name; "" for a bare number."""
    bare = text.strip()
    return "" if BARE_NUMBER.fullmatch(bare) else bare


class TextField(QLineEdit):
    """One line of text; tells when another one was finished, and drops it on Escape."""

    entered = Signal(str)

    def __init__(self, label: str, placeholder: str = "") -> None:
        super().__init__()
        self.setAccessibleName(label)
        self.setPlaceholderText(placeholder)
        self._kept = ""
        self.editingFinished.connect(self._finish)

    def set_value(self, text: str) -> None:
        """Show a text, unless another one is being typed."""
        if self.hasFocus() and self.isModified():
            return
        self._kept = text
        self.setText(text)
        self.setCursorPosition(0)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Escape drops what is being typed."""
        if event.key() == Qt.Key.Key_Escape and self.isModified():
            self.setText(self._kept)
            return
        super().keyPressEvent(event)

    def _finish(self) -> None:
        if self.text() != self._kept:
            self._kept = self.text()
            self.setModified(False)
            self.entered.emit(self._kept)


class ChoiceField(QComboBox):
    """A choice among named values; the wheel scrolls the page unless the field has the focus."""

    chosen = Signal(object)
    typed = Signal(str)

    def __init__(self, label: str, choices: list[tuple[str, object]]) -> None:
        super().__init__()
        self.setAccessibleName(label)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        for words, value in choices:
            self.addItem(words, value)
        self.activated.connect(lambda at: self.chosen.emit(self.itemData(at)))

    def take_typing(self, placeholder: str) -> None:
        """Let a choice be typed, too; what was typed is told with `typed`, and Escape drops it."""
        line = QLineEdit(self)
        line.setAccessibleName(self.accessibleName())
        self.setEditable(True)
        self.setInsertPolicy(QComboBox.InsertPolicy.NoInsert)
        self.setLineEdit(line)
        line.setPlaceholderText(placeholder)
        line.editingFinished.connect(lambda: self.typed.emit(line.text()))
        completer = QCompleter(self.model(), self)
        completer.setCaseSensitivity(Qt.CaseSensitivity.CaseInsensitive)
        completer.setFilterMode(Qt.MatchFlag.MatchContains)
        self.setCompleter(completer)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Escape drops what is being typed."""
        if event.key() == Qt.Key.Key_Escape and self.isEditable():
            self.setEditText(self.itemText(self.currentIndex()))
            return
        super().keyPressEvent(event)

    def set_value(self, value: object) -> None:
        """Show a value without telling about it."""
        for at in range(self.count()):
            if self.itemData(at) == value:
                self.setCurrentIndex(at)
                return

    def wheelEvent(self, event: object) -> None:
        """Change the choice with the wheel only while the field has the focus."""
        if self.hasFocus():
            super().wheelEvent(event)  # type: ignore[arg-type]  # handed on as it came
        else:
            event.ignore()  # type: ignore[attr-defined]  # a QWheelEvent


class Form(QWidget):
    """Labelled fields under headings, in one column on one grid."""

    def __init__(self, label_width: int = LABEL_WIDTH) -> None:
        super().__init__()
        self._label_width = label_width
        self._layout = QFormLayout(self)
        self._layout.setContentsMargins(0, 0, 0, 0)
        self._layout.setHorizontalSpacing(GRID)
        self._layout.setVerticalSpacing(GRID // 2)
        self._layout.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.ExpandingFieldsGrow)
        self._layout.setLabelAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop)
        self._layout.setRowWrapPolicy(QFormLayout.RowWrapPolicy.DontWrapRows)

    def lay_out_anew(self) -> None:
        """Ask for the heights of sentences again: Qt keeps those that a scroll area asked for at another width."""
        self._layout.invalidate()

    def heading(self, text: str) -> None:
        """Start a section."""
        label = QLabel(text)
        label.setFont(heading_font(label))
        label.setContentsMargins(0, GRID if self._layout.rowCount() else 0, 0, 0)
        self._layout.addRow(label)

    def add(self, text: str, field: QWidget, tip: str = "") -> None:
        """Add a field behind its label."""
        label = Words(text, "quiet")
        label.setFixedWidth(self._label_width)
        label.setContentsMargins(0, 3, 0, 0)
        label.setToolTip(tip)
        field.setToolTip(tip)
        label.setBuddy(field)
        self._layout.addRow(label, field)

    def say(self, text: str, role: str = "quiet") -> Words:
        """Add a sentence over the whole width."""
        words = Words(text, role)
        words.setWordWrap(True)
        self._layout.addRow(words)
        return words

    def show_row(self, field: QWidget, *, wanted: bool) -> None:
        """Show or hide a field with its label."""
        self._layout.setRowVisible(field, wanted)

    def add_row(self, widget: QWidget) -> None:
        """Add a widget over the whole width."""
        self._layout.addRow(widget)


class TripleField(QWidget):
    """Three quantities of one kind in a row, each with its letter; what is refused is said below them."""

    entered = Signal(int, float, str)

    def __init__(self, session: Session, label: str, kind: Kind, unit: Unit | None = None) -> None:
        super().__init__()
        self.fields = [QuantityField(session, f"{label} {letter}", kind, unit, NARROW_WIDTH) for letter in "xyz"]
        row = QHBoxLayout()
        row.setSpacing(GRID // 2)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2)
        layout.addLayout(row)
        for at, (letter, field) in enumerate(zip("xyz", self.fields, strict=True)):
            row.addWidget(Words(letter, "quiet"))
            row.addWidget(field)
            row.addSpacing(GRID)
            layout.addWidget(field.wrong)
            field.entered.connect(lambda value, text, at=at: self.entered.emit(at, value, text))
        row.addStretch(1)

    def set_values(self, values: tuple[float, float, float], typed: Callable[[int], str] = lambda _at: "") -> None:
        """Show three SI values, as they were typed where that is known."""
        for at, field in enumerate(self.fields):
            field.set_value(values[at], typed(at))

    def read(self) -> tuple[float, float, float] | None:
        """Return the three values, or None after saying in place which of them means nothing."""
        read = [field.read() for field in self.fields]
        values = [understood.value for understood in read if understood is not None]
        return (values[0], values[1], values[2]) if len(values) == len(self.fields) else None

    def texts(self) -> list[str]:
        """Return what stands for each of the three: as typed, or the number where that says it all."""
        read = [field.read() for field in self.fields]
        return [understood.text if understood is not None else "" for understood in read]
