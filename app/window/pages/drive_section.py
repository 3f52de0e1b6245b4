"""One block of fields for the drive, and the one way in which its fields become edits of the drive's settings."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.window.fields import FIELD_WIDTH, Form, OpenField, QuantityField, kept_text
from core.drive.fields import kind_at, number_at, typed_at, with_number, with_typed_number

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.drive import DriveSettings
    from core.quantity import Unit


class DriveSection:
    """Fields of the drive's settings, or of one entry of one of its lists.

    Attributes:
        root: the path of the entry that the fields are of, such as train.stages.1; "" for the settings themselves.
        name: what the entry is called in the words for undo.
    """

    def __init__(self, session: Session, form: Form, root: str = "", name: str = "") -> None:
        self.session = session
        self.form = form
        self.root = root
        self.name = name
        self._bound: list[tuple[QuantityField, str]] = []

    def show(self) -> None:
        """Show the numbers as they are now."""
        for field, path in self._bound:
            field.set_value(self.number_at(path), typed_at(self.session.drive, self.path(path)))

    def drop(self) -> None:
        """Drop every text being typed: the fields are about to be those of something else."""
        for field, _ in self._bound:
            field.restore()

    def path(self, inner: str) -> str:
        """Return the path in the settings of something of the entry."""
        return f"{self.root}.{inner}" if self.root else inner

    def number_at(self, inner: str) -> float | None:
        """Return a number of the entry in SI; None where it is left open."""
        return number_at(self.session.drive, self.path(inner))

    def attempt(self, words: str, change: Callable[[DriveSettings], DriveSettings]) -> str:
        """Try an edit under words for undo; return "" or the sentence that refuses it."""
        return self.session.attempt_drive(words, change)

    def edit(self, words: str, change: Callable[[DriveSettings], DriveSettings]) -> None:
        """Do an edit; a refusal is told at the top of the window, and the fields show what counts."""
        if not self.session.edit_drive(words, change):
            self.show()

    # Fields

    def number(self, label: str, inner: str, tip: str = "", unit: Unit | None = None) -> QuantityField:
        """Add a field for a number of the entry."""
        field = QuantityField(self.session, label, kind_at(self.path(inner)), unit)
        self.form.add(label, field, tip)
        self.bind(field, label, inner)
        return field

    def open_number(
        self, label: str, inner: str, without: str, tip: str = "", unit: Unit | None = None, width: int = FIELD_WIDTH
    ) -> OpenField:
        """Add a field for a number that may be left open; without says what holds then."""
        field = OpenField(self.session, label, kind_at(self.path(inner)), without, unit, width)
        self.form.add(label, field, tip)
        self.bind(field, label, inner)
        field.cleared.connect(lambda: self._clear(field, label, inner))
        return field

    def triple(self, label: str, inner: str, tip: str = "", unit: Unit | None = None) -> None:
        """Add a field for each number of a triple, one below the other: side by side they need a wide page."""
        for at, letter in enumerate("xyz"):
            self.number(f"{label} {letter}", f"{inner}.{at}", tip, unit)

    def bind(self, field: QuantityField, label: str, inner: str) -> None:
        """Let a field edit a number of the entry; the text as typed is kept there, too."""

        def entered(value: float, text: str) -> None:
            typed, path = field.line.text().strip(), self.path(inner)
            texts = as_typed(text or typed, field.unit)
            refusal = self.attempt(
                f"{self.titled(label)}: {typed}", lambda settings: with_typed_number(settings, path, value, *texts)
            )
            if refusal:
                field.turn_down(refusal)

        self._bound.append((field, inner))
        field.entered.connect(entered)

    def titled(self, label: str) -> str:
        """Return what a field of the entry is called in the words for undo: "Ratio of gearbox"."""
        words = label[:1].upper() + label[1:]
        return f"{words} of {self.name}" if self.name else words

    def _clear(self, field: OpenField, label: str, inner: str) -> None:
        path = self.path(inner)
        refusal = self.attempt(f"{self.titled(label)}: none", lambda settings: with_number(settings, path, None))
        if refusal:
            field.turn_down(refusal)


def as_typed(text: str, unit: Unit) -> tuple[str, str]:
    """Return what is kept of the text of a number, and the text with its unit, to say what was read."""
    kept = kept_text(text)
    return kept, kept or f"{text} {unit.symbol}".strip()


def shafts_of(session: Session) -> list[tuple[str, object]]:
    """Return the shafts of the train as choices, from the motor to the load."""
    return [(words, name) for name, words in session.drive.train.shaft_words.items()]
