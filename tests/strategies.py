"""Hypothesis strategies that every property test draws from: bodies that can exist, placements, shapes."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
from hypothesis import reject, settings
from hypothesis import strategies as st

from core.assembly import (
    Assembly,
    Cut,
    DataSheet,
    DriveAxis,
    Driver,
    Group,
    KnownAxial,
    KnownTensor,
    MeshBody,
    Node,
    Part,
    ShapeBody,
    six_of_tensor,
)
from core.assembly.link import Link
from core.errors import ShapeError
from core.material import ByDensity, ByMaterial, NotSet, PerArea, PerLength, Weighed
from core.mesh import MeshAsset
from core.moments import Moments
from core.placement import Copies, Mirrored, Placement, Pose, Ring, Row, Several
from core.shapes import (
    SHAPES,
    Box,
    Cone,
    Cylinder,
    Extruded,
    Frustum,
    Outline,
    Shape,
    Sphere,
    SpokedWheel,
    ToothedWheel,
    Tube,
    Turned,
)

# The first example of a test pays for lazy imports, and other jobs share the processor: time is no verdict.
settings.register_profile("masswright", deadline=None)
settings.load_profile("masswright")

# Sizes of machine parts in m, masses in kg; every drawn body is about a metre across at most.
LENGTHS = st.floats(1e-3, 1.0)
MASSES = st.floats(1e-3, 1e3)
ANGLES = st.floats(-np.pi, np.pi)
COORDINATES = st.floats(-1.0, 1.0)

points = st.tuples(COORDINATES, COORDINATES, COORDINATES).map(np.array)
directions = points.filter(lambda vector: np.linalg.norm(vector) > 1e-2)


@st.composite
def rotations(draw: st.DrawFn) -> np.ndarray:
    """A rotation matrix (3, 3) from a unit quaternion (Euler–Rodrigues parameters)."""
    numbers = np.array(draw(st.tuples(*[COORDINATES] * 4).filter(lambda q: np.linalg.norm(q) > 1e-2)))
    w, x, y, z = numbers / np.linalg.norm(numbers)
    return np.array(
        [
            [1 - 2 * (y * y + z * z), 2 * (x * y - w * z), 2 * (x * z + w * y)],
            [2 * (x * y + w * z), 1 - 2 * (x * x + z * z), 2 * (y * z - w * x)],
            [2 * (x * z - w * y), 2 * (y * z + w * x), 1 - 2 * (x * x + y * y)],
        ]
    )


@st.composite
def placements(draw: st.DrawFn) -> Placement:
    """A rigid placement without a mirror, shift within a metre."""
    return Placement(draw(rotations()), draw(points))


@st.composite
def mirrored_placements(draw: st.DrawFn) -> Placement:
    """A placement that turns left into right."""
    return Placement(draw(rotations()) @ np.diag([1.0, 1.0, -1.0]), draw(points))


@st.composite
def realisable_moments(draw: st.DrawFn) -> Moments:
    """The moments of a single body that can exist; flat bodies, rods and points among them."""
    mass = draw(MASSES)
    radii = np.array(draw(st.tuples(*[st.one_of(st.just(0.0), LENGTHS)] * 3)))
    turn = draw(rotations())
    return Moments(mass, draw(points), mass * turn @ np.diag(radii**2) @ turn.T)


@st.composite
def tubes(draw: st.DrawFn) -> Tube:
    outer = draw(LENGTHS)
    return Tube(outer, outer * draw(st.floats(0.0, 0.99)), draw(LENGTHS))


boxes = st.builds(Box, LENGTHS, LENGTHS, LENGTHS)
cylinders = st.builds(Cylinder, LENGTHS, LENGTHS)
cones = st.builds(Cone, LENGTHS, LENGTHS)
frusta = st.builds(Frustum, LENGTHS, st.one_of(st.just(0.0), LENGTHS), LENGTHS)
spheres = st.builds(Sphere, LENGTHS)
solids: st.SearchStrategy[Shape] = st.one_of(boxes, cylinders, tubes(), cones, frusta, spheres)


@st.composite
def toothed_wheels(draw: st.DrawFn) -> ToothedWheel:
    module, teeth = draw(st.floats(5e-4, 2e-2)), draw(st.integers(6, 120))
    root = module * (teeth - 2.5)
    angle = draw(st.floats(np.radians(10), np.radians(30)))
    return ToothedWheel(module, teeth, angle, draw(LENGTHS), root * draw(st.floats(0.0, 0.95)))


@st.composite
def spoked_wheels(draw: st.DrawFn) -> SpokedWheel:
    rim, spokes = draw(st.floats(0.1, 1.0)), draw(st.integers(2, 40))
    inner = rim * draw(st.floats(0.5, 0.99))
    hub = inner * draw(st.floats(0.1, 0.8))
    rim_width, hub_length = draw(LENGTHS), draw(LENGTHS)
    width = min(rim_width, hub_length) * draw(st.floats(0.1, 1.0))
    thickness = hub * np.tan(np.pi / max(spokes, 4)) * draw(st.floats(0.1, 0.99))
    bore = hub * draw(st.floats(0.0, 0.9))
    return SpokedWheel(rim, inner, rim_width, hub, bore, hub_length, spokes, width, thickness)


@st.composite
def star_loops(draw: st.DrawFn, size: float) -> list[tuple[float, float, float, float]]:
    """A loop around the origin: corners in the order of their angles, some rounded, some edges bent."""
    number = draw(st.integers(3, 9))
    turns = (np.arange(number) + np.array(draw(st.lists(st.floats(-0.3, 0.3), min_size=number, max_size=number))))
    radii = size * np.array(draw(st.lists(st.floats(0.6, 1.0), min_size=number, max_size=number)))
    angles = 2 * np.pi * turns / number
    x, y = radii * np.cos(angles), radii * np.sin(angles)
    chord = np.hypot(np.roll(x, -1) - x, np.roll(y, -1) - y)
    bends = draw(st.lists(st.sampled_from([0, 0, 1, -1]), min_size=number, max_size=number))
    widths = draw(st.lists(st.floats(0.7, 50.0), min_size=number, max_size=number))
    arcs = np.array(bends) * np.array(widths) * chord
    sharp = (arcs != 0) | (np.roll(arcs, 1) != 0)
    shares = np.array(draw(st.lists(st.sampled_from([0.0, 0.05, 0.1]), min_size=number, max_size=number)))
    roundings = np.where(sharp, 0.0, shares * np.minimum(chord, np.roll(chord, 1)))
    return [tuple(map(float, point)) for point in zip(x, y, roundings, arcs, strict=True)]


@st.composite
def outlines(draw: st.DrawFn) -> Outline:
    """An outline about the origin with straight, bent and rounded edges, with and without a hole."""
    size = draw(LENGTHS)
    loops = [draw(star_loops(size))]
    if draw(st.booleans()):
        loops.append(draw(star_loops(0.1 * size)))
    try:
        return Outline.of(*loops)
    except ShapeError:
        reject()


@st.composite
def turned_profiles(draw: st.DrawFn) -> Turned:
    outline = draw(outlines())
    inside = -min(float(edges.lowest_x().min()) for edges in outline.edges)
    gap = outline.size * draw(st.floats(0.0, 2.0))
    angle = draw(st.one_of(st.just(2 * np.pi), st.floats(0.01, 2 * np.pi)))
    return Turned(outline.moved(inside + gap, draw(COORDINATES)), angle)


SHARES = st.one_of(st.just(0.0), st.floats(0.01, 1.0))


@st.composite
def web_and_flanges(draw: st.DrawFn, key: str) -> Shape:
    """An I, channel or T section whose roundings fit."""
    height, width = draw(st.floats(0.01, 1.0)), draw(st.floats(0.01, 1.0))
    web, flange = width * draw(st.floats(0.02, 0.3)), height * draw(st.floats(0.02, 0.2))
    values = {"height": height, "width": width, "web": web, "flange": flange, "length": draw(LENGTHS)}
    steepest = min(0.5 * flange / width, 0.2)
    slope = steepest * draw(SHARES)
    names = {dimension.name for dimension in SHAPES[key].dimensions}
    values |= {"root_radius": 0.2 * min(width - web, height / 2 - 1.5 * flange) * draw(SHARES)}
    values |= {"toe_radius": 0.5 * min(flange, width / 8) * draw(SHARES), "slope": float(np.arctan(slope))}
    return SHAPES[key].of({name: value for name, value in values.items() if name in names})


@st.composite
def angle_sections(draw: st.DrawFn) -> Shape:
    leg_y, leg_x = draw(st.floats(0.01, 1.0)), draw(st.floats(0.01, 1.0))
    least = min(leg_x, leg_y)
    thickness = least * draw(st.floats(0.02, 0.5))
    root, toe = 0.4 * (least - thickness) * draw(SHARES), 0.5 * min(thickness, least - thickness) * draw(SHARES)
    return SHAPES["angle section"].of(
        {"leg_y": leg_y, "leg_x": leg_x, "thickness": thickness, "root_radius": root, "toe_radius": toe,
         "length": draw(LENGTHS)}
    )  # fmt: skip


@st.composite
def boxes_and_bars(draw: st.DrawFn, key: str) -> Shape:
    """A hollow section or a bar whose corner radii fit."""
    across = draw(st.floats(0.01, 1.0))
    other = across * draw(st.floats(1.0, 4.0))
    wall = across * draw(st.floats(0.01, 0.45))
    inner = (across / 2 - wall) * draw(SHARES)
    outer = min(inner + wall, across / 2) * draw(SHARES)
    values = {
        "height": other, "width": across, "side": across, "diameter": across, "thickness": other, "wall": wall,
        "outer_radius": outer, "inner_radius": inner, "corner_radius": across / 2 * draw(SHARES),
        "length": draw(LENGTHS),
    }  # fmt: skip
    names = {dimension.name for dimension in SHAPES[key].dimensions}
    return SHAPES[key].of({name: value for name, value in values.items() if name in names})


_BOXES_AND_BARS = (
    "circular hollow section", "square hollow section", "rectangular hollow section",
    "flat bar", "square bar", "round bar",
)  # fmt: skip
_WEB_AND_FLANGES = ("I section", "tapered I section", "channel section", "T section")

SECTION_STRATEGIES: dict[str, st.SearchStrategy[Shape]] = {
    **{key: web_and_flanges(key) for key in _WEB_AND_FLANGES},
    **{key: boxes_and_bars(key) for key in _BOXES_AND_BARS},
    "angle section": angle_sections(),
}

OWN_STRATEGIES: dict[str, st.SearchStrategy[Shape]] = {
    "toothed wheel": toothed_wheels(),
    "spoked wheel": spoked_wheels(),
    "extruded profile": st.builds(Extruded, outlines(), LENGTHS),
    "turned profile": turned_profiles(),
    **SECTION_STRATEGIES,
}


@st.composite
def shapes_of(draw: st.DrawFn, key: str) -> Shape:
    """A shape of one family with any dimensions that it takes; what breaks a rule between them is drawn again."""
    if key in OWN_STRATEGIES:
        return draw(OWN_STRATEGIES[key])
    kinds = {
        "length": LENGTHS,
        "angle": st.floats(0.01, np.pi),
        "count": st.integers(3, 40),
    }
    values = {
        one.name: draw(st.one_of(st.just(0.0), kinds[one.kind]) if one.may_be_zero else kinds[one.kind])
        for one in SHAPES[key].dimensions
    }
    try:
        return SHAPES[key].of(values)
    except ShapeError:
        reject()


# Every registered shape, whoever added it: with any dimensions, and with those the gallery starts from.
any_shapes: st.SearchStrategy[Shape] = st.sampled_from(sorted(SHAPES)).flatmap(shapes_of)
registered_shapes: st.SearchStrategy[Shape] = st.sampled_from(sorted(SHAPES)).map(
    lambda key: SHAPES[key].of({})
)


# Typed numbers: text together with the exact value that it means, worked out without the parser.
FINITE = st.floats(allow_nan=False, allow_infinity=False)
READABLE_SIZES = st.floats(1e-9, 1e9) | st.floats(-1e9, -1e-9) | st.just(0.0)


@st.composite
def typed_decimals(draw: st.DrawFn) -> tuple[str, Fraction]:
    """A decimal as typed with a point, without a sign."""
    digits = draw(st.text("0123456789", min_size=1, max_size=6))
    decimals = draw(st.none() | st.text("0123456789", max_size=6))
    text = digits if decimals is None else f"{digits}.{decimals}"
    return text, Fraction(int(digits + (decimals or "")), 10 ** len(decimals or ""))


def _joined(pieces: st.SearchStrategy[tuple[str, Fraction]]) -> st.SearchStrategy[tuple[str, Fraction]]:
    rules = {
        "+": lambda a, b: (f"({a[0]} + {b[0]})", a[1] + b[1]),
        "-": lambda a, b: (f"({a[0]} − {b[0]})", a[1] - b[1]),
        "*": lambda a, b: (f"({a[0]}*{b[0]})", a[1] * b[1]),
        "+*": lambda a, b: (f"({a[0]} + {b[0]}*{a[0]})", a[1] + b[1] * a[1]),
        "/": lambda a, b: (f"({a[0]}/{b[0]})", a[1] / b[1]) if b[1] else a,
        "negative": lambda a, _: (f"-({a[0]})", -a[1]),
    }
    return st.builds(lambda rule, a, b: rules[rule](a, b), st.sampled_from(sorted(rules)), pieces, pieces)


typed_sums = st.recursive(typed_decimals(), _joined, max_leaves=8).filter(lambda typed: len(typed[0]) <= 200)


# --- assemblies -------------------------------------------------------------------------------------------------

TRIPLES = st.tuples(COORDINATES, COORDINATES, COORDINATES)
DIRECTIONS = TRIPLES.filter(lambda vector: np.linalg.norm(vector) > 1e-2)
COUNTS = st.integers(1, 6)
# Anything a user can type into a text field: every character but halves of a pair.
TEXTS = st.text(st.characters(exclude_categories=["Cs"]), max_size=20)

poses = st.builds(Pose, TRIPLES, st.tuples(ANGLES, ANGLES, ANGLES))
rings = st.builds(
    Ring,
    COUNTS,
    TRIPLES,
    DIRECTIONS,
    ANGLES,
    st.one_of(st.just(2 * np.pi), st.just(-2 * np.pi), ANGLES),
    st.booleans(),
)
several_copies: st.SearchStrategy[Copies] = st.one_of(
    st.builds(Several, COUNTS),
    rings,
    st.builds(Row, COUNTS, TRIPLES),
    st.builds(Mirrored, TRIPLES, DIRECTIONS),
)
mass_drivers = st.one_of(
    st.builds(ByMaterial, TEXTS, st.floats(100, 2e4)),
    st.builds(ByDensity, st.floats(100, 2e4)),
    st.builds(Weighed, MASSES),
)
# For bodies without thickness a density says nothing: what stands in for it, by what the body has.
THIN_DRIVERS: dict[str, st.SearchStrategy[Driver]] = {
    "area": st.builds(PerArea, st.floats(0.1, 200)),
    "length": st.builds(PerLength, st.floats(0.01, 100)),
    "pieces": st.builds(Weighed, MASSES),
}
unset_or_mass_drivers = st.one_of(st.just(NotSet()), mass_drivers)


def tetrahedron_stl(legs: tuple[float, float, float]) -> bytes:
    """Return a binary STL of the tetrahedron with its right-angled corner at the origin, legs in file units."""
    corners = np.concatenate([np.zeros((1, 3)), np.diag(legs)])
    facets = np.zeros(4, dtype=[("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])
    facets["corners"] = corners[[[0, 2, 1], [0, 1, 3], [0, 3, 2], [1, 2, 3]]]
    return b"four facets".ljust(80) + np.uint32(4).tobytes() + facets.tobytes()


def mesh_body(legs: tuple[float, float, float], name: str, metres_per_unit: float) -> MeshBody:
    return MeshBody(MeshAsset.of_bytes(tetrahedron_stl(legs), name), metres_per_unit)


mesh_bodies = st.builds(
    mesh_body, st.tuples(*[st.floats(1, 100)] * 3), TEXTS, st.sampled_from([1e-3, 1e-2, 1.0, 0.0254, 0.3048])
)
geometric_bodies = st.one_of(st.builds(ShapeBody, st.one_of(solids, registered_shapes)), mesh_bodies)


@st.composite
def known_tensors(draw: st.DrawFn) -> KnownTensor:
    """A data sheet of a body that can exist, about its centre or about the origin of its frame."""
    body, about, source = draw(realisable_moments()), draw(st.sampled_from(["centre", "origin"])), draw(TEXTS)
    tensor = body.inertia_about_centre if about == "centre" else body.inertia_about_point(np.zeros(3))
    centre = tuple(float(value) for value in body.centre)
    return KnownTensor(float(body.mass), centre, six_of_tensor(tensor), about, source)


@st.composite
def known_axials(draw: st.DrawFn) -> KnownAxial:
    """A data sheet that gives one inertia, large enough for the centre that it gives."""
    mass, (x, y, z) = draw(MASSES), draw(TRIPLES)
    own = mass * draw(LENGTHS) ** 2
    return KnownAxial(
        mass, (x, y, z), own + mass * (x * x + y * y), draw(st.one_of(st.just(0.0), LENGTHS)), draw(TEXTS)
    )


@st.composite
def parts(draw: st.DrawFn, drivers: st.SearchStrategy[Driver] = unset_or_mass_drivers) -> Part:
    """A part of any kind; its key is not yet its own."""
    body = draw(st.one_of(geometric_bodies, known_tensors(), known_axials()))
    driver = DataSheet() if isinstance(body, KnownTensor | KnownAxial) else draw(drivers)
    if isinstance(body, ShapeBody) and driver.measure is not None and body.measure != driver.measure:
        driver = draw(THIN_DRIVERS[body.measure])
    typed = draw(st.lists(st.tuples(TEXTS, TEXTS), max_size=2).map(tuple))
    return Part("", draw(TEXTS), body, driver, draw(poses), draw(several_copies), typed, draw(TEXTS))


# Solids placed anywhere, to be taken out of a part; whether they meet it is not asked.
cuts = st.builds(Cut, st.just(""), TEXTS, solids, poses, several_copies, note=TEXTS)


# A step of a path, as a file system takes it and as no shorter way to the same place.
STEPS = TEXTS.filter(lambda text: text not in {"", ".", ".."} and not set("/\\\0") & set(text))
absolute_paths = st.lists(STEPS, min_size=1, max_size=4).map(lambda steps: "/" + "/".join(steps))
links = st.builds(Link, absolute_paths, st.text("0123456789abcdef", min_size=64, max_size=64))


def groups(members: st.SearchStrategy[Node]) -> st.SearchStrategy[Node]:
    """A group that holds up to three of the members; now and then as another document's lines."""
    held = st.lists(members, max_size=3).map(tuple)
    link = st.one_of(st.none(), st.none(), links)
    return st.builds(Group, st.just(""), TEXTS, held, poses, several_copies, note=TEXTS, link=link)


