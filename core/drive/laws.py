"""Motion laws in closed form, as zones: stretches of time in which the acceleration is a polynomial plus a sine.

Every law here is a handful of such zones, so one evaluator integrates them all exactly, and the borders of the
zones are the only times at which anything can jump.

The five-zone family (half a sine up, constant, half a cosine down, constant, half a sine back) and its parameters
for constant acceleration, harmonic, cycloidal, modified sine and modified trapezoid are those of R. L. Norton,
Cam Design and Manufacturing Handbook, there called SCCA.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum
from functools import lru_cache
from typing import TypeAlias

import numpy as np

from core.arrays import FloatArray, IntArray, frozen
from core.once import Once

# Coefficients of the acceleration's polynomial; the 4-5-6-7 law needs them all.
DEGREES = 6

# Duration, coefficients, and (amplitude, frequency, phase) of a zone.
_Row: TypeAlias = tuple[float, list[float], tuple[float, float, float]]


class Law(StrEnum):
    """The motion laws; the value is the name that is shown and stored."""

    TRAPEZOIDAL = "trapezoidal"
    TRIANGULAR = "triangular"
    S_CURVE = "S-curve"
    CYCLOIDAL = "cycloidal"
    HARMONIC = "harmonic"
    MODIFIED_SINE = "modified sine"
    MODIFIED_TRAPEZOID = "modified trapezoid"
    POLYNOMIAL_345 = "3-4-5 polynomial"
    POLYNOMIAL_4567 = "4-5-6-7 polynomial"


@dataclass(frozen=True, eq=False)
class Zones:
    """Accelerations c₀ + c₁τ + … + c₅τ⁵ + A·sin(kτ + φ), one zone after the other, τ from the zone's own start.

    Attributes:
        duration: (n,) s.
        polynomial: (n, 6) rad/s² per sⁱ.
        amplitude: (n,) rad/s².
        frequency: (n,) rad/s, not 0.
        phase: (n,) rad.
    """

    duration: FloatArray
    polynomial: FloatArray
    amplitude: FloatArray
    frequency: FloatArray
    phase: FloatArray

    @Once
    def _used(self) -> int:
        """How many of the polynomials' coefficients are used: most laws need two, and time is spent on each."""
        return int(np.flatnonzero(self.polynomial.any(axis=0)).max(initial=0)) + 1

    @classmethod
    def of_rows(cls, rows: list[_Row]) -> Zones:
        """Return the zones of these rows; those of no duration are left out."""
        kept = [row for row in rows if row[0] > 0]
        return cls(
            frozen([row[0] for row in kept]),
            frozen([row[1] + [0.0] * (DEGREES - len(row[1])) for row in kept]),
            frozen([row[2][0] for row in kept]),
            frozen([row[2][1] for row in kept]),
            frozen([row[2][2] for row in kept]),
        )

    def scaled(self, angle: float, time: float) -> Zones:
        """Return the zones of a law of unit stroke and time as a move of angle (rad) in time (s)."""
        size = angle / time**2
        return Zones(
            frozen(self.duration * time),
            frozen(self.polynomial * size / time ** np.arange(DEGREES)),
            frozen(self.amplitude * size),
            frozen(self.frequency / time),
            self.phase,
        )

    def rates(self, zone: IntArray, local: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
        """Return angle gained (without the zone's first speed), speed gained, acceleration, jerk; each (m,).

        Args:
            zone: (m,) which zone.
            local: (m,) s from its start.
        """
        c, amplitude, k, phase = (
            self.polynomial[zone], self.amplitude[zone], self.frequency[zone], self.phase[zone]
        )
        used = self._used
        last, jerk = c[:, used - 1], 0.0 * local
        acceleration, speed, angle = last, last / used, last / (used * (used + 1))
        for n in range(used - 2, -1, -1):
            jerk = jerk * local + (n + 1) * c[:, n + 1]
            acceleration = acceleration * local + c[:, n]
            speed = speed * local + c[:, n] / (n + 1)
            angle = angle * local + c[:, n] / ((n + 1) * (n + 2))
        speed, angle = speed * local, angle * local**2
        if amplitude.any():
            sine, cosine = np.sin(k * local + phase), np.cos(k * local + phase)
            first_sine, first_cosine = np.sin(phase), np.cos(phase)
            jerk = jerk + amplitude * k * cosine
            acceleration = acceleration + amplitude * sine
            speed = speed - amplitude / k * (cosine - first_cosine)
            angle = angle - amplitude / k**2 * (sine - first_sine) + amplitude / k * first_cosine * local
        return angle, speed, acceleration, jerk

    def starts(self) -> tuple[FloatArray, FloatArray, FloatArray]:
        """Return time, angle and speed at the start of every zone, and at the end of the last, each (n + 1,)."""
        count = len(self.duration)
        angle_gained, speed_gained, _, _ = self.rates(np.arange(count), self.duration)
        time = np.concatenate([[0.0], np.cumsum(self.duration)])
        speed = np.concatenate([[0.0], np.cumsum(speed_gained)])
        angle = np.concatenate([[0.0], np.cumsum(angle_gained + speed[:-1] * self.duration)])
        return time, angle, speed


_NO_SINE = (0.0, 1.0, 0.0)

# Shares of the time in half sines (b), in constant acceleration (c) and in the half cosine between them (d).
_FIVE_ZONES: dict[Law, tuple[float, float, float]] = {
    Law.TRIANGULAR: (0.0, 1.0, 0.0),
    Law.HARMONIC: (0.0, 0.0, 1.0),
    Law.CYCLOIDAL: (0.5, 0.0, 0.5),
    Law.MODIFIED_SINE: (0.25, 0.0, 0.75),
    Law.MODIFIED_TRAPEZOID: (0.25, 0.5, 0.25),
}
# Second derivatives of 10x³ − 15x⁴ + 6x⁵ and of 35x⁴ − 84x⁵ + 70x⁶ − 20x⁷.
_POLYNOMIALS: dict[Law, list[float]] = {
    Law.POLYNOMIAL_345: [0.0, 60.0, -180.0, 120.0],
    Law.POLYNOMIAL_4567: [0.0, 0.0, 420.0, -1680.0, 2100.0, -840.0],
}
# Peak acceleration and jerk of the polynomials: 10/√3 and 84√5/25; at the ends 60, in the middle 52.5.
_POLYNOMIAL_PEAKS: dict[Law, tuple[float, float]] = {
    Law.POLYNOMIAL_345: (10 / math.sqrt(3), 60.0),
    Law.POLYNOMIAL_4567: (84 * math.sqrt(5) / 25, 52.5),
}

# The laws made of ramps and a cruise; their shape depends on the ramps, so they have no unit form of their own.
RAMPED = (Law.TRAPEZOIDAL, Law.S_CURVE)


@dataclass(frozen=True)
class Peaks:
    """The largest speed, acceleration and jerk of a law of unit stroke and unit time; jerk inf where it jumps."""

    speed: float
    acceleration: float
    jerk: float


@lru_cache(maxsize=len(Law))
def unit_zones(law: Law) -> Zones:
    """Return the zones of a law of unit stroke and unit time; not of the RAMPED ones."""
    if law in _POLYNOMIALS:
        return Zones.of_rows([(1.0, _POLYNOMIALS[law], _NO_SINE)])
    trial = _five_zones(*_FIVE_ZONES[law], 1.0)
    stroke = float(trial.starts()[1][-1])
    return _five_zones(*_FIVE_ZONES[law], 1 / stroke)


@lru_cache(maxsize=len(Law))
def unit_peaks(law: Law) -> Peaks:
    """Return the peaks of a law of unit stroke and unit time; not of the RAMPED ones."""
    zones = unit_zones(law)
    time, _, speed = zones.starts()
    middle = int(np.searchsorted(time, 0.5, side="right")) - 1
    _, gained, _, _ = zones.rates(np.array([middle]), np.array([0.5 - time[middle]]))
    top = float(speed[middle] + gained[0])
    if law in _POLYNOMIALS:
        return Peaks(top, *_POLYNOMIAL_PEAKS[law])
    b = _FIVE_ZONES[law][0]
    peak = float(max(np.abs(zones.amplitude).max(), np.abs(zones.polynomial).max()))
    return Peaks(top, peak, peak * math.pi / b if b else math.inf)


def _five_zones(b: float, c: float, d: float, peak: float) -> Zones:
    def sine(length: float, size: float, period: float, phase: float) -> _Row:
        return length, [0.0], (size, math.pi / period if period else 1.0, phase)

    return Zones.of_rows([
        sine(b / 2, peak, b, 0.0),
        (c / 2, [peak], _NO_SINE),
        sine(d, peak, d, math.pi / 2),
        (c / 2, [-peak], _NO_SINE),
        sine(b / 2, -peak, b, math.pi / 2),
    ])


def ramped_zones(
    speed: float, up: tuple[float, float], cruise: float, down: tuple[float, float]
) -> Zones:
    """Return the zones of a move that ramps up to a speed, keeps it, and ramps down.

    Args:
        speed: rad/s, negative for a move backwards.
        up: (time of the ramp, time of each of its two stretches of constant jerk), s; no jerk time: the
            acceleration jumps.
        cruise: s at the speed.
        down: as up, of slowing down.
    """
    return Zones.of_rows([
        *_ramp(speed, *up), (cruise, [0.0], _NO_SINE), *_ramp(-speed, *down)
    ])


def _ramp(change: float, time: float, jerk_time: float) -> list[_Row]:
    peak = change / (time - jerk_time)
    jerk = peak / jerk_time if jerk_time else 0.0
    return [
        (jerk_time, [0.0, jerk], _NO_SINE),
        (time - 2 * jerk_time, [peak], _NO_SINE),
        (jerk_time, [peak, -jerk], _NO_SINE),
    ]
