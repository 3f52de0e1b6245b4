"""Tables for a spreadsheet: name, value and unit in cells of their own, every number a number when it lands.

Numbers are written with an ASCII minus, an E exponent and no marks between thousands, in full precision. Text
that a spreadsheet would take for a formula gets an apostrophe in front; a number never does.
"""

from __future__ import annotations

import csv
import io
from typing import TYPE_CHECKING, Final, TypeAlias

from core.quantity.formatting import NO_VALUE, for_clipboard

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from core.handover.sheet import Sheet

Cell: TypeAlias = str | float | int | None

# The first signs that make a spreadsheet read a cell as a formula, in ASCII and in full width.
_FORMULA_STARTS: Final = "=+-@＝＋－＠"  # the full-width signs are meant
_HEADER: Final[tuple[Cell, ...]] = ("Name", "Value", "Unit", "Where from")


def tsv_of_sheet(sheet: Sheet, decimal_mark: str = ".") -> str:
    """Return a sheet as tab-separated text, for the clipboard or a file."""
    return tsv_of_block(rows_of_sheet(sheet), decimal_mark)


def csv_of_sheet(sheet: Sheet, decimal_mark: str = ".") -> str:
    """Return a sheet as CSV; with a decimal comma the cells are separated by ";"."""
    return csv_of_block(rows_of_sheet(sheet), decimal_mark)


def tsv_of_block(rows: Iterable[Sequence[Cell]], decimal_mark: str = ".") -> str:
    r"""Return a block of cells as tab-separated text: floats and ints as numbers, None as "–", else as text.

    >>> tsv_of_block([["J", -0.5, "kg·m²"], ["=1+1", None, ""]], ",")
    "J\t-0,5\tkg·m²\n'=1+1\t–\t\n"
    """
    return _written(rows, "\t", decimal_mark)


def csv_of_block(rows: Iterable[Sequence[Cell]], decimal_mark: str = ".") -> str:
    """Return any block of cells as CSV, separated by "," or, with a decimal comma, by ";"."""
    return _written(rows, ";" if decimal_mark == "," else ",", decimal_mark)


def rows_of_sheet(sheet: Sheet) -> list[tuple[Cell, ...]]:
    """Return the cells of a sheet: title, header, a row per value, sources, failed checks and cautions."""
    rows: list[tuple[Cell, ...]] = [("Sheet", "", "", sheet.title), _HEADER]
    rows += [
        (
            entry.label,
            entry.value,
            entry.unit.symbol,
            entry.basis if entry.value is not None else entry.reason,
        )
        for entry in sheet.entries
    ]
    rows += [("Source", "", "", f"{source.basis}: {source.text}") for source in sheet.sources]
    rows += [(f"Check failed: {check.name}", "", "", check.text) for check in sheet.failed]
    rows += [("Note", "", "", note) for note in sheet.notes]
    rows += [("Caution", "", "", caution) for caution in sheet.cautions]
    return rows


def cell_text(cell: Cell, decimal_mark: str = ".") -> str:
    """Return what stands in a cell: a number that reads back as the same double, or harmless text."""
    if cell is None:
        return NO_VALUE
    if isinstance(cell, str):
        return _harmless(cell)
    return for_clipboard(float(cell), decimal_mark)


def _harmless(text: str) -> str:
    """Return typed text on one line, with an apostrophe in front where it would become a formula."""
    line = "".join(sign if sign.isprintable() else " " for sign in text)
    return f"'{line}" if line.lstrip()[:1] in tuple(_FORMULA_STARTS) else line


def _written(rows: Iterable[Sequence[Cell]], separator: str, decimal_mark: str) -> str:
    out = io.StringIO()
    writer = csv.writer(out, delimiter=separator, lineterminator="\n")
    writer.writerows([cell_text(cell, decimal_mark) for cell in row] for row in rows)
    return out.getvalue()
