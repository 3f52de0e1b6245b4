"""How fast a change is answered: a 200-part assembly and a duty of 20 moves. Run with --benchmark-only."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from core.assembly import Assembly, DriveAxis, Group, Part, ShapeBody, ledger_of
from core.drive import (
    AppliedForce,
    BalanceSettings,
    Belt,
    ByTime,
    CorrectionPlane,
    DriveSettings,
    Duty,
    Friction,
    Gear,
    Law,
    LimitCurve,
    Motor,
    MotorLimits,
    Move,
    Rest,
    Train,
    balance_answer,
    drive_answer,
)
from core.material import ByMaterial
from core.placement import Pose
from core.shapes import Cylinder

PARTS, MOVES = 200, 20


def flap_of(count: int) -> Assembly:
    """Return count cylinders, no two alike, in groups of twenty, about a level axis."""
    draw = np.random.default_rng(11)

    def part(number: int) -> Part:
        shape = Cylinder(*draw.uniform(0.01, 0.1, 2).tolist())
        return Part(f"p{number}", f"part {number}", ShapeBody(shape), ByMaterial("steel", 7850.0),
                    Pose(tuple(draw.uniform(-0.5, 0.5, 3).tolist())))

    groups = tuple(
        Group(f"g{first}", f"group {first}", tuple(part(first + at) for at in range(20))) for first in range(0, count, 20)
    )
    return Assembly("flap", groups, (DriveAxis("Hinge", (0.0, 0.0, 0.0), (0.0, 1.0, 0.0)),), "Hinge")


def settings_of(moves: int) -> DriveSettings:
    laws = list(Law)
    steps = []
    for number in range(moves):
        angle = (1.0 + 0.1 * number) * (-1) ** number
        steps += [Move(angle, ByTime(1.0), laws[number % len(laws)]), Rest(0.2)]
    limit = LimitCurve(((0.0, 50.0), (400.0, 30.0)))
    return DriveSettings(
        train=Train(Motor(1e-3), (Gear("gearbox", 20.0, 0.9, 1e-4), Belt("belt", 0.02, 0.04, 0.95))),
        duty=Duty(tuple(steps)),
        forces=(AppliedForce("seal", (0.0, 0.0, -50.0), (0.3, 0.0, 0.0), start=0.1, end=0.4),),
        frictions=(Friction("bearing", 1.0, 0.1),),
        limits=MotorLimits(limit, limit),
        balance=BalanceSettings("load", 30.0, 6.3, (-0.5, 0.5), (CorrectionPlane(-0.2, 0.3), CorrectionPlane(0.2, 0.3))),
    )


def edits() -> object:
    assembly = flap_of(PARTS)
    ledger_of(assembly)
    for diameter in np.linspace(0.02, 0.08, 100_000):
        part = assembly.node("p7")
        yield assembly.replaced(replace(part, body=ShapeBody(Cylinder(float(diameter), 0.05))))


def test_a_part_edited_has_ledger_torque_and_balance_right_again(benchmark):
    assemblies, settings = edits(), settings_of(MOVES)

    def edit() -> None:
        assembly = next(assemblies)
        ledger_of(assembly)
        answer = drive_answer(assembly, settings)
        answer.curves("load"), answer.curves("motor")
        balance_answer(assembly, settings)

    benchmark(edit)
    benchmark.extra_info["aim"] = "50 ms with the drawing"


@pytest.mark.parametrize("moves", [1, 20, 200])
def test_a_duty_edited_has_its_torque_right_again(benchmark, moves):
    assembly, settings = flap_of(PARTS), settings_of(moves)
    starts = iter(np.linspace(0.0, 1.0, 100_000))

    def edit() -> None:
        duty = replace(settings.duty, start=float(next(starts)))
        drive_answer(assembly, replace(settings, duty=duty))

    benchmark(edit)
    benchmark.extra_info["aim"] = "50 ms for 20 moves"
