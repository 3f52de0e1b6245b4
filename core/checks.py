"""Whether a body with these mass properties can exist, and if not, which slip would explain it.

Each check compares two numbers by one rule of mechanics and says so in one sentence. When a rule is broken,
the usual slips (a power of ten, a unit, a sign, the other point) are tried one by one, and those that would
explain it are named. Nothing is corrected here. Every argument is of one body.
"""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

import numpy as np

from core.arrays import ArrayLike, BoolArray, FloatArray
from core.moments import Moments, inertia_of_spread, spread_of_inertia

# Relative to the largest principal moment, reach or size: what adding and moving may cost in round-off.
ROUND_OFF = 1e-6
# The same for figures copied from a data sheet: half a unit of the third digit.
ROUNDED_FIGURES = 5e-3
# kg/m³: from light foam to a little above the densest metals.
DENSITY_RANGE = (20.0, 23_000.0)

# Checks that a body keeps and a reader wants to know of all the same: cuts that stick out, mends.
REMARKS = frozenset({"cut", "mends"})

# What most machine parts are made of, kg/m³: a slip is only named if it leads here.
_USUAL_DENSITIES = (900.0, 12_000.0)
# A named unit is only likely if the radius of gyration then is at least this share of the part's reach.
_USUAL_GYRATION = 0.2
_MOST_CAUSES = 2
_POWERS = (10, 100, 1000)
_AXES = "xyz"
# Numbers that are longer than four digits and still easier to read without an exponent.
_READABLE = (1e4, 1e6)

_INERTIA_SLIPS = (
    ("it is in kg·cm² and was read as kg·m²", 1e-4),
    ("it is in kg·mm² and was read as kg·m²", 1e-6),
    ("it is in g·cm² and was read as kg·m²", 1e-7),
    ("it is a flywheel effect GD², which is 4 J", 0.25),
    ("it is in lb·ft² and was read as kg·m²", 0.0421401),
    ("it is in lb·in² and was read as kg·m²", 2.92640e-4),
)
_DENSITY_SLIPS = (
    ("the mass is in g and was read as kg", 1e-3),
    ("the mass is in kg and was read as g", 1e3),
    ("the lengths are in cm and were read as mm", 1e-3),
    ("the lengths are in mm and were read as cm", 1e3),
    ("the lengths are in inches and were read as mm", 25.4**-3),
    ("the lengths are in mm and were read as inches", 25.4**3),
    ("the lengths are in m and were read as mm", 1e-9),
    ("the lengths are in mm and were read as m", 1e9),
)
_LENGTH_SLIPS = (
    ("the centre is in mm and was read as m", 1e-3),
    ("the centre is in mm and was read as cm", 0.1),
    ("the centre is in mm and was read as inches", 1 / 25.4),
    ("the centre is in inches and was read as m", 0.0254),
)


@dataclass(frozen=True)
class Check:
    """The answer to one question about a body.

    Attributes:
        name: the rule, in a few words, the same for every body.
        ok: whether the body keeps it.
        text: one line with part, rule, both numbers, and the likely cause where the rule is broken.
    """

    name: str
    ok: bool
    text: str


def check_body(
    moments: Moments,
    *,
    name: str,
    volume: float | None = None,
    reach: float | None = None,
    bounds: ArrayLike | None = None,
    tolerance: float = ROUND_OFF,
) -> list[Check]:
    """Return every check the known values allow; without a mass only the failing one.

    Args:
        moments: of a single body.
        name: the part's, for the sentences.
        volume: m³; adds the density check.
        reach: m, distance of the part's farthest point from its centre; adds the check of the radius of
            gyration. Without it the farthest corner of bounds stands in.
        bounds: (2, 3) m, lowest and highest corner of the box around the part; adds the check of the centre.
        tolerance: relative; ROUNDED_FIGURES for values copied from a data sheet.
    """
    for first in (check_finite(moments, name), check_mass(float(moments.mass), name)):
        if not first.ok:
            return [first]
    inertia = moments.inertia_about_centre
    checks = [first, check_symmetric(inertia, name, tolerance)]
    shifted = inertia + _transfer(float(moments.mass), moments.centre)
    readings = _readings(inertia, np.zeros((3, 3)), other_point=shifted)
    checks.append(_check_principal(inertia, readings, name, tolerance * np.abs(inertia).max()))
    if volume is not None:
        checks.append(check_density(float(moments.mass), volume, name))
    if bounds is not None:
        checks.append(check_centre(moments.centre, bounds, name, tolerance))
        reach = _farthest_corner(moments.centre, bounds) if reach is None else reach
    if reach is not None:
        checks.append(check_gyration(moments, reach, name, tolerance))
    return checks


