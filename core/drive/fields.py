"""The numbers of a drive's settings, each under a path: what it measures, its value, the settings with another.

A path names attributes and places in tuples, counted from 0: train.stages.0.ratio, duty.steps.2.timing.time,
forces.0.point.1, limits.peak.points.0.1 (a speed at 0, a torque at 1). What a person typed for a number is kept in
the settings under the same path, and counts as long as it still means the number.
"""

from __future__ import annotations

import math
from dataclasses import replace
from types import MappingProxyType
from typing import TYPE_CHECKING, Any, Final

from core.drive.paths import changed_at, found_at, one_step
from core.errors import EditRefused, QuantityError, ValueRefused
from core.quantity.units import Kind

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.drive.settings import DriveSettings

# Attribute → what it measures and what it is called in a sentence. No attribute means two kinds of quantity.
_NUMBERS: Final[Mapping[str, tuple[Kind, str]]] = MappingProxyType({
    "inertia": (Kind.INERTIA, "inertia"),
    "motor_inertia": (Kind.INERTIA, "inertia of the wheel on the motor side"),
    "load_inertia": (Kind.INERTIA, "inertia of the wheel on the load side"),
    "ratio": (Kind.NUMBER, "ratio"),
    "ratio_limit": (Kind.NUMBER, "limit of the inertia ratio"),
    "efficiency": (Kind.NUMBER, "efficiency"),
    "braking_efficiency": (Kind.NUMBER, "efficiency in braking"),
    "motor_radius": (Kind.LENGTH, "radius of the wheel on the motor side"),
    "load_radius": (Kind.LENGTH, "radius of the wheel on the load side"),
    "radius": (Kind.LENGTH, "radius"),
    "lead": (Kind.LENGTH, "lead"),
    "station": (Kind.LENGTH, "station"),
    "mass": (Kind.MASS, "mass"),
    "slope": (Kind.ANGLE, "slope"),
    "friction": (Kind.FORCE, "friction of the guide"),
    "friction_coefficient": (Kind.NUMBER, "coefficient of friction"),
    "coefficient": (Kind.NUMBER, "coefficient of friction"),
    "constant": (Kind.TORQUE, "constant friction"),
    "viscous": (Kind.VISCOUS_FRICTION, "viscous friction"),
    "load": (Kind.FORCE, "load on the bearing"),
    "torque": (Kind.TORQUE, "torque"),
    "angle": (Kind.ANGLE, "angle"),
    "start": (Kind.ANGLE, "start"),
    "end": (Kind.ANGLE, "end"),
    "time": (Kind.TIME, "time"),
    "speed": (Kind.SPEED, "speed"),
    "acceleration": (Kind.ANGULAR_ACCELERATION, "acceleration"),
    "deceleration": (Kind.ANGULAR_ACCELERATION, "deceleration"),
    "jerk": (Kind.ANGULAR_JERK, "jerk"),
    "ramp_up": (Kind.NUMBER, "ramp up"),
    "ramp_down": (Kind.NUMBER, "ramp down"),
    "smoothing": (Kind.NUMBER, "smoothing"),
    "times": (Kind.NUMBER, "repeats"),
    "grade": (Kind.NUMBER, "balance quality grade"),
})
_SEVERAL: Final[Mapping[str, tuple[tuple[Kind, str], ...]]] = MappingProxyType({
    "force": tuple((Kind.FORCE, f"force {letter}") for letter in "xyz"),
    "point": tuple((Kind.LENGTH, f"point {letter}") for letter in "xyz"),
    "gravity": tuple((Kind.ACCELERATION, f"gravity {letter}") for letter in "xyz"),
    "bearings": ((Kind.LENGTH, "station of the first bearing"), (Kind.LENGTH, "station of the second bearing")),
    "points": ((Kind.SPEED, "speed"), (Kind.TORQUE, "torque")),
})
# What one of a list is called where it has no name of its own.
_ONE_OF: Final[Mapping[str, str]] = MappingProxyType({
    "steps": "step", "stops": "stop", "planes": "correction plane", "points": "point", "stages": "stage",
    "linear": "moved mass", "inertias": "inertia", "forces": "force", "torques": "torque", "frictions": "friction",
})
_HOLDERS: Final[Mapping[str, str]] = MappingProxyType({
    "motor": "motor", "duty": "duty", "balance": "balance", "limits": "motor limits", "gravity": "drive",
})


