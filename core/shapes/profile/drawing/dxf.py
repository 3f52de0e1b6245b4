"""The curves of a DXF drawing, read by ezdxf."""

from __future__ import annotations

import io
from itertools import islice, pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from core.errors import OutlineFileError
from core.shapes.profile.drawing.strands import BentCurve, StraightCurve
from core.shapes.profile.outline import MOST_POINTS

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.arrays import FloatArray
    from core.shapes.profile.drawing.strands import Curve

# Blocks that hold blocks can unfold without end.
MOST_ENTITIES = 5 * MOST_POINTS

_DAMAGED = "Export the drawing anew as DXF"


def curves_of_dxf(data: bytes) -> list[Curve]:
    """Return the lines, arcs, polylines, ellipses and splines of the model space, blocks unfolded.

    Raises:
        OutlineFileError: ezdxf is missing, the file is damaged, unfolds too far, or leaves the plane.
    """
    try:
        from ezdxf.disassemble import recursive_decompose
    except ImportError as error:
        raise OutlineFileError(
            "reading DXF needs the library ezdxf, which is not installed",
            remedy='Install it with "pip install masswright[outline]"',
        ) from error
    import ezdxf
    from ezdxf.lldxf.const import DXFError

    text = data.decode("utf-8", errors="replace").replace("\r\n", "\n")
    try:
        drawing: Any = ezdxf.read(io.StringIO(text))  # type: ignore[attr-defined] # ezdxf exports it at run time
        entities = list(islice(recursive_decompose(drawing.modelspace()), MOST_ENTITIES + 1))
        _check_number(len(entities))
        return [curve for entity in entities for curve in _curves_of(entity)]
    except OutlineFileError:
        raise
    except (DXFError, ValueError, LookupError, AttributeError, TypeError, ArithmeticError) as error:
        raise OutlineFileError(
            f"the file is no DXF drawing, or a damaged one ({str(error)[:80] or type(error).__name__})",
            remedy=_DAMAGED,
        ) from error


def _check_number(entities: int) -> None:
    if entities > MOST_ENTITIES:
        raise OutlineFileError(
            f"the drawing unfolds into more than {MOST_ENTITIES} parts", remedy="Export the outline alone"
        )


def _curves_of(entity: Any) -> Iterator[Curve]:
    kind = entity.dxftype()
    if kind == "LINE":
        yield StraightCurve(_flat([entity.dxf.start, entity.dxf.end]))
    elif kind in ("LWPOLYLINE", "POLYLINE"):
        for piece in entity.virtual_entities():
            yield from _curves_of(piece)
    elif kind in ("ARC", "CIRCLE"):
        whole = kind == "CIRCLE"
        start = 0.0 if whole else entity.dxf.start_angle
        sweep = 360.0 if whole else (entity.dxf.end_angle - start) % 360.0 or 360.0
        yield BentCurve(lambda t: _flat(entity.vertices(start + t * sweep)))
    elif kind == "ELLIPSE":
        first = entity.dxf.start_param
        around = (entity.dxf.end_param - first) % (2 * np.pi) or 2 * np.pi
        yield BentCurve(lambda t: _flat(entity.vertices(first + t * around)))
    elif kind == "SPLINE":
        spline = entity.construction_tool()
        yield from _smooth_pieces(spline)


def _smooth_pieces(spline: Any) -> Iterator[Curve]:
    """Return a spline between its knots, where it may bend sharply."""
    knots = np.unique(np.asarray(spline.knots(), dtype=float))
    inside = knots[(knots >= 0) & (knots <= spline.max_t)]
    for first, last in pairwise(inside):
        yield BentCurve(lambda t, a=first, b=last: _flat(spline.points(a + t * (b - a))))  # type: ignore[misc] # bound now


def _flat(points: Any) -> FloatArray:
    """Return points (k, 2) of points in space that lie in the plane of the drawing.

    Raises:
        OutlineFileError: they do not.
    """
    spots = np.array([(point[0], point[1], point[2]) for point in points], dtype=np.float64)
    reach = float(np.abs(spots).max(initial=0.0))
    if np.any(np.abs(spots[:, 2]) > 1e-6 * reach):
        at = int(np.argmax(np.abs(spots[:, 2])))
        raise OutlineFileError(
            "the drawing leaves its plane", read=f"z = {spots[at, 2]:.6g} in the file's unit",
            remedy="Export a plane drawing, with every z at 0",
        )
    return spots[:, :2]
