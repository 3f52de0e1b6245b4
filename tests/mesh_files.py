"""Bodies as triangles, and the bytes of STL files that hold them; sound ones, and ones damaged on purpose."""

from __future__ import annotations

import numpy as np
from scipy.spatial import ConvexHull

# Two triangles per face of the unit cube, counter-clockwise seen from outside; corner 4x + 2y + z.
_CUBE = np.array([
    [0, 1, 3], [0, 3, 2], [4, 6, 7], [4, 7, 5], [0, 4, 5], [0, 5, 1], [2, 3, 7], [2, 7, 6], [0, 2, 6], [0, 6, 4],
    [1, 5, 7], [1, 7, 3],
])


def box(width: float = 1.0, depth: float = 1.0, height: float = 1.0, at: tuple[float, float, float] = (0, 0, 0)) -> np.ndarray:
    """The 12 triangles of a box whose lowest corner lies at a point."""
    corners = np.array([[x, y, z] for x in (0, 1) for y in (0, 1) for z in (0, 1)], dtype=float)
    return (corners * (width, depth, height) + at)[_CUBE]


def hull(points: np.ndarray) -> np.ndarray:
    """The triangles of the convex hull of points, wound outwards."""
    points = np.asarray(points, dtype=float)
    shell = ConvexHull(points)
    triangles = points[shell.simplices]
    normals = np.cross(triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0])
    inward = np.einsum("ij,ij->i", normals, shell.equations[:, :3]) < 0
    triangles[inward] = triangles[inward][:, ::-1]
    return triangles


def quartered(triangles: np.ndarray, times: int = 1) -> np.ndarray:
    """The same surface with every triangle cut into four at the middles of its sides."""
    for _ in range(times):
        a, b, c = triangles[:, 0], triangles[:, 1], triangles[:, 2]
        ab, bc, ca = (a + b) / 2, (b + c) / 2, (c + a) / 2
        parts = [(a, ab, ca), (ab, b, bc), (ca, bc, c), (ab, bc, ca)]
        triangles = np.concatenate([np.stack(part, axis=1) for part in parts])
    return triangles


def ring_grid(around: int, across: int) -> np.ndarray:
    """A closed ring of 2·around·across triangles, as float32: a torus of radii 30 and 10."""
    u, v = np.meshgrid(*(2 * np.pi * np.arange(n) / n for n in (around, across)), indexing="ij")
    radius = 30 + 10 * np.cos(v)
    a = np.stack([radius * np.cos(u), radius * np.sin(u), 10 * np.sin(v)], axis=-1).astype(np.float32)
    b, d = np.roll(a, -1, axis=0), np.roll(a, -1, axis=1)
    c = np.roll(b, -1, axis=1)
    return np.concatenate([np.stack(side, axis=2).reshape(-1, 3, 3) for side in ((a, b, c), (a, c, d))])


def records(triangles: np.ndarray) -> bytes:
    """Binary STL records with zero normals and attribute bytes."""
    layout = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])
    table = np.zeros(len(triangles), layout)
    with np.errstate(over="ignore"):
        table["corners"] = triangles
    return table.tobytes()


def binary_stl(triangles: np.ndarray, header: bytes = b"", count: int | None = None) -> bytes:
    """A binary STL file; count lies where it is given."""
    announced = len(triangles) if count is None else count
    return header.ljust(80, b"\0") + announced.to_bytes(4, "little") + records(triangles)


def ascii_stl(triangles: np.ndarray, name: str = "part", number: str = "{!r}", end: str = "\n", indent: str = "  ") -> str:
    """The text of an ASCII STL file with one solid; number formats each coordinate."""
    lines = [f"solid {name}".rstrip()]
    for corners in triangles.tolist():
        lines += [f"{indent}facet normal 0 0 0", f"{indent * 2}outer loop"]
        lines += [f"{indent * 3}vertex " + " ".join(number.format(value) for value in corner) for corner in corners]
        lines += [f"{indent * 2}endloop", f"{indent}endfacet"]
    return end.join([*lines, f"endsolid {name}".rstrip(), ""])
