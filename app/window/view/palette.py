"""The colours of the view in the light and the dark theme, from the Okabe–Ito set and neutral greys."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

Colour: TypeAlias = tuple[int, int, int]

# Below this the transfer curve of sRGB is straight.
_DARKEST = 0.04045

BLUE: Colour = (0x00, 0x72, 0xB2)
SKY_BLUE: Colour = (0x56, 0xB4, 0xE9)
REDDISH_PURPLE: Colour = (0xCC, 0x79, 0xA7)


@dataclass(frozen=True)
class Theme:
    """What is drawn in which colour, as (red, green, blue) 0…255.

    Attributes:
        ground: behind everything; parts, marks and text are chosen to stand out from it.
        text: of labels that name no colour of their own.
        edge: of the lines along sharp edges and rims.
        parts: neutral tints that tell neighbours apart.
        selected, hovered: faces of what is selected, and of what the pointer is on.
        selected_edge, hovered_edge: their outlines, which are thicker as well.
        ghost: faces of a part that is not in the document yet.
        drive: the drive axis and its name.
        principal: the principal axes, the mark of the centre of mass, and the focus ring.
        found: the edges that a finding is about.
        handle: what a line is moved and turned by.
        vector: arrows of what acts on the assembly, such as an unbalance.
        casing: beneath lines and text, so that they read over any part.

    """

    ground: Colour
    text: Colour
    edge: Colour
    parts: tuple[Colour, ...]
    selected: Colour
    hovered: Colour
    selected_edge: Colour
    hovered_edge: Colour
    ghost: Colour
    drive: Colour
    principal: Colour
    found: Colour
    handle: Colour
    vector: Colour
    casing: Colour


LIGHT = Theme(
    ground=(0xEE, 0xF0, 0xF2),
    text=(0x2B, 0x31, 0x37),
    edge=(0x26, 0x2C, 0x33),
    parts=(
        (0xC9, 0xCE, 0xD4),
        (0xD6, 0xD0, 0xC4),
        (0xB4, 0xBC, 0xC4),
        (0xC3, 0xCE, 0xC4),
        (0xCE, 0xC5, 0xCC),
        (0xDD, 0xDD, 0xDA),
        (0xA9, 0xA8, 0xA4),
    ),
    selected=(0x4F, 0xA3, 0xD6),
    hovered=(0xA9, 0xCF, 0xE6),
    selected_edge=(0x00, 0x3F, 0x66),
    hovered_edge=BLUE,
    ghost=(0x56, 0xB4, 0xE9),
    drive=(0x9C, 0x3F, 0x74),
    principal=(0x00, 0x6C, 0xAA),
    found=(0xC2, 0x4C, 0x00),
    handle=(0x00, 0x6B, 0x4E),
    vector=(0x8A, 0x5A, 0x00),
    casing=(0xFF, 0xFF, 0xFF),
)

DARK = Theme(
    ground=(0x1E, 0x22, 0x26),
    text=(0xDD, 0xE2, 0xE6),
    edge=(0x0B, 0x0D, 0x0F),
    parts=(
        (0x8E, 0x95, 0x9C),
        (0x9C, 0x96, 0x89),
        (0x7A, 0x83, 0x8B),
        (0x87, 0x94, 0x89),
        (0x95, 0x8A, 0x92),
        (0xA6, 0xA6, 0xA2),
        (0x72, 0x71, 0x6E),
    ),
    selected=(0x1E, 0x84, 0xC2),
    hovered=(0x78, 0xA2, 0xBC),
    selected_edge=(0xB8, 0xE2, 0xFA),
    hovered_edge=SKY_BLUE,
    ghost=SKY_BLUE,
    drive=(0xE0, 0x95, 0xBD),
    principal=SKY_BLUE,
    found=(0xF0, 0x80, 0x40),
    handle=(0x3F, 0xD0, 0xA4),
    vector=(0xE6, 0x9F, 0x00),
    casing=(0x12, 0x15, 0x18),
)


def contrast(one: Colour, other: Colour) -> float:
    """Return the contrast ratio 1…21 of two colours (WCAG 2.2, relative luminance)."""
    high, low = sorted((_luminance(one), _luminance(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)


def _luminance(colour: Colour) -> float:
    linear = [
        value / 12.92 if value <= _DARKEST else ((value + 0.055) / 1.055) ** 2.4
        for value in (channel / 255 for channel in colour)
    ]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]
