"""What is entered about a drive, as plain data and back: each value of core.drive is an entry with its attributes."""

from __future__ import annotations

from dataclasses import fields, is_dataclass
from enum import Enum
from typing import TYPE_CHECKING, Any

from core.document.refusing import made_at
from core.drive import (
    AppliedForce,
    AppliedTorque,
    BalanceSettings,
    Belt,
    Brake,
    ByLimits,
    ByTime,
    CorrectionPlane,
    Coupling,
    DriveSettings,
    Duty,
    Friction,
    Gear,
    Law,
    LeadScrew,
    LimitCurve,
    Motor,
    MotorLimits,
    Move,
    RackOrDrum,
    Repeat,
    Rest,
    ShaftInertia,
    StopCase,
    Train,
    TurnsWith,
)
from core.drive.axis import refuse_unless_there
from core.machine import Machine

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.assembly import Assembly
    from core.document.drive_schema import DriveSettingsEntry
    from core.document.migration import Data

# Of the values that stand beside others in one place, the word that says which one it is.
_KINDS: dict[type, str] = {
    Gear: "gear", Belt: "belt", Coupling: "coupling", Brake: "brake", RackOrDrum: "rack or drum",
    LeadScrew: "lead screw", ByTime: "by time", ByLimits: "by limits", Move: "move", Rest: "rest", Repeat: "repeat",
}
# Entry of the schema, by its name → what is made of it.
_MAKES: dict[str, Callable[..., object]] = {
    f"{made.__name__}Entry": made
    for made in (
        AppliedForce, AppliedTorque, Belt, Brake, ByLimits, ByTime, CorrectionPlane, Coupling, DriveSettings, Duty,
        Friction, Gear, LeadScrew, LimitCurve, Motor, MotorLimits, Move, RackOrDrum, Repeat, Rest, ShaftInertia,
        StopCase, Train, TurnsWith,
    )
} | {"BalanceEntry": BalanceSettings}


def data_of_drive(settings: DriveSettings) -> Data:
    """Return the settings as the schema has them."""
    data = _data_of(settings)
    if not settings.typed:
        del data["typed"]
    return dict(data)


def machine_with(assembly: Assembly, entry: DriveSettingsEntry | None) -> Machine:
    """Return the machine of an assembly and checked settings; none of them where nothing was entered.

    Raises:
        DocumentError: the settings cannot be, or they name a line or an axis that the assembly has not.
    """
    if entry is None:
        return Machine(assembly)
    settings = _built(entry, "drive_settings")
    made_at("drive_settings.turning", lambda: refuse_unless_there(assembly, settings.turning))
    return Machine(assembly, settings)


def _data_of(value: Any) -> Any:
    if is_dataclass(value):
        kind = {"kind": _KINDS[type(value)]} if type(value) in _KINDS else {}
        whole = {"times": value.times} if isinstance(value, Repeat) else {}
        return {**kind, **{one.name: _data_of(getattr(value, one.name)) for one in fields(value)}, **whole}
    if isinstance(value, tuple):
        return [_data_of(one) for one in value]
    if isinstance(value, Enum):
        return value.value
    return value if value is None or isinstance(value, str) else float(value)


def _built(entry: Any, place: str) -> Any:
    """Return what a checked entry describes, built from the inside out."""
    if isinstance(entry, list | tuple):
        return tuple(_built(one, f"{place}[{at}]") for at, one in enumerate(entry))
    make = _MAKES.get(type(entry).__name__)
    if make is None:
        return entry
    inner = {
        name: _built(getattr(entry, name), f"{place}.{name}") for name in type(entry).model_fields if name != "kind"
    }
    if "law" in inner:
        inner["law"] = Law(inner["law"])
    return made_at(place, lambda: make(**inner))
