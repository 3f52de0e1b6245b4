"""The steps of a duty as a list to be edited: where each begins and ends, repeats made and undone, rows pasted.

A step has a place: (2,) the third of the duty, (2, 0) the first of those that the third repeats.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, TypeAlias

from core.drive.fields import with_number
from core.drive.motion import MOST_STEPS, ByTime, Duty, Move, Repeat, Rest, Step
from core.errors import EditRefused, QuantityError, ValueRefused
from core.quantity.block import check_decimal_mark, rows_of_block, value_of_cell
from core.quantity.units import Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.drive.settings import DriveSettings
    from core.quantity import Unit
    from core.quantity.block import DecimalMark

Place: TypeAlias = tuple[int, ...]

STEPS = "duty.steps"
LONGEST_BLOCK = 2_000_000
_WHERE = "block of moves"


@dataclass(frozen=True)
class StepRow:
    """One step of the list.

    Attributes:
        place: of the step.
        step: the move, the rest or the repeat.
        start, end: rad, the angles of the load before and after it, in the first pass of a repeat; of a repeat itself
            before its first pass and after its last.
        time: s that it takes, of a repeat all its passes.
    """

    place: Place
    step: Step
    start: float
    end: float
    time: float


def step_rows(duty: Duty) -> tuple[StepRow, ...]:
    """Return every step of a duty in the order of a list, those of a repeat behind it."""
    rows: list[StepRow] = []
    angle = duty.start
    for at, step in enumerate(duty.steps):
        if not isinstance(step, Repeat):
            row = _row((at,), step, angle)
            rows.append(row)
            angle = row.end
            continue
        inner: list[StepRow] = []
        here = angle
        for within, one in enumerate(step.steps):
            inner.append(_row((at, within), one, here))
            here = inner[-1].end
        end, time = angle + step.times * (here - angle), step.times * sum(row.time for row in inner)
        rows += [StepRow((at,), step, angle, end, time), *inner]
        angle = end
    return tuple(rows)


def list_of(place: Place) -> str:
    """Return the path of the list that holds a step; its index there is place[-1]."""
    return STEPS if len(place) == 1 else f"{STEPS}.{place[0]}.steps"


def path_of(place: Place) -> str:
    """Return the path of a step: duty.steps.2, or duty.steps.2.steps.0 within a repeat."""
    return f"{list_of(place)}.{place[-1]}"


def called(place: Place) -> str:
    """Return what a step is called: step 3, or step 3.1 within a repeat."""
    return "step " + ".".join(str(at + 1) for at in place)


def with_end(settings: DriveSettings, place: Place, end: float) -> DriveSettings:
    """Return the settings with a move that ends at an angle (rad); what comes behind it is turned on.

    Raises:
        EditRefused: there is no such step, or it is no move.
        ValueRefused: it begins there, so that nothing is left of the move.
    """
    row = next((row for row in step_rows(settings.duty) if row.place == place), None)
    if row is None or not isinstance(row.step, Move):
        raise EditRefused("only a move ends at another angle", where=called(place), remedy="Choose a move")
    if end == row.start:
        raise ValueRefused(
            "the move begins where it is to end", where=called(place), remedy="Give another end, or enter a rest"
        )
    return with_number(settings, f"{path_of(place)}.angle", end - row.start)


def with_repeat(settings: DriveSettings, first: int, last: int, times: int = 2) -> DriveSettings:
    """Return the settings with the steps first to last of the duty put into one repeat.

    Raises:
        EditRefused: one of them is a repeat, or is not there.
    """
    steps = settings.duty.steps
    inside = steps[first : last + 1]
    if not 0 <= first <= last < len(steps):
        raise EditRefused("the duty has no such steps", where="duty", read=f"{first + 1} to {last + 1}")
    within = tuple(step for step in inside if not isinstance(step, Repeat))
    if len(within) < len(inside):
        raise EditRefused("a repeat holds moves and rests, no other repeat", where="duty", remedy="Dissolve that first")
    made = (*steps[:first], Repeat(within, times), *steps[last + 1 :])

    def moved(steps: list[str]) -> list[str]:
        at = int(steps[0])
        if at < first:
            return steps
        return [str(at - last + first), *steps[1:]] if at > last else [f"{first}", "steps", f"{at - first}", *steps[1:]]

    return _with_steps(settings, made, moved)


def without_repeat(settings: DriveSettings, index: int) -> DriveSettings:
    """Return the settings with the steps of a repeat in its place, once.

    Raises:
        EditRefused: there is no repeat at that place of the duty.
    """
    steps = settings.duty.steps
    repeat = steps[index] if 0 <= index < len(steps) else None
    if not isinstance(repeat, Repeat):
        raise EditRefused("only a repeat can be dissolved", where=called((index,)), remedy="Choose a repeat")
    more = len(repeat.steps) - 1

    def moved(steps: list[str]) -> list[str]:
        at = int(steps[0])
        if at == index:
            return [str(index + int(steps[2])), *steps[3:]] if steps[1] == "steps" else []
        return [str(at + more * (at > index)), *steps[1:]]

    return _with_steps(settings, (*steps[:index], *repeat.steps, *steps[index + 1 :]), moved)


def steps_of_block(
    text: str, angle: Unit, time: Unit, like: Move, decimal_mark: DecimalMark | None = None
) -> tuple[Move | Rest, ...]:
    r"""Return the moves and rests that a pasted block describes: a row each, the angle and the time that it takes.

    A row without an angle, or with 0, is a rest. The first row may be a heading; empty rows are passed over.

    Args:
        text: cells separated by tabs, semicolons or blanks.
        angle: the unit of angles without one of their own.
        time: the same of times.
        like: the move whose law and ramps the new ones have.
        decimal_mark: of the block; None: found out, and refused where both readings fit.

    Raises:
        QuantityError: a cell is no angle or no time, or the decimal mark is ambiguous or mixed.
        ValueRefused: a row has not these two cells, or a move takes no time.
    """
    if len(text) > LONGEST_BLOCK:
        raise QuantityError("the block is too long", where=_WHERE, remedy=f"Paste at most {MOST_STEPS} rows")
    rows = rows_of_block(text)
    check_decimal_mark([cell for row in rows for cell in row], decimal_mark, _WHERE)
    steps = tuple(_step(row, f"row {at}", angle, time, like) for at, row in enumerate(rows, start=1) if any(row))
    if not steps:
        raise ValueRefused(
            "there is nothing to paste", where=_WHERE, remedy="Copy rows of an angle and a time from a spreadsheet"
        )
    return steps


def _step(row: list[str], where: str, angle: Unit, time: Unit, like: Move) -> Move | Rest:
    filled = len(row) - next(at for at, cell in enumerate(reversed(row)) if cell)
    if filled != len(("angle", "time")):
        raise ValueRefused(
            "a row has an angle and a time", where=where, read=" | ".join(row[:8]),
            remedy="Separate the two by a tab; leave the angle empty for a rest",
        )
    turn = value_of_cell(row[0], Kind.ANGLE, angle, f"{where}, angle") if row[0] else 0.0
    takes = value_of_cell(row[1], Kind.TIME, time, f"{where}, time")
    if takes <= 0:
        raise ValueRefused("a move or rest needs a time of more than 0", where=where, read=row[1])
    return replace(like, angle=turn, timing=ByTime(takes)) if turn else Rest(takes)


def _row(place: Place, step: Move | Rest, angle: float) -> StepRow:
    turn = step.angle if isinstance(step, Move) else 0.0
    time = step.timing.time if isinstance(step, Move) and isinstance(step.timing, ByTime) else step.time
    return StepRow(place, step, angle, angle + turn, time)


def _with_steps(
    settings: DriveSettings, steps: tuple[Step, ...], moved: Callable[[list[str]], list[str]]
) -> DriveSettings:
    """Return the settings with other steps; moved gives the new path behind duty.steps of an old one, [] if gone."""
    typed: list[tuple[str, str]] = []
    for path, text in settings.typed:
        if not path.startswith(f"{STEPS}."):
            typed.append((path, text))
            continue
        there = moved(path.removeprefix(f"{STEPS}.").split("."))
        if there:
            typed.append((".".join([STEPS, *there]), text))
    return replace(settings, duty=replace(settings.duty, steps=steps), typed=tuple(sorted(typed)))
