"""How the window writes a number: for reading, and for a spreadsheet's cell."""

from __future__ import annotations

from typing import TYPE_CHECKING

from core.quantity import NO_VALUE, Unit, for_clipboard, significant

if TYPE_CHECKING:
    from app.window.session import Session


def shown(session: Session, value: float | None, unit: Unit, digits: int = 4) -> str:
    """Return an SI value in a unit for reading, without the unit's symbol; a dash where there is none."""
    if value is None:
        return NO_VALUE
    return significant(unit.from_si(value), digits, decimal_mark=session.decimal_mark)


def preview(text: str, most: int = 56) -> str:
    """Return what lies on the clipboard in one short line: cells between bars, further rows left out."""
    first, *more = text.rstrip("\n").split("\n")
    line = first.replace("\t", " | ")
    line = line if len(line) <= most else f"{line[: most - 1]}…"
    return f"{line}  and {len(more)} more row{'s' if len(more) > 1 else ''}" if more else line


def copied(session: Session, value: float, unit: Unit) -> str:
    """Return an SI value in a unit at full precision, so that it lands as a number in a spreadsheet's cell."""
    return for_clipboard(unit.from_si(value), session.decimal_mark)
