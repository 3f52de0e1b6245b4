"""Round bodies as exporters write them: triangles whose corners lie on the true surface, beside the exact moments.

The exact values come from closed forms, or from Gauss quadrature of boundary integrals over the true outline
(lines, circular and elliptic arcs), which is exact to round-off. Lengths are pure numbers, the density is 1.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from round_outlines import (
    NODES,
    WEIGHTS,
    Arc,
    Line,
    about_centre,
    extruded_mesh,
    extruded_moments,
    grid,
    hull_mesh,
    proper,
    turned_mesh,
    turned_moments,
)
from scipy.spatial import Delaunay

from core.moments import Moments


@dataclass(frozen=True, eq=False)
class RoundBody:
    """A tessellation (n, 3, 3) and the moments of the body it stands for."""

    name: str
    triangles: np.ndarray
    exact: Moments

    def placed(self, seed: int, reach: float = 3.0) -> RoundBody:
        """Return it turned and shifted at random, by up to reach times its size."""
        rng = np.random.default_rng(seed)
        turn = random_turn(rng)
        size = np.ptp(self.triangles.reshape(-1, 3), axis=0).max()
        shift = rng.uniform(-reach, reach, 3) * size
        return replace(self, triangles=self.triangles @ turn.T + shift, exact=self.exact.mapped(turn, shift))

    def as_stored(self) -> RoundBody:
        """Return it with its corners rounded to float32, as a binary STL keeps them."""
        return replace(self, triangles=self.triangles.astype(np.float32).astype(np.float64))


def random_turn(rng: np.random.Generator) -> np.ndarray:
    q, r = np.linalg.qr(rng.normal(size=(3, 3)))
    q *= np.sign(np.diag(r))
    return q if np.linalg.det(q) > 0 else -q


# --- bodies ----------------------------------------------------------------------------------------------------

TAU = 2 * np.pi


def circle(x, y, r, steps, *, hole=False, phase=0.0):
    return [Arc((x, y), (r, r), phase, phase - TAU if hole else phase + TAU, steps)]


def polygon(*corners):
    return [Line(tuple(a), tuple(b)) for a, b in zip(corners, [*corners[1:], corners[0]], strict=True)]


def turned(name, outline, steps, **how):
    return RoundBody(f"{name} n={steps}", turned_mesh(outline, steps, **how), turned_moments(outline))


def extruded(name, outlines, height, **how):
    return RoundBody(name, extruded_mesh(outlines, height, **how), extruded_moments(outlines, height))


def cylinder(steps, radius=10.0, height=30.0):
    return turned("cylinder", polygon((0, 0), (radius, 0), (radius, height), (0, height)), steps)


def prism(sides, radius=10.0, height=30.0):
    corners = [(radius * np.cos(TAU * k / sides), radius * np.sin(TAU * k / sides)) for k in range(sides)]
    return extruded(f"prism {sides}", [polygon(*corners)], height)


def tube(steps, outer=20.0, inner=15.0, height=12.0):
    return turned("tube", polygon((inner, 0), (outer, 0), (outer, height), (inner, height)), steps, flip=2)


def cone(steps, radius=10.0, height=25.0):
    return turned("cone", polygon((0, 0), (radius, 0), (0, height)), steps)


def frustum(steps):
    return turned("frustum", polygon((0, 0), (12, 0), (7, 20), (0, 20)), steps, flip=1)


def sphere(steps, rings=None, radius=10.0):
    rings = rings or steps // 2
    outline = [Arc((0, 0), (radius, radius), -np.pi / 2, np.pi / 2, rings), Line((0, radius), (0, -radius))]
    return turned("sphere", outline, steps)


def hemisphere(steps):
    outline = [Line((0, 0), (10, 0)), Arc((0, 0), (10, 10), 0, np.pi / 2, steps // 4), Line((0, 10), (0, 0))]
    return turned("hemisphere", outline, steps)


def torus(steps, around=None, ring=30.0, radius=10.0, flip=0):
    outline = [Arc((ring, 0), (radius, radius), 0, TAU, around or steps // 2)]
    return turned("torus", outline, steps, flip=flip)


def spheroid(steps):
    outline = [Arc((0, 0), (10, 18), -np.pi / 2, np.pi / 2, steps // 2), Line((0, 18), (0, -18))]
    return turned("spheroid", outline, steps)


def ellipsoid(steps, stretch=(1.0, 1.6, 2.4)):
    ball = sphere(steps)
    return stretched(ball, f"ellipsoid n={steps}", stretch)


def stretched(body, name, stretch):
    factor = np.diag(stretch)
    exact = body.exact.mapped(factor, np.zeros(3)).times(float(np.prod(stretch)))
    return RoundBody(name, body.triangles @ factor, exact)


def filleted_disc(steps, per_quarter, radius=20.0, thick=10.0, fillet=3.0):
    r, t, f, q = radius, thick, fillet, per_quarter
    outline = [
        Line((0, 0), (r - f, 0)), Arc((r - f, f), (f, f), -np.pi / 2, 0, q), Line((r, f), (r, t - f)),
        Arc((r - f, t - f), (f, f), 0, np.pi / 2, q), Line((r - f, t), (0, t)), Line((0, t), (0, 0)),
    ]
    return turned(f"filleted disc q={q}", outline, steps)


def shouldered_shaft(steps, per_quarter):
    """A shaft with 30° lead-in chamfers, a shoulder with a concave fillet, and a cone."""
    outline = [
        Line((0, 0), (8, 0)), Line((8, 0), (8 + np.tan(np.pi / 6) * 2, 2)),
        Line((8 + np.tan(np.pi / 6) * 2, 2), (8 + np.tan(np.pi / 6) * 2, 30)),
        Arc((8 + np.tan(np.pi / 6) * 2 + 2, 30), (2, 2), np.pi, np.pi / 2, per_quarter),
        Line((8 + np.tan(np.pi / 6) * 2 + 2, 32), (16, 32)), Line((16, 32), (16, 45)), Line((16, 45), (12, 60)),
        Line((12, 60), (0, 60)), Line((0, 60), (0, 0)),
    ]
    return turned(f"shaft q={per_quarter}", outline, steps, flip=2)


def rope_pulley(steps, per_half):
    outline = [
        Line((5, 0), (30, 0)), Line((30, 0), (30, 3)), Arc((30, 8), (5, 5), -np.pi / 2, -3 * np.pi / 2, per_half),
        Line((30, 13), (30, 16)), Line((30, 16), (5, 16)), Line((5, 16), (5, 0)),
    ]
    return turned(f"pulley q={per_half}", outline, steps, flip=1)


def vase(steps, per_arc):
    """A turned profile of one convex and one concave arc that run into each other without a kink."""
    outline = [
        Line((0, 0), (10, 0)), Arc((10, 8), (8, 8), -np.pi / 2, np.pi / 4, per_arc),
        Arc((10 + 16 * np.cos(np.pi / 4), 8 + 16 * np.sin(np.pi / 4)), (8, 8), np.pi * 1.25, np.pi * 0.75, per_arc),
    ]
    x, y = outline[-1].at(1.0)
    outline += [Line((x, y), (0, y)), Line((0, y), (0, 0))]
    return turned(f"vase q={per_arc}", outline, steps)


def flange(steps, bolts=6, bolt_steps=None):
    bolt_steps = bolt_steps or max(12, steps // 3)
    holes = [
        circle(30 * np.cos(TAU * k / bolts), 30 * np.sin(TAU * k / bolts), 4, bolt_steps, hole=True)
        for k in range(bolts)
    ]
    return extruded(f"flange n={steps}/{bolt_steps}", [circle(0, 0, 40, steps), circle(0, 0, 12, steps, hole=True), *holes], 9.0)


def slotted_link(steps):
    """Two half circles joined by tangent flats, with two bores."""
    h = steps // 2
    outer = [Line((0, -10), (50, -10)), Arc((50, 0), (10, 10), -np.pi / 2, np.pi / 2, h), Line((50, 10), (0, 10)),
             Arc((0, 0), (10, 10), np.pi / 2, 3 * np.pi / 2, h)]
    return extruded(f"link n={steps}", [outer, circle(0, 0, 5, steps, hole=True), circle(50, 0, 4, steps, hole=True)], 8.0)


def rounded_plate(per_quarter, x=60.0, y=36.0, r=8.0, height=10.0):
    q = per_quarter
    outline = [
        Line((r, 0), (x - r, 0)), Arc((x - r, r), (r, r), -np.pi / 2, 0, q), Line((x, r), (x, y - r)),
        Arc((x - r, y - r), (r, r), 0, np.pi / 2, q), Line((x - r, y), (r, y)),
        Arc((r, y - r), (r, r), np.pi / 2, np.pi, q), Line((0, y - r), (0, r)),
        Arc((r, r), (r, r), np.pi, 3 * np.pi / 2, q),
    ]
    return extruded(f"rounded plate q={q}", [outline], height)


def elliptic_plate(steps):
    return extruded(f"elliptic plate n={steps}", [[Arc((0, 0), (30, 15), 0, TAU, steps)]], 6.0)


def half_disc(steps):
    return extruded(f"half disc n={steps}", [[Line((-10, 0), (10, 0)), Arc((0, 0), (10, 10), 0, np.pi, steps // 2)]], 7.0)


def ball_box(per_quarter, size=(40.0, 30.0, 20.0), r=5.0):
    """A block with all edges and corners rounded: the hull of its corner balls' lattice points."""
    q = per_quarter
    polar, azimuth = np.arange(2 * q + 1) * np.pi / 2 / q, np.arange(4 * q) * np.pi / 2 / q
    half = np.array(size) / 2 - r
    points = []
    for sx in (-1, 1):
        for sy in (-1, 1):
            for sz in (-1, 1):
                for p in polar:
                    for a in azimuth:
                        d = np.array([np.sin(p) * np.cos(a), np.sin(p) * np.sin(a), np.cos(p)])
                        d[np.abs(d) < 1e-12] = 0.0
                        if (d * (sx, sy, sz) >= 0).all():
                            points.append(d * r + half * (sx, sy, sz))
    points = np.unique(np.round(points, 12), axis=0)
    return RoundBody(f"ball box q={q}", hull_mesh(points), ball_box_moments(np.array(size), r))


