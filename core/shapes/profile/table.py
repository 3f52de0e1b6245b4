"""An outline as a table: columns x, y, rounding and arc; pasted from a spreadsheet, or typed cell by cell.

- A row is a point: x, y, and if there are any the radius that rounds its corner and the radius of the arc to the
  next point (positive where it turns left on its way, negative where it turns right).
- Columns are separated by tabs, or where there is none by semicolons, or else by blanks.
- An empty row begins a hole; an empty cell is 0, but x and y are never empty.
- The first row may be a heading; the first point may stand again at the end of its loop.
"""

from __future__ import annotations

from itertools import groupby
from typing import TYPE_CHECKING, Final

from core.errors import ShapeError
from core.quantity import Kind, for_clipboard
from core.quantity.block import check_decimal_mark, rows_of_block, value_of_cell, without_heading
from core.shapes.profile.outline import MOST_POINTS, Outline, OutlinePoint

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.quantity import Unit
    from core.quantity.block import DecimalMark
    from core.shapes.profile.outline import Loop

COLUMNS: Final = ("x", "y", "rounding", "arc")
LONGEST_TABLE: Final = 2_000_000

_FEWEST_CELLS: Final = 2


def outline_of_text(text: str, unit: Unit, decimal_mark: DecimalMark | None = None) -> Outline:
    r"""Return the outline that a pasted block of text describes.

    Args:
        text: rows of x, y, rounding and arc, as the module's heading says.
        unit: the length unit of numbers without one of their own.
        decimal_mark: of the block; None: found out, and refused where both readings fit.

    Raises:
        QuantityError: a cell is no length, or the decimal mark is ambiguous or mixed.
        ShapeError: the rows make no outline.

    >>> from core.quantity import UNITS
    >>> outline_of_text("0\t0\n40\t0\n40\t12,5\t2", UNITS["mm"]).loops[0][2]
    OutlinePoint(x=0.04, y=0.0125, rounding=0.002, arc=0.0)
    """
    if len(text) > LONGEST_TABLE:
        raise ShapeError(
            f"the text is longer than {LONGEST_TABLE} signs", where="outline", read=f"{len(text)}",
            remedy=f"Paste at most {MOST_POINTS} points",
        )
    return outline_of_rows(rows_of_block(text), unit, decimal_mark)


def outline_of_rows(
    rows: Sequence[Sequence[str]], unit: Unit, decimal_mark: DecimalMark | None = None
) -> Outline:
    """Return the outline that the cells of a table describe; an error names the row, counted from 1.

    Args:
        rows: up to four cells of text each; a row without any text begins a hole.
        unit: the length unit of numbers without one of their own.
        decimal_mark: of the whole table; None: found out, and refused where both readings fit.

    Raises:
        QuantityError: a cell is no length, or the decimal mark is ambiguous or mixed.
        ShapeError: the rows make no outline.
    """
    cells = without_heading(rows)
    check_decimal_mark([cell for row in cells for cell in row], decimal_mark, "outline")
    numbered = list(enumerate(cells, start=1))
    loops = [
        _closed_once([_point(row, number, unit) for number, row in group])
        for filled, group in groupby(numbered, key=lambda row: any(row[1]))
        if filled
    ]
    return Outline(tuple(loops))


def text_of_outline(outline: Outline, unit: Unit, decimal_mark: DecimalMark = ".") -> str:
    """Return the outline as tab-separated rows of x, y, rounding and arc, an empty row before each hole."""
    loops = []
    for loop in outline.loops:
        rows = ["\t".join(for_clipboard(unit.from_si(v), decimal_mark) for v in point) for point in loop]
        loops.append("\n".join(rows))
    return "\n\n".join(loops) + "\n"


def _point(row: Sequence[str], number: int, unit: Unit) -> OutlinePoint:
    filled = len(row) - next(k for k, cell in enumerate(reversed(row)) if cell)
    if not _FEWEST_CELLS <= filled <= len(COLUMNS) or not row[0] or not row[1]:
        raise ShapeError(
            "a row has x and y, and up to two radii behind them", where=f"row {number}",
            read=" | ".join(row[:8]), remedy="Separate the columns by tabs or semicolons",
        )
    values = [
        _length(cell, unit, f"row {number}, {name}") for cell, name in zip(row[:filled], COLUMNS, strict=False)
    ]
    return OutlinePoint(*values)


def _length(cell: str, unit: Unit, where: str) -> float:
    return value_of_cell(cell, Kind.LENGTH, unit, where) if cell else 0.0


def _closed_once(points: list[OutlinePoint]) -> Loop:
    """Return the points of a loop without its first one, where that stands again at the end."""
    again = len(points) > 1 and points[-1][:2] == points[0][:2] and points[-1][2:] in ((0.0, 0.0), points[0][2:])
    return tuple(points[:-1] if again else points)
