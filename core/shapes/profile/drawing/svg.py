"""The curves of an SVG drawing: its XML read without any document type, its paths by svgpathtools."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any
from xml.etree.ElementTree import Element, TreeBuilder
from xml.parsers.expat import ExpatError, ParserCreate

import numpy as np

from core.errors import OutlineFileError
from core.shapes.profile.drawing.strands import BentCurve, StraightCurve
from core.shapes.profile.outline import MOST_POINTS

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.arrays import FloatArray
    from core.shapes.profile.drawing.strands import Curve

DEEPEST = 100
MOST_ELEMENTS = 5 * MOST_POINTS

# What these hold is not drawn where it stands.
_NOT_DRAWN = {"defs", "symbol", "clipPath", "mask", "marker", "pattern", "metadata"}
_DAMAGED = "Export the drawing anew as SVG"


def curves_of_svg(data: bytes) -> list[Curve]:
    """Return the paths, lines, polygons, rectangles, circles and ellipses, with y turned up.

    Raises:
        OutlineFileError: svgpathtools is missing, the XML is broken or declares a document type, an element is
            no such curve as it says, or is drawn by reference.
    """
    try:
        import svgpathtools  # noqa: F401 - asked for before the work begins
    except ImportError as error:
        raise OutlineFileError(
            "reading SVG needs the library svgpathtools, which is not installed",
            remedy='Install it with "pip install masswright[outline]"',
        ) from error
    return list(_curves_under(_root(data), np.eye(3), 0))


def _root(data: bytes) -> Element:
    """Return the root of XML without a document type: its entities could unfold without end, or read files."""
    builder = TreeBuilder()
    parser = ParserCreate(namespace_separator="}")
    count = 0

    def refuse(*_: object) -> None:
        raise OutlineFileError(
            "the SVG declares a document type, which could hide what it holds",
            remedy='Export it as plain SVG, or delete the line that begins with "<!DOCTYPE"',
        )

    def start(name: str, attributes: dict[str, str]) -> None:
        nonlocal count
        count += 1
        if count > MOST_ELEMENTS:
            raise OutlineFileError(
                f"the drawing has more than {MOST_ELEMENTS} elements", remedy="Export the outline alone"
            )
        builder.start(name.rpartition("}")[2], attributes)

    parser.StartElementHandler = start
    parser.EndElementHandler = lambda name: builder.end(name.rpartition("}")[2])
    parser.StartDoctypeDeclHandler = refuse
    parser.EntityDeclHandler = refuse
    try:
        parser.Parse(data, True)
    except ExpatError as error:
        raise OutlineFileError(
            "the file is no SVG drawing, or a damaged one", where=f"line {error.lineno}", remedy=_DAMAGED
        ) from error
    root = builder.close()
    if root.tag != "svg":
        raise OutlineFileError("the file is no SVG drawing", read=f"<{root.tag}>", remedy=_DAMAGED)
    return root


def _curves_under(element: Element, outer: FloatArray, depth: int) -> Iterator[Curve]:
    from svgpathtools.parser import parse_transform

    if depth > DEEPEST:
        raise OutlineFileError(f"groups nest at most {DEEPEST} deep", remedy=_DAMAGED)
    if element.tag in _NOT_DRAWN:
        return
    if element.tag == "use":
        raise OutlineFileError(
            "the drawing holds copies by reference (<use>)", remedy="Turn them into lines of their own, and export anew"
        )
    try:
        matrix = outer @ parse_transform(element.get("transform", ""))
        path = _path_of(element)
    except (ValueError, IndexError, KeyError, TypeError, AttributeError, ZeroDivisionError, AssertionError) as error:
        raise OutlineFileError(
            f"a <{element.tag}> cannot be read", read=str(error)[:80] or type(error).__name__, remedy=_DAMAGED
        ) from error
    for segment in path:
        yield _curve_of(segment, matrix)
    for child in element:
        yield from _curves_under(child, matrix, depth + 1)


def _path_of(element: Element) -> Any:
    """Return the segments of a drawn element, none for a group."""
    from svgpathtools import parse_path
    from svgpathtools.svg_to_paths import ellipse2pathd, polygon2pathd, polyline2pathd, rect2pathd

    values = element.attrib
    if element.tag == "path":
        return parse_path(values.get("d", ""))
    if element.tag == "line":
        return parse_path(f"M {values['x1']} {values['y1']} L {values['x2']} {values['y2']}")
    make = {
        "rect": rect2pathd, "circle": ellipse2pathd, "ellipse": ellipse2pathd,
        "polygon": polygon2pathd, "polyline": polyline2pathd,
    }.get(element.tag)
    return parse_path(make(values)) if make else ()


def _curve_of(segment: Any, matrix: FloatArray) -> Curve:
    from svgpathtools import Line

    def placed(z: Any) -> FloatArray:
        spots = np.atleast_1d(np.asarray(z, dtype=np.complex128))
        flat = np.stack([spots.real, spots.imag], axis=-1) @ matrix[:2, :2].T + matrix[:2, 2]
        return np.asarray(flat * [1.0, -1.0])

    if isinstance(segment, Line):
        return StraightCurve(placed([segment.start, segment.end]))
    return BentCurve(lambda t: placed([segment.point(float(each)) for each in t]))