def ball_box_moments(size, r):
    """By slices: at height z the section is a rectangle grown by a circle of radius ρ(z)."""
    a, b, c = size / 2 - r
    nodes = np.concatenate([-c - r * np.cos(NODES * np.pi / 2), c * (2 * NODES - 1), c + r * np.sin(NODES * np.pi / 2)])
    widths = np.concatenate([r * np.sin(NODES * np.pi / 2) * np.pi / 2 * WEIGHTS, 2 * c * WEIGHTS,
                             r * np.cos(NODES * np.pi / 2) * np.pi / 2 * WEIGHTS])
    rho = np.sqrt(np.maximum(r**2 - np.maximum(np.abs(nodes) - c, 0) ** 2, 0))
    area = 4 * a * b + 4 * rho * (a + b) + np.pi * rho**2

    def moment_xx(a, b):
        # centre block, two slabs beyond ±a, two slabs beyond ±b, four quarter discs at the corners
        slab = 2 * (2 * b) * ((a + rho) ** 3 - a**3) / 3
        quarter = 4 * (np.pi / 4 * rho**2 * a**2 + 2 * a * rho**3 / 3 + np.pi / 16 * rho**4)
        return 4 * a**3 * b / 3 + slab + 2 * rho * (2 * a) ** 3 / 12 + quarter

    second = np.diag([widths @ moment_xx(a, b), widths @ moment_xx(b, a), widths @ (area * nodes**2)])
    return about_centre(widths @ area, np.zeros(3), second)


