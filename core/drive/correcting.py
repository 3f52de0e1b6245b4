"""Corrections of an unbalance made in the document: masses added as parts, or holes drilled into a part.

What is made is found from the rotor's unbalance as it stands, so that afterwards one plane leaves no static unbalance
and two planes leave none at all. A hole begins where its plane says, and its depth follows: where it sticks out of a
round surface, or meets another cut, only what it truly takes away counts.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final, Literal, TypeAlias

import numpy as np

from core.assembly import Cut, Part, ShapeBody
from core.drive.answer import balance_answer
from core.drive.axis import TurnsWith, across, shafts_by_key
from core.drive.balance import corrections
from core.drive.refusals import refuse_unless_positive
from core.drive.train import FIXED
from core.errors import EditRefused, ValueRefused
from core.material import ByDensity, ByMaterial, Weighed
from core.placement import Placement, Pose, turns_of_matrix
from core.shapes import Cylinder, PointMass

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.arrays import FloatArray
    from core.assembly import Assembly, DriveAxis
    from core.drive.answer import BalanceAnswer
    from core.drive.balance import Correction, CorrectionPlane
    from core.drive.settings import DriveSettings
    from core.progress import Progress

Form: TypeAlias = Literal["disc", "point mass"]
Way: TypeAlias = Literal["inwards", "forwards", "backwards"]

STEEL: Final = ByMaterial.named("steel")
# A disc is half as thick as it is wide.
_THICKNESS: Final = 0.5
_MARK: Final = 0.01
# Relative to the rotor's mass at the plane's radius: less than this is round-off, and no correction.
_NOTHING: Final = 1e-12
# Relative to the largest unbalance in a plane: what the depths are made to agree to, and what faceted solids reach.
_CLOSE, _CLOSE_ENOUGH = 1e-13, 1e-6
_MOST_TRIES: Final = 40
# Share of a hole that may lie outside the part: below a round surface its mouth is never quite full.
_MOST_OUTSIDE: Final = 0.25


@dataclass(frozen=True)
class Drill:
    """How material is drilled away.

    Attributes:
        part: key of the part.
        diameter: of the holes, m.
        way: from the plane's station and radius towards the axis, or along it, forwards or backwards.

    Raises:
        ValueRefused: the diameter is not above 0.
    """

    part: str
    diameter: float
    way: Way = "inwards"

    def __post_init__(self) -> None:
        refuse_unless_positive(self.diameter, "diameter of the hole", "correction")


def with_masses_added(
    assembly: Assembly, settings: DriveSettings, form: Form = "disc"
) -> tuple[Assembly, DriveSettings]:
    """Return the document with the masses that correct its rotor, as parts at the end of the ledger.

    Args:
        assembly: the document.
        settings: its drive, with one or two correction planes.
        form: steel discs along the axis, half as thick as wide, or point masses; each with its centre at its plane.

    Returns:
        The assembly, and the settings: the masses turn with the rotor.

    Raises:
        ValueRefused, EditRefused: nothing turns, there are no planes, or there is nothing to correct.
    """
    answer = _answer(assembly, settings)
    made = [
        one for one in corrections(answer.found, settings.balance.planes, "adding")
        if one.mass > _NOTHING * answer.found.mass
    ]
    if not made:
        raise _nothing_to_correct()
    keys = []
    for one in made:
        part = _mass(assembly, answer.axis, one, form)
        keys.append(part.key)
        assembly = assembly.inserted(part)
    return assembly, _turning_too(assembly, settings, tuple(keys), answer.axis)


def drillable(assembly: Assembly, settings: DriveSettings) -> tuple[str, ...]:
    """Return the keys of the parts of the rotor that a correction can be drilled into."""
    shafts, counts = shafts_by_key(assembly, settings.turning), _counts(assembly)
    return tuple(part.key for part in assembly.table.parts if not _why_not(settings, part, shafts, counts))


def with_holes_drilled(
    assembly: Assembly, settings: DriveSettings, drill: Drill, progress: Progress | None = None
) -> Assembly:
    """Return the document with the holes that correct its rotor drilled into one of its parts.

    Each hole begins at the station and radius of its plane, on the heavy side.

    Raises:
        ValueRefused, EditRefused: nothing turns, there are no planes or nothing to correct, the part cannot be
            drilled, or no hole of this diameter takes enough away where it begins.
        Cancelled: progress was cancelled.
    """
    answer = _answer(assembly, settings)
    part = assembly.node(drill.part)
    if not isinstance(part, Part):
        raise EditRefused("holes are drilled into a part, not into a group", where=part.name)
    refused = _why_not(settings, part, shafts_by_key(assembly, settings.turning), _counts(assembly))
    if refused:
        raise EditRefused(refused, where=part.name, remedy="Choose another part of the rotor, or add masses")
    cuts = _Driller(assembly, settings, answer, part, drill).holes(progress)
    return assembly.replaced(replace(part, cuts=(*part.cuts, *cuts)))


def _answer(assembly: Assembly, settings: DriveSettings) -> BalanceAnswer:
    answer = balance_answer(assembly, settings)
    if answer is None:
        raise ValueRefused("nothing that has mass turns with this shaft", where="balance", read=settings.balance.shaft)
    if not settings.balance.planes:
        raise ValueRefused(
            "there is no plane to correct the unbalance in", where="balance", remedy="Add a correction plane"
        )
    return answer


def _nothing_to_correct() -> ValueRefused:
    return ValueRefused("there is nothing to correct: no unbalance is left that these planes can take", where="balance")


def _mass(assembly: Assembly, axis: DriveAxis, made: Correction, form: Form) -> Part:
    """Return a part that is the correction, its centre of mass at the point, in the document frame."""
    first, second = across(axis)
    turns = turns_of_matrix(np.stack([first, second, axis.unit], axis=1))
    point = made.point(axis)
    key, name = assembly.fresh_key(), assembly.fresh_name("balance mass")
    if form == "point mass":
        return Part(key, name, ShapeBody(PointMass(_MARK)), Weighed(made.mass), Pose(_triple(point)))
    # π/4·D²·(D/2)·ρ = m
    diameter = (made.mass / STEEL.density / (math.pi / 4 * _THICKNESS)) ** (1 / 3)
    length = _THICKNESS * diameter
    body = ShapeBody(Cylinder(diameter, length))
    return Part(key, name, body, STEEL, Pose(_triple(point - length / 2 * axis.unit), turns))


def _turning_too(
    assembly: Assembly, settings: DriveSettings, keys: tuple[str, ...], axis: DriveAxis
) -> DriveSettings:
    """Return the settings with lines at the outermost level turning with the rotor, where they do not by themselves."""
    shaft, train = settings.balance.shaft, settings.train
    whole = next((entry for entry in settings.turning if not entry.key), None)
    turns = whole is not None and whole.shaft != FIXED and train.index(whole.shaft) == train.index(shaft)
    if turns and whole is not None and (whole.axis or assembly.drive) == axis.name:
        return settings
    about = "" if axis.name == assembly.drive else axis.name
    return replace(settings, turning=(*settings.turning, *(TurnsWith(key, shaft, about) for key in keys)))


def _counts(assembly: Assembly) -> dict[str, int]:
    """Return how often each part is there, by its key."""
    counts = np.bincount(assembly.table.owner, minlength=len(assembly.table.parts))
    return {part.key: int(count) for part, count in zip(assembly.table.parts, counts, strict=True)}


def _why_not(settings: DriveSettings, part: Part, shafts: Mapping[str, str], counts: Mapping[str, int]) -> str:
    """Return why a correction cannot be drilled into a part; "" where it can.

    Args:
        settings: of the drive.
        part: of the document.
        shafts: the shaft that each part turns with, by its key.
        counts: how often each part is there, by its key.
    """
    train, shaft = settings.train, shafts.get(part.key)
    if shaft is None or train.index(shaft) != train.index(settings.balance.shaft):
        return "this part does not turn with the rotor"
    if part.measure != "volume":
        return "this part has no volume that something could be drilled out of"
    if not isinstance(part.driver, ByMaterial | ByDensity):
        return "the mass of this part does not follow from its volume, so that a hole would take nothing off it"
    count = counts[part.key]
    return "" if count == 1 else f"this part is there {count} times, and a hole would be drilled into each of them"


class _Driller:
    """The holes of one part, made deeper and turned until what they take away is what has to go."""

    def __init__(
        self, assembly: Assembly, settings: DriveSettings, answer: BalanceAnswer, part: Part, drill: Drill
    ) -> None:
        self._part, self._drill, self._found, self._axis = part, drill, answer.found, answer.axis
        self._planes: tuple[CorrectionPlane, ...] = settings.balance.planes
        self._density = part.driver.density if isinstance(part.driver, ByMaterial | ByDensity) else 0.0
        table = assembly.table
        row = int(np.flatnonzero(table.owner == [one.key for one in table.parts].index(part.key))[0])
        self._standing = Placement(table.standing.turn[row], table.standing.shift[row])
        self._frame = np.stack(across(answer.axis))
        self._names = _fresh(assembly, len(self._planes))
        self._per_depth = self._density * math.pi / 4 * drill.diameter**2
        self._deepest = float(np.linalg.norm(np.ptp(part.bounds, axis=0)))

    def holes(self, progress: Progress | None) -> tuple[Cut, ...]:
        """Return the cuts."""
        made = corrections(self._found, self._planes, "removing")
        if all(-one.mass <= _NOTHING * self._found.mass for one in made):
            raise _nothing_to_correct()
        depths = np.array([-one.mass / self._per_depth for one in made])
        angles = np.array([one.angle for one in made])
        best = math.inf
        for _ in range(_MOST_TRIES):
            self._refuse_too_deep(depths)
            cuts = self._cuts(depths, angles)
            drilled = replace(self._part, cuts=(*self._part.cuts, *cuts.values()))
            taken, stations = self._taken(drilled, tuple(cuts), progress)
            wanted = self._found.static[None] if len(made) == 1 else self._found.in_planes(*stations)
            best = float(np.abs(wanted - taken).max() / np.abs(wanted).max())
            if best <= _CLOSE:
                break
            depths, angles = self._nearer(depths, angles, wanted, taken)
        if best > _CLOSE_ENOUGH:
            raise self._too_little()
        self._refuse_outside(drilled, cuts)
        return tuple(cuts.values())

    def _cuts(self, depths: FloatArray, angles: FloatArray) -> dict[int, Cut]:
        """Return the hole of each plane that needs one, by the plane's place."""
        cuts = {}
        for at, (plane, depth, angle) in enumerate(zip(self._planes, depths.tolist(), angles.tolist(), strict=True)):
            if depth <= _NOTHING * self._drill.diameter:
                continue
            unit = self._axis.unit
            out = np.array([math.cos(angle), math.sin(angle)]) @ self._frame
            way = {"inwards": -out, "forwards": unit, "backwards": -unit}[self._drill.way]
            aside = unit if self._drill.way == "inwards" else out
            turn = np.stack([aside, np.cross(way, aside), way], axis=1)
            mouth = np.asarray(self._axis.point) + plane.station * unit + plane.radius * out
            inside = self._standing.inverse() @ Placement(turn, mouth)
            key, name = self._names[at]
            pose = Pose(_triple(inside.shift), turns_of_matrix(inside.turn))
            cuts[at] = Cut(key, name, Cylinder(self._drill.diameter, depth), pose)
        return cuts

    def _taken(
        self, drilled: Part, planes: tuple[int, ...], progress: Progress | None
    ) -> tuple[FloatArray, list[float]]:
        """Return the unbalance (n, 2) kg·m that the holes take away, and the stations of their centres, m."""
        taken, stations = np.zeros((len(self._planes), 2)), [plane.station for plane in self._planes]
        cutting = drilled.cut_with(progress)
        if cutting is None:
            return taken, stations
        for at, removed in zip(planes, cutting.removed[len(self._part.cuts) :], strict=True):
            there = self._standing.place(removed.total())
            lever = there.centre - np.asarray(self._axis.point)
            taken[at] = self._density * float(there.mass) * (self._frame @ lever)
            stations[at] = float(self._axis.unit @ lever)
        return taken, stations

    def _nearer(
        self, depths: FloatArray, angles: FloatArray, wanted: FloatArray, taken: FloatArray
    ) -> tuple[FloatArray, FloatArray]:
        """Return depths and angles by one step of Newton: a hole grows at its bottom."""
        radii = np.array([plane.radius for plane in self._planes])
        bottom = radii - depths if self._drill.way == "inwards" else radii
        sizes = [np.hypot(each[:, 0], each[:, 1]) for each in (wanted, taken)]
        deeper = np.maximum(depths + (sizes[0] - sizes[1]) / (self._per_depth * bottom), 0.0)
        ways = [np.arctan2(each[:, 1], each[:, 0]) for each in (wanted, taken)]
        return deeper, np.where(sizes[1] > 0, angles + ways[0] - ways[1], ways[0])

    def _refuse_too_deep(self, depths: FloatArray) -> None:
        inwards = self._drill.way == "inwards"
        for plane, depth in zip(self._planes, depths.tolist(), strict=True):
            if depth > self._deepest or (inwards and depth >= plane.radius):
                raise self._too_little()

    def _too_little(self) -> EditRefused:
        return EditRefused(
            "no hole of this diameter takes enough away from where it begins", where=self._part.name,
            read=f"⌀{self._drill.diameter * 1e3:.4g} mm",
            remedy="Let its plane's station and radius lie on the part's surface, or choose a wider one",
        )

    def _refuse_outside(self, drilled: Part, cuts: dict[int, Cut]) -> None:
        cutting = drilled.cutting
        outside = () if cutting is None else cutting.outside[len(self._part.cuts) :]
        for (at, cut), share in zip(cuts.items(), outside, strict=True):
            if share > _MOST_OUTSIDE:
                raise EditRefused(
                    f"{share:.0%} of this hole lies outside the part", where=f"{self._part.name}, {cut.name}",
                    read=f"a hole that begins at radius {self._planes[at].radius * 1e3:.4g} mm",
                    remedy="Let the plane's station and radius lie on the part's surface, or choose a narrower hole",
                )


def _fresh(assembly: Assembly, count: int) -> list[tuple[str, str]]:
    """Return keys and names that no line has."""
    found: list[tuple[str, str]] = []
    while len(found) < count:
        key, name = assembly.fresh_key("c"), assembly.fresh_name("balance hole")
        found.append((key, name))
        # A line that bears them makes the next ones differ.
        assembly = assembly.inserted(Part(key, name, ShapeBody(PointMass(_MARK))))
    return found


def _triple(point: FloatArray) -> tuple[float, float, float]:
    x, y, z = point.tolist()
    return x, y, z
