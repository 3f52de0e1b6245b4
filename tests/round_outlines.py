"""Outlines of lines and arcs with exact boundary integrals, and the triangles that exporters make of them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.spatial import ConvexHull
from shapely import Polygon, constrained_delaunay_triangles

from core.moments import Moments

NODES, WEIGHTS = (0.5 * (np.polynomial.legendre.leggauss(40)[0] + 1), 0.5 * np.polynomial.legendre.leggauss(40)[1])


# --- outlines --------------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Arc:
    """Part of a circle or of an ellipse with its axes along x and y; steps is how many chords it becomes."""

    centre: tuple[float, float]
    radii: tuple[float, float]
    start: float
    end: float
    steps: int = 8

    def at(self, t):
        a = self.start + (self.end - self.start) * t
        return np.stack([self.centre[0] + self.radii[0] * np.cos(a), self.centre[1] + self.radii[1] * np.sin(a)], -1)

    def rate(self, t):
        a, turn = self.start + (self.end - self.start) * t, self.end - self.start
        return turn * np.stack([-self.radii[0] * np.sin(a), self.radii[1] * np.cos(a)], -1)


@dataclass(frozen=True)
class Line:
    start: tuple[float, float]
    end: tuple[float, float]
    steps: int = 1

    def at(self, t):
        t = np.asarray(t)[..., None]
        return np.asarray(self.start) * (1 - t) + np.asarray(self.end) * t

    def rate(self, t):
        return np.broadcast_to(np.subtract(self.end, self.start), (*np.shape(t), 2))


def chords(outline, skip_last=True):
    """Return the corners (n, 2) of a closed outline, with exactly shared ends."""
    points = []
    for piece in outline:
        points.extend(piece.at(np.arange(piece.steps) / piece.steps))
    if not skip_last:
        points.append(outline[-1].at(1.0))
    return np.round(np.array(points), 12) + 0.0


def boundary_integral(outlines, f):
    total = 0.0
    for outline in outlines:
        for piece in outline:
            total += WEIGHTS @ (f(*piece.at(NODES).T) * piece.rate(NODES)[:, 1])
    return total


def about_centre(volume, first, second):
    centre = np.asarray(first) / volume
    return Moments(volume, centre, np.asarray(second) - volume * np.outer(centre, centre))


def turned_moments(outline):
    """Turn a counter-clockwise outline in (r, z) about z: V = π∮r²dz, and so on (Green's theorem)."""
    v, z, zz, xx = (
        boundary_integral([outline], f)
        for f in (lambda r, _: np.pi * r**2, lambda r, z: np.pi * r**2 * z,
                  lambda r, z: np.pi * r**2 * z**2, lambda r, _: np.pi / 4 * r**4)
    )
    return about_centre(v, [0, 0, z], np.diag([xx, xx, zz]))


def extruded_moments(outlines, height):
    """Outer outline counter-clockwise, holes clockwise; from z = 0 to height."""
    a, x, y, xx, xy, yy = (
        boundary_integral(outlines, f)
        for f in (lambda x, _: x, lambda x, _: x**2 / 2, lambda x, y: x * y,
                  lambda x, _: x**3 / 3, lambda x, y: x**2 * y / 2, lambda x, y: x * y**2)
    )
    h = height
    second = [[xx * h, xy * h, x * h**2 / 2], [xy * h, yy * h, y * h**2 / 2],
              [x * h**2 / 2, y * h**2 / 2, a * h**3 / 3]]
    return about_centre(a * h, [x * h, y * h, a * h**2 / 2], second)


# --- meshes ----------------------------------------------------------------------------------------------------


def grid(points, close_u, close_v, flip=0):
    """Triangulate a grid of points (u, v, 3); quads whose corners coincide become triangles; flip picks diagonals."""
    nu, nv = points.shape[:2]
    u, v = np.meshgrid(np.arange(nu if close_u else nu - 1), np.arange(nv if close_v else nv - 1), indexing="ij")
    a, b = points[u, v], points[(u + 1) % nu, v]
    c, d = points[(u + 1) % nu, (v + 1) % nv], points[u, (v + 1) % nv]
    one = ((u + v) % 2 == 0) if flip == 2 else np.full(u.shape, flip == 0)
    first = np.where(one[..., None, None], np.stack([a, b, c], -2), np.stack([a, b, d], -2))
    last = np.where(one[..., None, None], np.stack([a, c, d], -2), np.stack([b, c, d], -2))
    return proper(np.concatenate([first.reshape(-1, 3, 3), last.reshape(-1, 3, 3)]))


def proper(triangles):
    a, b, c = triangles[:, 0], triangles[:, 1], triangles[:, 2]
    same = (a == b).all(1) | (b == c).all(1) | (c == a).all(1)
    return triangles[~same]


def turned_mesh(outline, steps, flip=0, phase=0.0):
    """Turn the chords of an outline in (r, z); points on the axis become fans."""
    rz = chords(outline)
    rz[np.abs(rz[:, 0]) < 1e-9, 0] = 0.0
    angle = phase + 2 * np.pi * np.arange(steps) / steps
    points = np.empty((steps, len(rz), 3))
    points[..., 0] = rz[:, 0] * np.cos(angle)[:, None]
    points[..., 1] = rz[:, 0] * np.sin(angle)[:, None]
    points[..., 2] = rz[:, 1]
    triangles = grid(points, close_u=True, close_v=True, flip=flip)
    on_axis = (triangles[..., 0] == 0) & (triangles[..., 1] == 0)
    return triangles[on_axis.sum(1) < 2]


def flat_face(loops):
    """Triangulate a plane face with holes; keeps every given corner bit for bit."""
    face = Polygon(loops[0], loops[1:])
    parts = constrained_delaunay_triangles(face)
    triangles = np.array([np.array(p.exterior.coords)[:3] for p in parts.geoms])
    u, v = triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0]
    ccw = u[:, 0] * v[:, 1] > u[:, 1] * v[:, 0]
    triangles[~ccw] = triangles[~ccw][:, ::-1]
    return triangles


def extruded_mesh(outlines, height, flip=0):
    loops = [chords(outline) for outline in outlines]
    cap = flat_face(loops)
    top = np.concatenate([cap, np.full((*cap.shape[:2], 1), height)], -1)
    bottom = np.concatenate([cap, np.zeros((*cap.shape[:2], 1))], -1)[:, ::-1]
    walls = []
    for loop in loops:
        points = np.zeros((len(loop), 2, 3))
        points[:, :, :2] = loop[:, None]
        points[:, 1, 2] = height
        walls.append(grid(points, close_u=True, close_v=False, flip=flip))
    return np.concatenate([top, bottom, *walls])


def hull_mesh(points):
    hull = ConvexHull(points)
    triangles = points[hull.simplices]
    normals = np.cross(triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0])
    inward = np.einsum("ni,ni->n", normals, triangles[:, 0] - points.mean(0)) < 0
    triangles[inward] = triangles[inward][:, ::-1]
    return triangles
