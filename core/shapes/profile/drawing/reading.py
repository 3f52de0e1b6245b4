"""A drawing file read: its kind and size, its curves as arcs, joined into loops."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from core.errors import OutlineFileError, ShapeError
from core.shapes.profile.drawing.joining import joined_outline
from core.shapes.profile.drawing.strands import strands_of_curves

if TYPE_CHECKING:
    from core.quantity import Unit
    from core.shapes.profile.drawing.strands import Curve
    from core.shapes.profile.outline import Outline

MOST_BYTES = 20 * 2**20

_KINDS = (".dxf", ".svg")


def read_outline(path: str | Path, unit: Unit) -> Outline:
    """Return the outline that a DXF or SVG file draws: the largest closed line, and the others as its holes.

    Straight lines and circular arcs are taken as they are; other curves as arcs that leave them by less than
    CURVE_GAP of the drawing's size. Ends that lie within JOINED_WITHIN of its size are one point. The y axis of an
    SVG file points down and is turned up.

    Args:
        path: its ending says which kind it is.
        unit: the length unit of the file's numbers; a drawing does not say it reliably.

    Raises:
        OutlineFileError: the file cannot be read, is too large, holds open or branching lines (their places are
            in `spots`), or lines that make no outline; or the optional library for it is missing.
    """
    file = Path(path)
    kind = file.suffix.lower()
    if kind not in _KINDS:
        raise OutlineFileError(
            "an outline is read from a DXF or SVG file", where=file.name, read=f'"{file.suffix}"',
            remedy="Export the drawing as DXF",
        )
    try:
        size = file.stat().st_size
        data = b"" if size > MOST_BYTES else file.read_bytes()
    except OSError as error:
        raise OutlineFileError(
            f"the file cannot be read ({error.strerror})", where=str(path), remedy="Check the path and its rights"
        ) from error
    if size > MOST_BYTES:
        raise OutlineFileError(
            f"a drawing of one outline has at most {MOST_BYTES // 2**20} MB", where=file.name,
            read=f"{size / 2**20:.1f} MB", remedy="Export the outline alone",
        )
    try:
        return joined_outline(strands_of_curves(_curves(data, kind)), unit)
    except OutlineFileError as error:
        where = ", ".join(part for part in (file.name, error.where) if part)
        raise OutlineFileError(
            error.what, where=where, read=error.read, remedy=error.remedy, spots=error.spots
        ) from error
    except ShapeError as error:
        raise OutlineFileError(error.what, where=file.name, read=error.read, remedy=error.remedy) from error


def _curves(data: bytes, kind: str) -> list[Curve]:
    if kind == ".dxf":
        from core.shapes.profile.drawing.dxf import curves_of_dxf

        return curves_of_dxf(data)
    from core.shapes.profile.drawing.svg import curves_of_svg

    return curves_of_svg(data)
