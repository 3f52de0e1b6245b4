"""The duty: moves and rests one after the other, and angle, speed, acceleration and jerk at any time of it.

Angles are those of the load shaft, positive right-handed about the drive axis, 0 where the document stands.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np

from core.arrays import ArrayLike, FloatArray, IntArray, frozen
from core.drive.laws import RAMPED, Law, Zones, ramped_zones, unit_peaks, unit_zones
from core.drive.refusals import refuse_unless_finite, refuse_unless_positive
from core.errors import ValueRefused
from core.once import Once

# A duty of more moves and rests than this, repeats multiplied out, is refused: nobody means it.
MOST_STEPS = 20_000

# Halvings that bring the top speed of a short move to the last bit.
_HALVINGS = 80

# Ramps may fill the whole move; converted shares (1/3 + 2/3) overfill it by round-off.
_SHARE_SLACK = 1e-12


@dataclass(frozen=True)
class ByTime:
    """A move takes this long: time in s."""

    time: float

    def __post_init__(self) -> None:
        if not math.isfinite(self.time) or self.time <= 0:
            raise ValueRefused(
                "a move needs a time of more than 0", where="time of a move", read=f"{self.time:g} s",
                remedy="Give its time, or limits of speed and acceleration",
            )


@dataclass(frozen=True)
class ByLimits:
    """A move is as fast as its limits let it be; None: not limited.

    Attributes:
        speed: rad/s.
        acceleration: rad/s², of speeding up, and of slowing down where deceleration is None.
        deceleration: rad/s², of slowing down; only of the trapezoidal law and the S-curve.
        jerk: rad/s³; the S-curve needs one, and laws whose acceleration jumps cannot keep one.
    """

    speed: float | None = None
    acceleration: float | None = None
    deceleration: float | None = None
    jerk: float | None = None

    def __post_init__(self) -> None:
        for name in ("speed", "acceleration", "deceleration", "jerk"):
            value = getattr(self, name)
            if value is not None:
                refuse_unless_positive(value, f"limit of {name}", "limits of a move")


@dataclass(frozen=True)
class Move:
    """A turn of the load shaft from rest to rest.

    Attributes:
        angle: rad, negative for backwards.
        timing: its time, or its limits.
        law: how it speeds up and slows down.
        ramp_up, ramp_down: shares of the time, of a trapezoidal or S-curve move by time.
        smoothing: 0…1, share of each ramp in which the acceleration changes, of an S-curve move by time.

    Raises:
        ValueRefused: no angle, no time, ramps longer than the move, limits that the law cannot keep.
    """

    angle: float
    timing: ByTime | ByLimits
    law: Law = Law.TRAPEZOIDAL
    ramp_up: float = 1 / 3
    ramp_down: float = 1 / 3
    smoothing: float = 0.5

    def __post_init__(self) -> None:
        if not math.isfinite(self.angle) or self.angle == 0:
            raise ValueRefused(
                "a move needs an angle that is not 0", where="angle of a move", read=f"{self.angle:g}",
                remedy="Give the angle it turns by, or enter a rest",
            )
        for share, name in ((self.ramp_up, "ramp up"), (self.ramp_down, "ramp down")):
            if not 0 < share < 1:
                raise ValueRefused(
                    f"the {name} takes a share of the time between 0 and 1", where="ramps of a move", read=f"{share:g}"
                )
        if self.ramp_up + self.ramp_down > 1 + _SHARE_SLACK:
            raise ValueRefused(
                "the two ramps take longer than the whole move", where="ramps of a move",
                read=f"{self.ramp_up:g} + {self.ramp_down:g} of its time", remedy="Make them add up to 1 or less",
            )
        if not 0 <= self.smoothing <= 1:
            raise ValueRefused(
                "the smoothing of a ramp lies between 0 and 1", where="ramps of a move", read=f"{self.smoothing:g}"
            )
        if isinstance(self.timing, ByLimits):
            _refuse_limits(self.law, self.timing)

    @Once
    def zones(self) -> Zones:
        """Its zones, from a start at rest."""
        if isinstance(self.timing, ByLimits):
            return _by_limits(self.angle, self.law, self.timing)
        time = self.timing.time
        if self.law not in RAMPED:
            return unit_zones(self.law).scaled(self.angle, time)
        up, down = self.ramp_up * time, self.ramp_down * time
        speed = self.angle / (time - (up + down) / 2)
        part = self.smoothing / 2 if self.law == Law.S_CURVE else 0.0
        return ramped_zones(speed, (up, part * up), max(time - up - down, 0.0), (down, part * down))

    @Once
    def starts(self) -> tuple[FloatArray, FloatArray, FloatArray]:
        """Time, angle and speed at the start of its zones and at its end, from a start at rest."""
        return self.zones.starts()

    @property
    def time(self) -> float:
        """How long it takes, s."""
        return float(self.zones.duration.sum())


@dataclass(frozen=True)
class Rest:
    """A standstill of some time in s."""

    time: float

    def __post_init__(self) -> None:
        refuse_unless_positive(self.time, "time of a rest", "rest")

    @Once
    def zones(self) -> Zones:
        """One zone in which nothing happens."""
        return Zones.of_rows([(self.time, [0.0], (0.0, 1.0, 0.0))])

    @Once
    def starts(self) -> tuple[FloatArray, FloatArray, FloatArray]:
        """Time, angle and speed at its start and at its end."""
        return self.zones.starts()


@dataclass(frozen=True)
class Repeat:
    """Moves and rests that are done so many times over."""

    steps: tuple[Move | Rest, ...]
    times: int = 2

    def __post_init__(self) -> None:
        if self.times < 1 or not self.steps:
            raise ValueRefused(
                "a repeat needs moves or rests, and one time or more", where="repeat", read=f"{self.times}"
            )


Step: TypeAlias = Move | Rest | Repeat


@dataclass(frozen=True)
class Duty:
    """One cycle of the drive.

    Attributes:
        steps: in order.
        start: rad, the angle at which the cycle begins.
    """

    steps: tuple[Step, ...] = ()
    start: float = 0.0

    def __post_init__(self) -> None:
        refuse_unless_finite(self.start, "angle at the start", "duty")
        if self.count > MOST_STEPS:
            raise ValueRefused(
                f"a duty holds at most {MOST_STEPS} moves and rests", where="duty", read=f"{self.count}",
                remedy="Lower the repeats",
            )

    @property
    def count(self) -> int:
        """How many moves and rests a cycle has, repeats multiplied out."""
        return sum(step.times * len(step.steps) if isinstance(step, Repeat) else 1 for step in self.steps)

    @Once
    def flat(self) -> tuple[Move | Rest, ...]:
        """The moves and rests with the repeats written out."""
        flat: list[Move | Rest] = []
        for step in self.steps:
            flat += list(step.steps) * step.times if isinstance(step, Repeat) else [step]
        return tuple(flat)

    @Once
    def positions(self) -> tuple[float, ...]:
        """The angle (rad) before the first of the flat steps and after each of them."""
        turns = [step.angle if isinstance(step, Move) else 0.0 for step in self.flat]
        return tuple((self.start + np.concatenate([[0.0], np.cumsum(turns)])).tolist())

    @property
    def comes_back(self) -> bool:
        """Whether the cycle ends at the angle where it began, to the round-off of its moves."""
        travel = sum(abs(step.angle) for step in self.flat if isinstance(step, Move))
        return abs(self.positions[-1] - self.positions[0]) <= _SHARE_SLACK * max(travel, abs(self.start))

    @Once
    def timeline(self) -> Timeline:
        """The whole cycle as zones.

        Raises:
            ValueRefused: the duty has no steps.
        """
        return _timeline(self)


@dataclass(frozen=True, eq=False)
class Kinematics:
    """What the load shaft does, each (m,): time s, angle rad, speed rad/s, acceleration rad/s², jerk rad/s³.

    `direction` is the sense of the move it belongs to, 1 or −1, also while its speed is still 0; 0 at a rest.
    `ranged` (m,) rad is an angle on the same side of the ends of all ranges of angles, for moments on such an end;
    None: the angle itself.
    """

    time: FloatArray
    angle: FloatArray
    speed: FloatArray
    acceleration: FloatArray
    jerk: FloatArray
    direction: FloatArray
    ranged: FloatArray | None = None


@dataclass(frozen=True, eq=False)
class Timeline:
    """A duty laid out in time.

    Attributes:
        zones: of all steps one after the other.
        time, angle, speed: (n,) at the start of each zone; s, rad, rad/s.
        direction: (n,) 1, −1, or 0 for a rest.
        step: (n,) which of the duty's flat steps the zone belongs to.
        length: s, of the whole cycle.
    """

    zones: Zones
    time: FloatArray
    angle: FloatArray
    speed: FloatArray
    direction: FloatArray
    step: IntArray
    length: float

    def within(self, zone: IntArray, local: FloatArray) -> Kinematics:
        """Return the motion at times local (m,) s after the start of zones (m,): both sides of a jump can be had."""
        angle, speed, acceleration, jerk = self.zones.rates(zone, local)
        first = self.speed[zone]
        return Kinematics(
            self.time[zone] + local, self.angle[zone] + first * local + angle, first + speed, acceleration, jerk,
            self.direction[zone],
        )

    def at(self, time: ArrayLike) -> Kinematics:
        """Return the motion at times (m,) s of the cycle; at a border between two zones that of the later one."""
        times = np.clip(np.asarray(time, dtype=float), 0.0, self.length)
        zone = np.searchsorted(self.time, times, side="right") - 1
        return self.within(zone, np.minimum(times - self.time[zone], self.zones.duration[zone]))


def _timeline(duty: Duty) -> Timeline:
    if not duty.flat:
        raise ValueRefused("the duty is empty", where="duty", remedy="Add a move")
    steps = duty.flat
    times, angles, speeds = zip(*(step.starts for step in steps), strict=True)
    senses = [math.copysign(1.0, step.angle) if isinstance(step, Move) else 0.0 for step in steps]
    owner = np.repeat(np.arange(len(steps)), [len(time) - 1 for time in times])
    zones = Zones(*(
        frozen(np.concatenate([getattr(step.zones, name) for step in steps]))
        for name in ("duration", "polynomial", "amplitude", "frequency", "phase")
    ))
    ends = np.cumsum([time[-1] for time in times])
    first = np.concatenate([[0.0], ends[:-1]])
    return Timeline(
        zones,
        frozen(np.concatenate([time[:-1] for time in times]) + first[owner]),
        frozen(np.concatenate([angle[:-1] for angle in angles]) + np.array(duty.positions)[owner]),
        frozen(np.concatenate([speed[:-1] for speed in speeds])),
        frozen(np.array(senses)[owner]),
        owner,
        float(ends[-1]),
    )


def _refuse_limits(law: Law, limits: ByLimits) -> None:
    where = f"limits of a {law} move"
    if limits.deceleration is not None and law not in RAMPED:
        raise ValueRefused(
            "this law slows down as it speeds up", where=where, read="a limit of deceleration",
            remedy="Leave it empty, or take the trapezoidal law or the S-curve",
        )
    if law in RAMPED:
        if limits.speed is None or limits.acceleration is None or (law == Law.S_CURVE and limits.jerk is None):
            wanted = "speed, acceleration and jerk" if law == Law.S_CURVE else "speed and acceleration"
            raise ValueRefused(
                f"this law needs limits of {wanted}", where=where, remedy="Fill them all in, or give a time"
            )
        if law == Law.TRAPEZOIDAL and limits.jerk is not None:
            raise ValueRefused(
                "the acceleration of this law jumps, so no limit of jerk can be kept", where=where,
                read=f"{limits.jerk:g} rad/s³", remedy="Leave it empty, or take the S-curve",
            )
        return
    if limits.speed is None and limits.acceleration is None and limits.jerk is None:
        raise ValueRefused("a move by limits needs one at least", where=where, remedy="Limit its speed or acceleration")
    if limits.jerk is not None and math.isinf(unit_peaks(law).jerk):
        raise ValueRefused(
            "the acceleration of this law jumps, so no limit of jerk can be kept", where=where,
            read=f"{limits.jerk:g} rad/s³", remedy="Leave it empty, or take a law without jumps",
        )


def _by_limits(angle: float, law: Law, limits: ByLimits) -> Zones:
    if law not in RAMPED:
        peaks, size = unit_peaks(law), abs(angle)
        times = [
            (peak * size / limit) ** (1 / order)
            for peak, limit, order in (
                (peaks.speed, limits.speed, 1),
                (peaks.acceleration, limits.acceleration, 2),
                (peaks.jerk, limits.jerk, 3),
            )
            if limit is not None
        ]
        return unit_zones(law).scaled(angle, max(times))
    # Both are there: checked when the move was made.
    top, rise = limits.speed or 0.0, limits.acceleration or 0.0
    fall = rise if limits.deceleration is None else limits.deceleration
    speed = _reached(abs(angle), top, rise, fall, limits.jerk)
    up, down = _ramp_times(speed, rise, limits.jerk), _ramp_times(speed, fall, limits.jerk)
    cruise = (abs(angle) - speed * (up[0] + down[0]) / 2) / speed
    # What is left of a cruise that the limits leave no room for is round-off.
    cruise = cruise if cruise > _SHARE_SLACK * (up[0] + down[0]) else 0.0
    return ramped_zones(math.copysign(speed, angle), up, cruise, down)


def _ramp_times(speed: float, acceleration: float, jerk: float | None) -> tuple[float, float]:
    """Return the time of a ramp from 0 to a speed, and that of each of its two stretches of constant jerk."""
    if jerk is None:
        return speed / acceleration, 0.0
    if speed >= acceleration**2 / jerk:
        return speed / acceleration + acceleration / jerk, acceleration / jerk
    rise = math.sqrt(speed / jerk)
    return 2 * rise, rise


def _reached(stroke: float, top: float, rise: float, fall: float, jerk: float | None) -> float:
    """Return the speed that a move reaches: the limit, or the one whose two ramps fill the stroke."""

    def ramps(speed: float) -> float:
        return speed / 2 * (_ramp_times(speed, rise, jerk)[0] + _ramp_times(speed, fall, jerk)[0])

    if ramps(top) <= stroke:
        return top
    if jerk is None:
        return math.sqrt(2 * stroke * rise * fall / (rise + fall))
    low, high = 0.0, top
    for _ in range(_HALVINGS):
        middle = (low + high) / 2
        low, high = (middle, high) if ramps(middle) <= stroke else (low, middle)
    return low
