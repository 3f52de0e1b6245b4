"""Outlines out of drawing files.

- `read_outline(path, unit)`: of a DXF or SVG file; needs the optional extra `outline`.
"""

from core.shapes.profile.drawing.reading import MOST_BYTES, read_outline

__all__ = ["MOST_BYTES", "read_outline"]
