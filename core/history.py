"""Undo and redo: keeping the machines that were, each with the name of the edit that left it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from core.machine import Machine


@dataclass(frozen=True)
class History:
    """The document as it is, and the ones before and after it.

    Attributes:
        present: what is shown.
        past: (name of the edit, machine before it), the oldest first.
        future: (name of the edit, machine after it), the next one last.
    """

    present: Machine
    past: tuple[tuple[str, Machine], ...] = ()
    future: tuple[tuple[str, Machine], ...] = ()

    def edited(self, name: str, after: Machine) -> History:
        """Return the history with an edit done; what had been undone is gone."""
        return History(after, (*self.past, (name, self.present)))

    def undone(self) -> History:
        """Return the history one edit back; the same where there is none."""
        if not self.past:
            return self
        name, before = self.past[-1]
        return History(before, self.past[:-1], (*self.future, (name, self.present)))

    def redone(self) -> History:
        """Return the history one undone edit forward; the same where there is none."""
        if not self.future:
            return self
        name, after = self.future[-1]
        return History(after, (*self.past, (name, self.present)), self.future[:-1])

    def merged(self, name: str, after: Machine) -> History:
        """Return the history with the last edit's name and result replaced: one undo step for what is done in one go.

        Where there is no edit yet, there is still none.
        """
        return History(after, (*self.past[:-1], *((name, before) for _, before in self.past[-1:])))

    @property
    def undo_name(self) -> str:
        """The edit that undo would take back; "" where there is none."""
        return self.past[-1][0] if self.past else ""

    @property
    def redo_name(self) -> str:
        """The edit that redo would do again; "" where there is none."""
        return self.future[-1][0] if self.future else ""
