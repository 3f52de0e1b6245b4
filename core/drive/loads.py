"""What asks torque of the drive besides inertia: forces, torques and friction, as the user enters them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from core.drive.refusals import refuse_if_negative, refuse_unless_finite
from core.drive.train import LOAD
from core.errors import ValueRefused
from core.moments import unit_vector

if TYPE_CHECKING:
    from core.placement import Triple

Follows: TypeAlias = Literal["space", "part"]


@dataclass(frozen=True)
class AppliedForce:
    """A force on what turns with the load shaft.

    Attributes:
        name: as shown.
        force: N, document frame, as the document stands.
        point: m, document frame, where it acts as the document stands.
        direction_in: "space": its direction stays; "part": it turns with the part.
        point_in: "part": the point turns with the part; "space": it stays, as of a tool beside a dial.
        start, end: rad, the angles of the load between which it acts, every turn again; None: always.

    Raises:
        ValueRefused: a force of 0, or half a range.
    """

    name: str
    force: Triple
    point: Triple
    direction_in: Follows = "space"
    point_in: Follows = "part"
    start: float | None = None
    end: float | None = None

    def __post_init__(self) -> None:
        try:
            unit_vector(self.force)
        except ValueRefused as refused:
            raise ValueRefused(
                "a force needs a size and a direction", where=self.name, read=refused.read,
                remedy="Give three components that are not all 0",
            ) from refused
        if not np.isfinite(self.point).all():
            raise ValueRefused("a point needs three finite numbers", where=self.name, read=f"{self.point}")
        for follows in (self.direction_in, self.point_in):
            if follows not in ("space", "part"):
                raise ValueRefused("a force stays in space or turns with the part", where=self.name, read=follows)
        _refuse_range(self.start, self.end, self.name)


@dataclass(frozen=True)
class AppliedTorque:
    """A torque that the drive has to overcome, of a process or a spring.

    Attributes:
        name: as shown.
        torque: N·m at its shaft; positive asks a positive torque of the drive.
        sense: "fixed": in that sense whichever way it turns; "against motion": like friction, size only.
        shaft: name of the shaft it acts on.
        start, end: rad, the angles of the load between which it acts, every turn again; None: always.
    """

    name: str
    torque: float
    sense: Literal["fixed", "against motion"] = "fixed"
    shaft: str = LOAD
    start: float | None = None
    end: float | None = None

    def __post_init__(self) -> None:
        refuse_unless_finite(self.torque, "torque", self.name)
        if self.sense == "against motion":
            refuse_if_negative(self.torque, "torque against the motion", self.name)
        elif self.sense != "fixed":
            raise ValueRefused("a torque is fixed or against the motion", where=self.name, read=self.sense)
        _refuse_range(self.start, self.end, self.name)


@dataclass(frozen=True)
class Friction:
    """Friction of a shaft: constant + coefficient·radius·load against the motion, and viscous·ω.

    Attributes:
        name: as shown.
        constant: N·m.
        viscous: N·m·s/rad.
        coefficient: of the bearing.
        radius: m, at which it rubs.
        load: N on the bearing; None: the weight of what the document has turning with that shaft.
        shaft: name of the shaft.
    """

    name: str
    constant: float = 0.0
    viscous: float = 0.0
    coefficient: float = 0.0
    radius: float = 0.0
    load: float | None = None
    shaft: str = LOAD

    def __post_init__(self) -> None:
        for value, field in (
            (self.constant, "constant friction"), (self.viscous, "viscous friction"),
            (self.coefficient, "coefficient of friction"), (self.radius, "radius of the bearing"),
            (0.0 if self.load is None else self.load, "load on the bearing"),
        ):
            refuse_if_negative(value, field, self.name)

    def dry(self, weight: float) -> float:
        """Return what does not depend on speed, N·m; weight in N stands in where no load is given."""
        return self.constant + self.coefficient * self.radius * (weight if self.load is None else self.load)


def _refuse_range(start: float | None, end: float | None, where: str) -> None:
    if start is None and end is None:
        return
    if start is None or end is None:
        raise ValueRefused("a range of angles needs both ends", where=where, remedy="Give both, or neither")
    refuse_unless_finite(start, "start of the range", where)
    refuse_unless_finite(end, "end of the range", where)
    if end <= start:
        raise ValueRefused(
            "a range of angles ends after it starts", where=where, read=f"{start:g} to {end:g} rad",
            remedy="Add a turn to its end where it runs over the zero mark",
        )