def surely_sound(moments: Moments, volume: FloatArray, bounds: FloatArray) -> BoolArray:
    """Return of which bodies (n,) check_body finds every check kept; of the others some may be kept, too.

    Args:
        moments: a batch (n,).
        volume: (n,) m³; nan where a body has none.
        bounds: (n, 2, 3) m, lowest and highest corner of the box around each.
    """
    mass, centre, spread = moments.mass, moments.centre, moments.spread
    finite = np.isfinite(mass) & np.isfinite(centre).all(axis=1) & np.isfinite(spread).all(axis=(1, 2)) & (mass > 0)
    spread = np.where(finite[:, None, None], spread, 0.0)
    values = np.linalg.eigvalsh(spread)
    low, high = bounds[:, 0], bounds[:, 1]
    with np.errstate(divide="ignore", invalid="ignore"):
        density = mass / volume
        reach = np.linalg.norm(np.maximum(np.abs(low - centre), np.abs(high - centre)), axis=1)
        # Held more strictly than one by one: what is near a limit is looked at again there.
        possible = (values[:, 0] >= -0.1 * ROUND_OFF * values[:, 2]) & (values[:, 2] > 0)
        gyrates = values[:, 1] + values[:, 2] <= mass * reach**2
        inside = ((centre >= low) & (centre <= high)).all(axis=1)
        dense = np.isnan(volume) | ((density > DENSITY_RANGE[0]) & (density < DENSITY_RANGE[1]))
    symmetric = (spread == np.swapaxes(spread, 1, 2)).all(axis=(1, 2))
    return np.asarray(finite & symmetric & possible & gyrates & inside & dense)


def check_inertia_tensor(
    mass: float, tensor: ArrayLike, name: str, *, lever: ArrayLike = (0.0, 0.0, 0.0)
) -> list[Check]:
    """Return the checks of a tensor as a data sheet gives it, before it becomes Moments.

    Args:
        mass: kg.
        tensor: (3, 3) kg·m², tensor elements (off-diagonal = −∫xy dm), about a point of the source's choice.
        name: the part's.
        lever: (3,) m from that point to the centre of mass, along the tensor's axes.
    """
    given = np.asarray(tensor, dtype=float)
    if not np.isfinite(given).all():
        return [_finite(["inertia"], name)]
    checks = [check_mass(mass, name), check_symmetric(given, name, ROUNDED_FIGURES)]
    if not all(check.ok for check in checks):
        return checks
    transfer = _transfer(mass, lever)
    readings = _readings(given, transfer, other_point=given)
    slack = ROUNDED_FIGURES * np.abs(given).max()
    return [*checks, _check_principal(given - transfer, readings, name, slack)]


def check_finite(moments: Moments, name: str) -> Check:
    """Return whether mass, centre and second moment are finite numbers."""
    parts = {"mass": moments.mass, "centre of mass": moments.centre, "inertia": moments.spread}
    bad = [what for what, values in parts.items() if not np.isfinite(values).all()]
    return _finite(bad, name)


def check_mass(mass: float, name: str) -> Check:
    """Return whether a mass in kg is more than 0."""
    rule = f"{name}: a mass is more than 0 kg"
    if mass > 0:
        return Check("mass", ok=True, text=f"{rule}; it is {_g(mass)} kg.")
    remedy = "Choose its material or enter its mass."
    if mass < 0:
        remedy = _likely(["more is cut away than there is", "the sign is wrong"])
    return Check("mass", ok=False, text=f"{rule}, but it is {_g(mass)} kg. {remedy}")


def check_symmetric(tensor: ArrayLike, name: str, tolerance: float = ROUND_OFF) -> Check:
    """Return whether an inertia tensor (3, 3) in kg·m² is symmetric, relative to its largest element."""
    matrix = np.asarray(tensor, dtype=float)
    gaps = np.abs(matrix - matrix.T)
    i, j = (int(k) for k in np.unravel_index(gaps.argmax(), (3, 3)))
    if gaps[i, j] <= tolerance * np.abs(matrix).max():
        return Check("symmetric tensor", ok=True, text=f"{name}: the inertia tensor is symmetric.")
    one, two = float(matrix[i, j]), float(matrix[j, i])
    shown = _apart(one, two)
    names = f"I{_AXES[i]}{_AXES[j]} and I{_AXES[j]}{_AXES[i]}"
    causes = ["one of them has the wrong sign"] if np.isclose(one, -two, rtol=ROUNDED_FIGURES) else []
    low, high = sorted((abs(one), abs(two)))
    off = [power for power in _POWERS if np.isclose(high, power * low, rtol=ROUNDED_FIGURES)]
    causes += [f"the decimal point of one of them is off by a factor of {power}" for power in off]
    text = f"{name}: {names} of an inertia tensor are equal, but they are {shown[0]} and {shown[1]} kg·m²."
    return Check("symmetric tensor", ok=False, text=f"{text} {_likely(causes)}")


