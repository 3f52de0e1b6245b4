"""The sheet and the ledger as plain text whose columns line up, for a terminal or a letter."""

from __future__ import annotations

import textwrap
from typing import TYPE_CHECKING, Final

from core.quantity.formatting import MINUS, NO_VALUE, significant
from core.quantity.units import Kind

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.assembly import Ledger, Line
    from core.handover.lines import Entry
    from core.handover.sheet import Sheet
    from core.quantity import UnitSet

DIGITS: Final = 6
_WIDTH: Final = 110
_SHARE_DIGITS: Final = 3


def text_of_sheet(sheet: Sheet, decimal_mark: str = ".", digits: int = DIGITS) -> str:
    """Return a sheet as lines of symbol, value, unit and label, with the values aligned on the decimal mark.

    A missing value is "–", and the reason stands below the values.
    """
    rows = [_cells(entry, decimal_mark, digits) for entry in sheet.entries]
    left, right = _widths([row[1] for row in rows], decimal_mark)
    symbols, units = (max((len(row[i]) for row in rows), default=0) for i in (0, 2))
    lines = [one_line(sheet.title)]
    lines += _wrapped([("", f"{source.basis} ({source.text})") for source in sheet.sources])
    section = ""
    for entry, (symbol, value, unit, label) in zip(sheet.entries, rows, strict=True):
        if entry.section != section:
            section = entry.section
            lines += ["", section if entry.basis == sheet.basis else f"{section} ({one_line(entry.basis)})"]
        lines.append(f"  {symbol:<{symbols}}  {_aligned(value, left, right, decimal_mark)}  {unit:<{units}}  {label}")
    reasons = dict.fromkeys(entry.reason for entry in sheet.entries if entry.value is None)
    marked = [(f"{NO_VALUE} ", reason) for reason in reasons]
    marked += [("check failed: ", f"{check.name}: {check.text}") for check in sheet.failed]
    marked += [("note: ", note) for note in sheet.notes]
    marked += [("caution: ", caution) for caution in sheet.cautions]
    lines += ["", *_wrapped(marked)]
    return "\n".join(lines) + "\n"


def text_of_ledger(ledger: Ledger, units: UnitSet, decimal_mark: str = ".", digits: int = DIGITS) -> str:
    """Return the ledger as a table: a line per part and group, and the total at the foot.

    Columns: copies in the document, mass, own J, m·d² and J about the drive axis, share of J, basis.
    """
    mass, inertia = units[Kind.MASS], units[Kind.INERTIA]

    def row(line: Line) -> tuple[str, ...]:
        values = (
            (line.mass, mass, digits),
            (line.own_inertia, inertia, digits),
            (line.transfer, inertia, digits),
            (line.inertia, inertia, digits),
            (line.share, None, _SHARE_DIGITS),
        )
        numbers = tuple(
            NO_VALUE
            if value is None
            else number_text(unit.from_si(value), decimal_mark, wanted)
            if unit
            else number_text(100 * value, decimal_mark, wanted)
            for value, unit, wanted in values
        )
        return ("  " * line.depth + one_line(line.name), str(line.times), *numbers, one_line(line.basis))

    head = (
        "Part",
        "×",
        f"Mass {mass.symbol}",
        f"Own J {inertia.symbol}",
        f"m·d² {inertia.symbol}",
        f"J {inertia.symbol}",
        "Share %",
        "Basis",
    )
    foot = ("TOTAL", *row(ledger.total)[1:])
    body = _columns([head, *(row(line) for line in ledger.lines), foot], decimal_mark)
    return "\n".join([f"Ledger about the drive axis {one_line(ledger.axis.name)}", *body]) + "\n"


def number_text(value: float, decimal_mark: str = ".", digits: int = DIGITS) -> str:
    """Return a number by significant digits, with an ASCII minus, so that it can be pasted as a number."""
    return significant(value, digits, decimal_mark=decimal_mark).replace(MINUS, "-")


def one_line(text: str) -> str:
    """Return typed text without line breaks and control signs, so that it cannot disturb a terminal."""
    return "".join(sign if sign.isprintable() else " " for sign in text)


def _cells(entry: Entry, decimal_mark: str, digits: int) -> tuple[str, str, str, str]:
    value = NO_VALUE if entry.value is None else number_text(entry.value, decimal_mark, digits)
    return entry.symbol, value, entry.unit.symbol, entry.label


def _widths(numbers: Sequence[str], decimal_mark: str) -> tuple[int, int]:
    """Return the most signs in front of the decimal mark, and the most from it on."""
    heads = [len(number.partition(decimal_mark)[0]) for number in numbers]
    return max(heads, default=0), max(
        (len(number) - head for number, head in zip(numbers, heads, strict=True)), default=0
    )


def _aligned(number: str, left: int, right: int, decimal_mark: str) -> str:
    head = number.partition(decimal_mark)[0]
    return f"{head:>{left}}{number[len(head) :]:<{right}}"


def _columns(rows: Sequence[tuple[str, ...]], decimal_mark: str) -> list[str]:
    """Return the lines of a table: text to the left, numbers on their decimal marks; the first is the head."""
    columns = []
    for i, (head, *texts) in enumerate(zip(*rows, strict=True)):
        cells = texts
        if 0 < i < len(rows[0]) - 1:
            left, right = _widths(cells, decimal_mark)
            cells = [_aligned(cell, left, right, decimal_mark) for cell in texts]
            width = max(len(head), left + right)
            columns.append([f"{cell:>{width}}" for cell in (head, *cells)])
        else:
            width = max(len(cell) for cell in (head, *cells))
            columns.append([f"{cell:<{width}}" for cell in (head, *cells)])
    return ["  " + "  ".join(cells).rstrip() for cells in zip(*columns, strict=True)]


def _wrapped(paragraphs: Sequence[tuple[str, str]]) -> list[str]:
    lines: list[str] = []
    for head, text in paragraphs:
        lines += textwrap.wrap(
            (head + one_line(text)).strip(),
            _WIDTH,
            initial_indent="  ",
            subsequent_indent="    ",
            break_long_words=False,
            break_on_hyphens=False,
        )
    return lines
