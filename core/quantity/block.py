"""Blocks of cells as a spreadsheet puts them on the clipboard: rows, the decimal mark of the whole block, one cell."""

from __future__ import annotations

import re
from fractions import Fraction
from typing import TYPE_CHECKING, Final, Literal, TypeAlias

from core.errors import QuantityError
from core.quantity.expression import parse

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.quantity.units import Kind, Unit

DecimalMark: TypeAlias = Literal[".", ","]

_PLAIN: Final = re.compile(r"[+\-−]?(?:[0-9]+[.,]?[0-9]*|[.,][0-9]+)(?:[eE][+\-−]?[0-9]{1,3})?")
_THOUSANDS: Final = re.compile(r"[+\-−]?[1-9][0-9]{0,2}[.,][0-9]{3}")


def rows_of_block(text: str) -> list[list[str]]:
    r"""Return the cells of a block, row by row, without the blanks around them; a heading is an empty row.

    Columns are separated by tabs, or where there is none by semicolons, or else by blanks. The first row is a heading
    where no figure is in it.

    >>> rows_of_block("angle; time\n90 ; 0,5")
    [[], ['90', '0,5']]
    """
    mark = "\t" if "\t" in text else ";" if ";" in text else None
    return without_heading([line.split(mark) for line in text.splitlines()])


def without_heading(rows: Sequence[Sequence[str]]) -> list[list[str]]:
    """Return the cells without the blanks around them, and an empty first row in the place of a heading."""
    cells = [[cell.strip() for cell in row] for row in rows]
    if cells and any(cells[0]) and not re.search("[0-9]", "".join(cells[0])):
        cells[0] = []
    return cells


def check_decimal_mark(cells: Sequence[str], decimal_mark: DecimalMark | None = None, where: str = "block") -> None:
    """Refuse a block of cells whose numbers can be read in two ways.

    Raises:
        QuantityError: there are both marks in it; or other marks than the given one; or no mark was given, and
            each number with a mark could be one with thousands set apart.
    """
    plain = [cell for cell in cells if _PLAIN.fullmatch(cell)]
    marked = {mark: [cell for cell in plain if mark in cell] for mark in (".", ",")}
    if marked["."] and marked[","]:
        raise QuantityError(
            "the block has two decimal marks", where=where, read=f'"{marked["."][0]}" and "{marked[","][0]}"',
            remedy='Use either "." or "," throughout, and no marks between thousands',
        )
    either = marked["."] or marked[","]
    if decimal_mark is not None and marked["," if decimal_mark == "." else "."]:
        raise QuantityError(
            f'the decimal mark of this block is "{decimal_mark}"', where=where, read=f'"{either[0]}"',
            remedy="Choose the other mark, or leave out marks between thousands",
        )
    if decimal_mark is None and either and all(_THOUSANDS.fullmatch(cell) for cell in either):
        mark = "." if marked["."] else ","
        raise QuantityError(
            f'it cannot be told whether "{mark}" is a decimal mark or sets thousands apart', where=where,
            read=f'"{either[0]}"', remedy="Say which decimal mark the block has",
        )


def value_of_cell(cell: str, kind: Kind, unit: Unit, where: str) -> float:
    """Return what a cell says in SI; the nearest double, also on the quick way for plain numbers.

    Raises:
        QuantityError: it says no quantity of this kind.
    """
    if _PLAIN.fullmatch(cell):
        return float(Fraction(cell.replace(",", ".").replace("−", "-")) * unit.ratio)
    return parse(cell, kind, unit, where=where).value