def check_density(mass: float, volume: float, name: str) -> Check:
    """Return whether mass (kg) over volume (m³) is a density that solids have."""
    low, high = DENSITY_RANGE
    if volume <= 0:
        text = f"{name}: a volume is more than 0 m³, but it is {_g(volume)} m³."
        return Check("density", ok=False, text=f"{text} {_likely(['the mesh is open or inside out'])}")
    density = mass / volume
    rule = f"{name}: a density lies between {_g(low)} and {_g(high)} kg/m³"
    if low <= density <= high:
        return Check("density", ok=True, text=f"{rule}; it is {_g(density)} kg/m³.")
    least, most = _USUAL_DENSITIES
    causes = [said for said, factor in _DENSITY_SLIPS if least <= density * factor <= most]
    text = f"{rule}, but {_g(mass)} kg in {_g(volume)} m³ are {_g(density)} kg/m³."
    return Check("density", ok=False, text=f"{text} {_likely(causes)}")


def check_gyration(moments: Moments, reach: float, name: str, tolerance: float = ROUND_OFF) -> Check:
    """Return whether the largest radius of gyration is within the part's reach (m) from its centre."""
    mass = float(moments.mass)
    radius = _largest_gyration(moments.inertia_about_centre, mass)
    rule = (
        f"{name}: a radius of gyration is at most the distance from the centre of mass to the farthest point"
    )
    if radius <= reach * (1 + tolerance):
        return Check("radius of gyration", ok=True, text=f"{rule}; {_g(radius)} m is within {_g(reach)} m.")
    causes = []
    nearer = moments.inertia_about_centre - _transfer(mass, moments.centre)
    if _is_possible(nearer, 0.0) and _largest_gyration(nearer, mass) <= reach:
        causes.append("the tensor is about the origin and was read as about the centre of mass")
    fitting = [power for power in _POWERS if radius <= reach * power**0.5]
    causes += [f"the inertia is {power} times too large or the mass too small" for power in fitting[:1]]
    share = radius / reach
    causes += [said for said, factor in _INERTIA_SLIPS if _USUAL_GYRATION <= share * factor**0.5 <= 1]
    shown = _apart(radius, reach)
    text = f"{rule}, but {shown[0]} m is more than {shown[1]} m."
    return Check("radius of gyration", ok=False, text=f"{text} {_likely(causes)}")


def check_centre(centre: ArrayLike, bounds: ArrayLike, name: str, tolerance: float = ROUND_OFF) -> Check:
    """Return whether the centre of mass (3,) lies within the box (2, 3) around the part; m, in one frame."""
    point, (low, high) = np.asarray(centre, dtype=float), np.asarray(bounds, dtype=float)
    slack = tolerance * float(np.linalg.norm(high - low))

    def inside(trial: FloatArray) -> bool:
        return bool(np.all(trial >= low - slack) and np.all(trial <= high + slack))

    rule = f"{name}: a centre of mass lies within the box around the part"
    if inside(point):
        return Check("centre within the part", ok=True, text=f"{rule}.")
    axis = int(np.maximum(low - point, point - high).argmax())
    causes = (
        [f"the sign of {_AXES[axis]} is wrong"]
        if inside(np.where(np.arange(3) == axis, -point, point))
        else []
    )
    causes += [said for said, factor in _LENGTH_SLIPS if inside(point * factor)]
    causes += ["it is given in another frame than the part's shape"]
    shown = _apart(float(point[axis]), float(low[axis]), float(high[axis]))
    text = f"{rule}, but its {_AXES[axis]} = {shown[0]} m is not between {shown[1]} and {shown[2]} m."
    return Check("centre within the part", ok=False, text=f"{text} {_likely(causes)}")


def check_axis_inertia(
    moments: Moments, point: ArrayLike, direction: ArrayLike, *, stated: float, name: str
) -> Check:
    """Return whether a stated inertia about an axis is at least that of the parallel one through the centre.

    Args:
        moments: of the single body; point (3,) m and direction (3,) lie in the same frame.
        point: on the axis.
        direction: of the axis, any length.
        stated: kg·m² about that axis, from a data sheet or a measurement.
        name: the part's.
    """
    own = float(moments.own_inertia_along(direction))
    rule = f"{name}: J about an axis is at least J about the parallel axis through the centre of mass"
    if stated >= own * (1 - ROUNDED_FIGURES):
        return Check(
            "inertia about an axis", ok=True, text=f"{rule}; {_g(stated)} is at least {_g(own)} kg·m²."
        )
    whole = float(moments.inertia_about_axis(point, direction))
    causes = [f"it is {power} times too small" for power in _POWERS if stated * power >= own][:1]
    shown = _apart(stated, own)
    text = f"{rule}, but {shown[0]} is less than {shown[1]} kg·m². With m·d² it would be {_g(whole)} kg·m²."
    return Check("inertia about an axis", ok=False, text=f"{text} {_likely(causes)}")


