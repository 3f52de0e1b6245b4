"""The assembly that the view's tests look at: a dial with fixtures in a ring, a shaft and a bought-in rotor."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

from core.assembly import Assembly, DataSheet, DriveAxis, Group, KnownAxial, Part, ShapeBody
from core.material import ByDensity
from core.placement import Mirrored, Pose, Ring, Row, Several
from core.shapes import SHAPES

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.placement import Copies, Triple


def solid(key: str, shape: str, density: float, at: Triple = (0, 0, 0), copies: Copies | None = None, **dimensions: float) -> Part:
    """Return a part made from a shape; its key is its name."""
    body = ShapeBody(SHAPES[shape].of(dimensions))
    return Part(key, key, body, ByDensity(density), Pose(at), copies or Several(1))


def dial_at(at: Triple = (0.0, 0.0, 0.0), turns: Triple = (0.0, 0.0, 0.0)) -> Assembly:
    """Return the dial, standing somewhere in the document."""
    members = (
        solid("plate", "tube", 2700.0, outer_diameter=0.4, bore=0.06, length=0.02),
        solid("hub", "tube", 7850.0, (0, 0, -0.035), outer_diameter=0.11, bore=0.04, length=0.035),
        solid("fixture", "cylinder", 7800.0, (0.15, 0, 0.02), Ring(6), diameter=0.055, length=0.045),
        solid("bolt", "cylinder", 7900.0, (0.085, 0, 0.02), Ring(12, start=np.pi / 12), diameter=0.013, length=0.008),
        solid("shaft", "cylinder", 7840.0, (0, 0, -0.125), diameter=0.04, length=0.13),
        Part("rotor", "rotor", KnownAxial(1.9, (0, 0, -0.16), 0.0021, 0.08), DataSheet()),
    )
    pose = Pose(at, turns)
    axis = DriveAxis("Spindle", at, tuple(pose.placement.turn[:, 2]))
    return Assembly("dial", (Group("dial", "dial", members, pose),), (axis,), "Spindle")


@pytest.fixture(scope="session")
def dial() -> Assembly:
    return dial_at()


@pytest.fixture(scope="session")
def make_dial() -> Callable[..., Assembly]:
    return dial_at


@pytest.fixture(scope="session")
def make_solid() -> Callable[..., Part]:
    return solid


@pytest.fixture(scope="session")
def mirrored_pair() -> Assembly:
    """Return a wedge-like part and its mirror image, beside a row of boxes."""
    return Assembly("pair", (
        solid("cone", "cone", 7000.0, (0.2, 0, 0), Mirrored(), base_diameter=0.1, height=0.12),
        solid("box", "box", 7000.0, (-0.1, 0.2, 0), Row(3, (0.1, 0, 0)), length_x=0.05, length_y=0.05, length_z=0.05),
    ))