def with_own_keys(members: tuple[Node, ...], stem: str = "n") -> tuple[Node, ...]:
    """Return the nodes with keys that differ: where each stands in the tree."""
    return tuple(
        replace(node, key=f"{stem}.{at}", members=with_own_keys(node.members, f"{stem}.{at}"))
        if isinstance(node, Group)
        else replace(node, key=f"{stem}.{at}")
        for at, node in enumerate(members)
    )


@st.composite
def assemblies(draw: st.DrawFn, drivers: st.SearchStrategy[Driver] = unset_or_mass_drivers) -> Assembly:
    """A document: groups in groups, rings, rows and mirror images, known parts, meshes, several axes."""
    part = parts(drivers)
    inner = groups(part)
    outer = groups(st.one_of(part, inner))
    members = draw(st.lists(st.one_of(part, inner, outer), max_size=4).map(tuple))
    names = draw(st.lists(TEXTS, min_size=1, max_size=3, unique=True))
    axes = tuple(DriveAxis(name, draw(TRIPLES), draw(DIRECTIONS)) for name in names)
    return Assembly(draw(TEXTS), with_own_keys(members), axes, draw(st.sampled_from(names)))


@st.composite
def varied_assemblies(draw: st.DrawFn) -> Assembly:
    """A document with variants, lines and groups that are in some of them only, and one of them or none chosen."""
    whole = draw(assemblies(mass_drivers))
    variants = tuple(draw(st.lists(TEXTS.filter(str.strip), min_size=1, max_size=3, unique=True)))

    def put(members: tuple[Node, ...]) -> tuple[Node, ...]:
        made: list[Node] = []
        for node in members:
            only_in = tuple(draw(st.lists(st.sampled_from(variants), max_size=2, unique=True)))
            inner = {"members": put(node.members)} if isinstance(node, Group) else {}
            made.append(replace(node, only_in=only_in, **inner))
        return tuple(made)

    chosen = draw(st.sampled_from(("", *variants)))
    return replace(whole, members=put(whole.members), variants=variants, variant=chosen)