def _check_principal(
    inertia: FloatArray, readings: Iterable[tuple[str, str, FloatArray]], name: str, slack: float
) -> Check:
    """Return whether a tensor about the centre of mass keeps the triangle inequality, within slack kg·m².

    It is the same as asking that no eigenvalue of the second moment is negative.
    """
    small, middle, large = (float(value) for value in np.linalg.eigvalsh(0.5 * (inertia + inertia.T)))
    rule = f"{name}: a principal moment about the centre of mass is at most the sum of the other two"
    others = f"{_g(small)} + {_g(middle)}"
    if _is_possible(inertia, slack):
        return Check("principal moments", ok=True, text=f"{rule}; {_g(large)} against {others} kg·m².")
    # Of several powers of ten for one value, the first that would do is enough.
    fitting = [(subject, said) for subject, said, trial in readings if _is_possible(trial, slack)]
    causes = list(dict(reversed(fitting)).values())[::-1]
    if small < 0:
        rule = f"{name}: no principal moment about the centre of mass is negative"
        found = f"but one is {_g(small)} kg·m², beside {_g(middle)} and {_g(large)} kg·m²"
    else:
        shown = _apart(large, small + middle)
        found = f"but {shown[0]} is more than {others} = {shown[1]} kg·m²"
    return Check("principal moments", ok=False, text=f"{rule}, {found}. {_likely(causes)}")


def _readings(
    given: FloatArray, transfer: FloatArray, other_point: FloatArray
) -> Iterator[tuple[str, str, FloatArray]]:
    """Yield other ways to read a tensor: the value in doubt, the slip, the tensor about the centre then.

    Args:
        given: (3, 3) kg·m², about some point.
        transfer: (3, 3) kg·m², the parallel-axis term between that point and the centre of mass.
        other_point: (3, 3) kg·m², the tensor about the centre if the value was about the centre already.
    """
    if np.any(other_point != given - transfer):
        said = "the tensor is about the centre of mass, not about the origin"
        yield "point", said, other_point
    signs = 2 * np.eye(3) - 1
    yield "signs", "the products of inertia have the other sign (+∫xy dm)", given * signs - transfer
    for power in _POWERS:
        for factor, word in ((1 / power, "large"), (power, "small")):
            for axis in range(3):
                trial = given.copy()
                trial[axis, axis] *= factor
                label = f"I{_AXES[axis]}{_AXES[axis]}"
                instead = f"{_g(given[axis, axis])} instead of {_g(trial[axis, axis])} kg·m²"
                yield label, f"{label} is {power} times too {word} ({instead})", trial - transfer
    for power in _POWERS if np.any(transfer) else ():
        yield "mass", f"the mass is {power} times too large", given - transfer / power


def _is_possible(inertia: FloatArray, slack: float) -> bool:
    """Return whether a tensor about the centre keeps the triangle inequality, within slack kg·m²."""
    lowest = float(np.linalg.eigvalsh(spread_of_inertia(0.5 * (inertia + inertia.T)))[0])
    return 2 * lowest >= -slack


def _largest_gyration(inertia: FloatArray, mass: float) -> float:
    return float(np.sqrt(max(float(np.linalg.eigvalsh(inertia)[-1]), 0.0) / mass))


def _transfer(mass: float, lever: ArrayLike) -> FloatArray:
    d = np.asarray(lever, dtype=float)
    return inertia_of_spread(mass * np.outer(d, d))


def _farthest_corner(centre: FloatArray, bounds: ArrayLike) -> float:
    return float(np.linalg.norm(np.abs(np.asarray(bounds, dtype=float) - centre).max(axis=0)))


def _finite(bad: list[str], name: str) -> Check:
    text = (
        f"{name}: not a finite number: {', '.join(bad)}."
        if bad
        else f"{name}: all values are finite numbers."
    )
    return Check("finite numbers", not bad, text)


def _likely(causes: list[str]) -> str:
    if not causes:
        return "Compare it with its source: decimal point, unit, sign, and the point and frame it is about."
    return f"Likely cause: {'; or '.join(causes[:_MOST_CAUSES])}."


def _g(value: float) -> str:
    whole = _READABLE[0] <= abs(value) < _READABLE[1]
    return f"{value:.0f}" if whole else f"{value:.4g}"


def _apart(*values: float) -> tuple[str, ...]:
    """Return numbers with as many digits as it takes to tell them apart, 4 at least."""
    for digits in range(4, 17):
        shown = tuple(f"{value:.{digits}g}" for value in values)
        if len(set(shown)) == len(set(values)):
            break
    return shown
