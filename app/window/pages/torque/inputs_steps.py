"""Fields of one step of the duty: a move by its time or by limits, a rest, a repeat; and of where the duty starts."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.window.fields import Form, QuantityField
from app.window.pages.torque.entry_section import Choices, EntrySection
from core.drive import ByTime, Law, Move
from core.drive.laws import RAMPED
from core.drive.steps import with_end
from core.drive.timing import by_limits, by_time, limits_needed, limits_taken, with_law
from core.quantity import Kind, compact

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.drive.steps import StepRow

LAWS: Choices = [(law.value, law) for law in Law]
BY_TIME, BY_LIMITS = "its time", "limits"
WITHOUT = {
    "speed": "not limited", "acceleration": "not limited", "deceleration": "as acceleration", "jerk": "not limited",
}
LIMIT_TIPS = {
    "speed": "The highest speed of the load.",
    "acceleration": "Of speeding up, and of slowing down where that is open.",
    "deceleration": "Of slowing down.",
    "jerk": "How fast the acceleration may change.",
}


class MoveSection(EntrySection):
    """What a move turns by, by which law and how fast."""

    def __init__(
        self, session: Session, form: Form, root: str, name: str, row_of: Callable[[str], StepRow | None]
    ) -> None:
        super().__init__(session, form, root, name)
        self._row_of = row_of
        move: Move = self.item
        self.number("angle", "angle", "What the load turns by; negative backwards.")
        self.end = QuantityField(session, "to", Kind.ANGLE)
        form.add("to", self.end, "Where the load stands behind the move; typing it sets the angle.")
        self.end.entered.connect(self._to)
        self.choose("law", LAWS, lambda: self.item.law, with_law, "How it speeds up and slows down.")
        self.choose("given by", [(BY_TIME, BY_TIME), (BY_LIMITS, BY_LIMITS)], self._given, _given_by)
        if isinstance(move.timing, ByTime):
            self.number("time", "timing.time", "What the move takes.")
            self._ramps(move.law)
        else:
            self._limits(move.law)
        self._takes = form.say("")

    def _given(self) -> str:
        return BY_TIME if isinstance(self.item.timing, ByTime) else BY_LIMITS

    def _ramps(self, law: Law) -> None:
        if law in RAMPED:
            self.number("ramp up", "ramp_up", "Share of the time in which it speeds up, such as 1/3 or 25 %.")
            self.number("ramp down", "ramp_down", "Share of the time in which it slows down.")
        if law == Law.S_CURVE:
            self.number("smoothing", "smoothing", "Share of each ramp in which the acceleration changes, 0 to 1.")

    def _limits(self, law: Law) -> None:
        for limit in limits_taken(law):
            inner, tip = f"timing.{limit}", LIMIT_TIPS[limit]
            if limit in limits_needed(law):
                self.number(limit, inner, tip)
            else:
                self.open_number(limit, inner, WITHOUT[limit], tip)

    def show(self) -> None:
        """Show the move, where it ends, and what a move by limits takes."""
        super().show()
        row = self._row_of(self.root)
        if row is None:
            return
        self.end.set_value(row.end)
        unit = self.session.units[Kind.TIME]
        time = compact(unit.from_si(row.time), 6, decimal_mark=self.session.decimal_mark)
        self._takes.setText("" if isinstance(self.item.timing, ByTime) else f"It takes {time} {unit.symbol}.")

    def drop(self) -> None:
        """Drop every text being typed, that of the end, too."""
        super().drop()
        self.end.restore()

    def _to(self, angle: float, _text: str) -> None:
        row = self._row_of(self.root)
        if row is not None:
            words = f"End of {self.name}: {self.end.line.text().strip()}"
            refusal = self.attempt(words, lambda settings: with_end(settings, row.place, angle))
            if refusal:
                self.end.turn_down(refusal)


class RestSection(EntrySection):
    """How long a rest is."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.number("time", "time", "How long the load stands still.")


class RepeatSection(EntrySection):
    """How many times the steps of a repeat are done."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.number("times", "times", "How many times its steps are done.")


def _given_by(move: Move, how: str) -> Move:
    return by_time(move) if how == BY_TIME else by_limits(move)