def bent_tube(steps, around, radius=4.0, bend=15.0, leg=20.0):
    """A solid rod: a straight, a quarter bend, a straight."""
    angle = np.linspace(0, np.pi / 2, max(2, steps // 4) + 1)
    centres = [np.array([[bend, -leg, 0]]), np.stack([bend * np.cos(angle), bend * np.sin(angle), 0 * angle], -1),
               np.array([[-leg, bend, 0]])]
    out = [np.array([[1.0, 0, 0]]), np.stack([np.cos(angle), np.sin(angle), 0 * angle], -1), np.array([[0, 1.0, 0]])]
    centres, out = np.concatenate(centres), np.concatenate(out)
    turn = TAU * np.arange(around) / around
    rings = (centres[:, None] + radius * (np.cos(turn)[:, None] * out[:, None] + np.sin(turn)[:, None] * [0, 0, 1.0]))
    rings = np.round(rings, 12)
    ends = []
    for ring, centre, sign in ((rings[0], centres[0], 1), (rings[-1], centres[-1], -1)):
        fan = np.stack([np.broadcast_to(centre, ring.shape), ring, np.roll(ring, -1, axis=0)], 1)
        ends.append(fan[:, ::sign])
    mesh = np.concatenate([grid(rings, close_u=False, close_v=True), *ends])
    mesh = mesh if signed_volume(mesh) > 0 else mesh[:, ::-1]
    return RoundBody(f"bent rod n={steps}/{around}", mesh, bent_tube_moments(radius, bend, leg))


def signed_volume(triangles):
    return np.einsum("ni,ni->", triangles[:, 0], np.cross(triangles[:, 1], triangles[:, 2])) / 6


def bent_tube_moments(radius, bend, leg):
    across = np.pi * radius**4 / 4
    mass = np.pi * radius**2 * leg
    along = mass * leg**2 / 12
    one = Moments(mass, [bend, -leg / 2, 0], np.diag([across * leg, along, across * leg]))
    two = Moments(mass, [-leg / 2, bend, 0], np.diag([along, across * leg, across * leg]))
    # The quarter torus by quadrature over its section (polar) and its sweep; the integrands are smooth.
    s, ws = radius * NODES, radius * WEIGHTS
    t, wt = TAU * np.arange(64) / 64, np.full(64, TAU / 64)
    a, wa = np.pi / 2 * NODES, np.pi / 2 * WEIGHTS
    S, T, A = np.meshgrid(s, t, a, indexing="ij")
    weight = ws[:, None, None] * wt[None, :, None] * wa * S * (bend + S * np.cos(T))
    r = np.stack([(bend + S * np.cos(T)) * np.cos(A), (bend + S * np.cos(T)) * np.sin(A), S * np.sin(T)])
    second = np.einsum("abc,iabc,jabc->ij", weight, r, r)
    return one + two + about_centre(weight.sum(), np.einsum("abc,iabc->i", weight, r), second)


def icosphere(level, radius=10.0):
    g = (1 + 5**0.5) / 2
    points = np.array([[s, t * g, 0] for s in (-1, 1) for t in (-1, 1)])
    points = np.concatenate([points, points[:, [2, 0, 1]], points[:, [1, 2, 0]]])
    mesh = hull_mesh(points / np.linalg.norm(points[0]))
    for _ in range(level):
        a, b, c = mesh.transpose(1, 0, 2)
        ab, bc, ca = (m / np.linalg.norm(m, axis=1, keepdims=True) for m in (a + b, b + c, c + a))
        mesh = np.concatenate([np.stack(t, 1) for t in ((a, ab, ca), (ab, b, bc), (ca, bc, c), (ab, bc, ca))])
    mesh = np.round(mesh, 13) * radius
    return RoundBody(f"icosphere {level}", mesh, sphere(8).exact)


def scattered_sphere(count, seed=0):
    """The hull of random points on a ball: what a careless remeshing leaves, needles and all."""
    points = np.random.default_rng(seed).normal(size=(count, 3))
    points *= 10 / np.linalg.norm(points, axis=1, keepdims=True)
    return RoundBody(f"scattered sphere {count}", hull_mesh(points), sphere(8).exact)


def remeshed_sphere(count):
    """The hull of evenly spread points on a ball (a golden spiral)."""
    k = np.arange(count) + 0.5
    z, a = 1 - 2 * k / count, np.pi * (1 + 5**0.5) * k
    points = 10 * np.stack([np.sqrt(1 - z**2) * np.cos(a), np.sqrt(1 - z**2) * np.sin(a), z], -1)
    return RoundBody(f"remeshed sphere {count}", hull_mesh(points), sphere(8).exact)


def remeshed_ellipsoid(count):
    return stretched(remeshed_sphere(count), f"remeshed ellipsoid {count}", (1.0, 1.5, 0.8))


def remeshed_cylinder(steps, rows, *, seed=0, radius=10.0, height=30.0, shake=0.3):
    """A cylinder wall of nearly even triangles with shaken corners, fans as caps."""
    rng = np.random.default_rng(seed)
    k, z = np.meshgrid(np.arange(steps), np.arange(rows + 1), indexing="ij")
    inner = (z > 0) & (z < rows)
    u = k + 0.5 * (z % 2) + shake * rng.uniform(-1, 1, k.shape)
    v = z + np.where(inner, shake * rng.uniform(-1, 1, k.shape), 0)
    # Triangulated in the unrolled plane, three copies side by side; the middle one is kept.
    flat = np.stack([np.concatenate([u.ravel() + c * steps for c in (-1, 0, 1)]), np.tile(v.ravel(), 3)], -1)
    scaled = flat * [radius * TAU / steps, height / rows]
    simplices = Delaunay(scaled).simplices
    middle = flat[simplices, 0].mean(1)
    simplices = simplices[(middle >= 0) & (middle < steps)]
    index = simplices % k.size
    a, h = TAU * u.ravel() / steps, height * v.ravel() / rows
    points = np.stack([radius * np.cos(a), radius * np.sin(a), h], -1)
    wall = proper(points[index])
    caps = []
    for row, level in ((0, 0.0), (rows, height)):
        ring = points.reshape(steps, rows + 1, 3)[:, row]
        caps.append(np.stack([np.broadcast_to([0, 0, level], ring.shape), ring, np.roll(ring, -1, 0)], 1))
    outward = np.einsum("ni,ni->n", np.cross(wall[:, 1] - wall[:, 0], wall[:, 2] - wall[:, 0]), wall.mean(1) * [1, 1, 0])
    wall[outward < 0] = wall[outward < 0][:, ::-1]
    return RoundBody(f"remeshed cylinder {steps}x{rows}", np.concatenate([caps[0][:, ::-1], caps[1], wall]),
                     cylinder(8).exact)


def antiprism_cylinder(steps, radius=10.0, height=30.0):
    """A cylinder whose lower ring is turned by half a step: long needles, none of them in a common plane."""
    a = TAU * np.arange(steps) / steps
    top = np.stack([radius * np.cos(a), radius * np.sin(a), np.full(steps, height)], -1)
    low = np.stack([radius * np.cos(a + a[1] / 2), radius * np.sin(a + a[1] / 2), np.zeros(steps)], -1)
    up = np.stack([top, low, np.roll(top, -1, 0)], 1)
    down = np.stack([low, np.roll(low, -1, 0), np.roll(top, -1, 0)], 1)
    caps = [np.stack([np.broadcast_to([0, 0, height], top.shape), top, np.roll(top, -1, 0)], 1),
            np.stack([np.zeros_like(low), np.roll(low, -1, 0), low], 1)]
    return RoundBody(f"needle cylinder {steps}", np.concatenate([up, down, *caps]), cylinder(8).exact)


def shaken_torus(steps, around, *, seed=0, shake=0.25, ring=30.0, radius=10.0):
    rng = np.random.default_rng(seed)
    u, v = np.meshgrid(np.arange(steps, dtype=float), np.arange(around, dtype=float), indexing="ij")
    u += shake * rng.uniform(-1, 1, u.shape)
    v += shake * rng.uniform(-1, 1, u.shape)
    a, b = TAU * u / steps, TAU * v / around
    r = ring + radius * np.cos(b)
    points = np.stack([r * np.cos(a), r * np.sin(a), radius * np.sin(b)], -1)
    return RoundBody(f"shaken torus {steps}x{around}", grid(points, close_u=True, close_v=True, flip=2), torus(8).exact)


# --- bodies that are flat already ------------------------------------------------------------------------------


def flat(name, corners, height):
    return extruded(name, [polygon(*corners)], height)


def flat_bodies():
    """Return bodies that are their own tessellation: nothing of them may change."""
    return [
        flat("box", [(0, 0), (40, 0), (40, 30), (0, 30)], 20),
        prism(3), prism(6), prism(8), prism(9),
        flat("L-bracket", [(0, 0), (60, 0), (60, 5), (5, 5), (5, 40), (0, 40)], 30),
        flat("chamfered block", [(3, 0), (37, 0), (40, 3), (40, 27), (37, 30), (3, 30), (0, 27), (0, 3)], 20),
        flat("30° bevels", [(2, 0), (38, 0), (40, 3.5), (40, 30), (0, 30), (0, 3.5)], 20),
        flat("low roof", [(0, 0), (40, 0), (40, 20), (20, 22), (0, 20)], 30),
        flat("gable of 30°", [(0, 0), (40, 0), (40, 20), (20, 25.4), (0, 20)], 30),
        flat("shallow V block", [(0, 0), (40, 0), (40, 20), (20, 16), (0, 20)], 30),
        flat("single bevels of 15°", [(0, 0), (40, 0), (40, 20), (36, 21.1), (4, 21.1), (0, 20)], 30),
        flat("double chamfer", [(0, 0), (40, 0), (40, 26), (38.8, 28.8), (36, 30), (0, 30)], 12),
    ]


def pyramid(sides, radius=20.0, height=5.0):
    angle = TAU * np.arange(sides) / sides
    rim = np.stack([radius * np.cos(angle), radius * np.sin(angle), 0 * angle], -1)
    return hull_mesh(np.concatenate([rim, [[0, 0, height]]]))


def tapered_prism(sides, low, high, height):
    angle = TAU * np.arange(sides) / sides
    ring = np.stack([np.cos(angle), np.sin(angle), 0 * angle], -1)
    return hull_mesh(np.concatenate([low * ring, high * ring + [0, 0, height]]))


def polyhedra():
    """Return (name, triangles) of bodies of flat faces whose normals turn by little from face to face."""
    found = [(f"flat pyramid {n}", pyramid(n)) for n in (3, 4, 5, 6, 8, 9)]
    found += [(f"flat frustum {n}", tapered_prism(n, 20.0, 12.0, 2.9)) for n in (3, 4, 6, 8)]
    found += [(f"steep frustum {n}", tapered_prism(n, 20.0, 18.0, 20.0)) for n in (3, 4, 6, 8)]
    found += [(f"hull of {n} points in a cube", hull_mesh(np.random.default_rng(0).uniform(-1, 1, (n, 3))))
              for n in (8, 12, 20)]
    roof = np.array([[x, y, 0.0] for x in (-20, 20) for y in (-10, 10)] + [[-14, 0, 4], [14, 0, 4]])
    found.append(("hipped roof", hull_mesh(roof)))
    plate = [(0, 0), (40, 0), (52, 5), (60, 14), (58, 30), (40, 41), (10, 38), (-4, 20)]
    found.append(("irregular plate", flat("", plate, 5).triangles))
    return found


def round_bodies():
    """Return the bodies on which the median gain is measured, from coarse to fine."""
    bodies = []
    for n in (12, 16, 24, 48, 120):
        bodies += [cylinder(n), tube(n), cone(n), frustum(n), sphere(n), hemisphere(n), spheroid(n), ellipsoid(n),
                   torus(n, max(12, n // 2)), flange(n), slotted_link(n), elliptic_plate(n), half_disc(n), antiprism_cylinder(n),
                   bent_tube(n, max(12, n // 2))]
    for n, q in ((16, 3), (24, 3), (24, 4), (36, 6), (72, 12)):
        bodies += [filleted_disc(n, q), shouldered_shaft(n, q), rope_pulley(n, 2 * q), vase(n, 2 * q),
                   rounded_plate(q), ball_box(q)]
    bodies += [icosphere(level) for level in (1, 2, 3, 4)]
    for count in (200, 1000, 5000):
        bodies += [remeshed_sphere(count), remeshed_ellipsoid(count), scattered_sphere(count)]
    for n, rows in ((16, 6), (32, 12), (64, 24)):
        bodies += [remeshed_cylinder(n, rows), shaken_torus(2 * n, n), torus(n, max(12, n // 2), flip=2)]
    return bodies


def half_sizes_of_error(error_of):
    """Return (name, coarse, fine) volume errors at n and 2n steps, for every kind of body with steps."""
    kinds = (cylinder, tube, cone, frustum, sphere, hemisphere, spheroid, ellipsoid, slotted_link, elliptic_plate,
             half_disc, antiprism_cylinder)
    pairs = [(make(60), make(120)) for make in kinds]
    pairs += [(torus(60, 60), torus(120, 120)), (flange(60, 6, 60), flange(120, 6, 120)),
              (bent_tube(60, 60), bent_tube(120, 120)), (ball_box(6), ball_box(12)),
              (rounded_plate(8), rounded_plate(16)), (filleted_disc(60, 12), filleted_disc(120, 24)),
              (shouldered_shaft(60, 12), shouldered_shaft(120, 24)), (rope_pulley(60, 24), rope_pulley(120, 48)),
              (vase(60, 12), vase(120, 24)), (icosphere(3), icosphere(4))]
    return [(coarse.name, error_of(coarse)[k], error_of(fine)[k]) for coarse, fine in pairs for k in (0, 1)]