def kind_at(path: str) -> Kind:
    """Return what the number under a path measures.

    Raises:
        EditRefused: no settings have a number there.
    """
    return _number(path)[0]


def words_at(settings: DriveSettings, path: str) -> str:
    """Return what the number under a path belongs to and is called, for a sentence: "gearbox, ratio".

    Raises:
        EditRefused: no settings have a number there.
    """
    return ", ".join([*_places(settings, path), _number(path)[1]])


def number_at(settings: DriveSettings, path: str) -> float | None:
    """Return the number under a path in SI; None where it is left open, or where the settings have no such place."""
    found = found_at(settings, path)
    return float(found) if isinstance(found, int | float) and not isinstance(found, bool) else None


def typed_at(settings: DriveSettings, path: str) -> str:
    """Return what was typed for the number under a path; "" where the number says it all."""
    return dict(settings.typed).get(path, "")


def with_number(settings: DriveSettings, path: str, value: float | None, text: str = "") -> DriveSettings:
    """Return the settings with another number (SI) under a path, and what was typed for it; `with_numbers` for one."""
    return with_numbers(settings, {path: value}, {path: text})


def with_typed_number(settings: DriveSettings, path: str, value: float, text: str, shown: str) -> DriveSettings:
    """Return the settings as `with_number` does; a refusal of the value says how it was shown, not its SI value.

    Raises:
        EditRefused, QuantityError, ValueRefused: as with_numbers.
    """
    try:
        return with_number(settings, path, value, text)
    except ValueRefused as refused:
        figure, *unit = refused.read.split(" ")
        if figure != f"{value:g}" or len(unit) > 1:
            raise
        raise type(refused)(refused.what, where=refused.where, read=shown, remedy=refused.remedy) from refused


def with_numbers(
    settings: DriveSettings, values: Mapping[str, float | None], typed: Mapping[str, str] = MappingProxyType({})
) -> DriveSettings:
    """Return the settings with other numbers (SI) by path, all put in at once; None leaves one open.

    Args:
        settings: as they are.
        values: by path.
        typed: the texts that say them, by path; a number given without one lets go of the text it had.

    Raises:
        EditRefused: the settings have no such place.
        QuantityError: a count that is not whole.
        ValueRefused: the settings cannot be with these numbers.
    """
    changes: dict[tuple[str, ...], float | None] = {}
    for path, value in values.items():
        kind_at(path)
        whole = path.endswith(".times") and value is not None
        changes[tuple(path.split("."))] = _whole(value, path) if whole and value is not None else value
    texts = {path: text for path, text in settings.typed if path not in values}
    texts |= {path: text for path, text in typed.items() if text}
    changed: DriveSettings = changed_at(settings, changes)
    return replace(changed, typed=tuple(sorted(texts.items())))


def _number(path: str) -> tuple[Kind, str]:
    steps = path.split(".")
    if steps[-1] in _NUMBERS:
        return _NUMBERS[steps[-1]]
    several = next((_SEVERAL[step] for step in reversed(steps[:-1]) if step in _SEVERAL), ())
    if not steps[-1].isdecimal() or int(steps[-1]) >= len(several):
        raise EditRefused("the drive has no such number", read=path)
    return several[int(steps[-1])]


def _places(settings: DriveSettings, path: str) -> list[str]:
    """Return what holds a number: the names of the entries on the way to it, or their places in their lists."""
    places: list[str] = []
    at: Any = settings
    steps = path.split(".")
    for before, step in zip(["", *steps], steps[:-1], strict=False):
        at = one_step(at, step)
        if step.isdecimal() and before in _ONE_OF:
            name = getattr(at, "name", "")
            places.append(name or f"{_ONE_OF[before]} {int(step) + 1}")
        elif step in _HOLDERS:
            places.append(_HOLDERS[step])
    return places


def _whole(value: float, path: str) -> int:
    if not math.isclose(value, round(value)):
        raise QuantityError(
            "this has to be a whole number", where=_number(path)[1], read=f"{value:g}", remedy="Type how many times"
        )
    return round(value)
