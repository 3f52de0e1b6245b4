"""The points of a motor's limits as a table to be edited: put in, taken out, pasted; no points are no limit."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Literal, TypeAlias

from core.drive.items import with_item, without_items
from core.drive.limits import LimitCurve
from core.errors import QuantityError, ValueRefused
from core.quantity.block import check_decimal_mark, rows_of_block, value_of_cell
from core.quantity.units import Kind

if TYPE_CHECKING:
    from collections.abc import Collection

    from core.drive.settings import DriveSettings
    from core.quantity import Unit
    from core.quantity.block import DecimalMark

Limit: TypeAlias = Literal["continuous", "peak"]
Point: TypeAlias = tuple[float, float]

LONGEST_BLOCK = 200_000
_WHERE = "block of points"


def points_at(settings: DriveSettings, limit: Limit) -> tuple[Point, ...]:
    """Return the points (speed rad/s, torque N·m) of a limit; none where it is not judged."""
    curve: LimitCurve | None = getattr(settings.limits, limit)
    return () if curve is None else curve.points


def path_of_points(limit: Limit) -> str:
    """Return the path of the list of points: limits.peak.points."""
    return f"limits.{limit}.points"


def with_point(settings: DriveSettings, limit: Limit, point: Point, texts: tuple[str, str] = ("", "")) -> DriveSettings:
    """Return the settings with a point put in by its speed, and what was typed for it.

    Raises:
        ValueRefused: there is a point of this speed, or it is less than 0.
    """
    points = points_at(settings, limit)
    at = sum(speed < point[0] for speed, _ in points)
    if any(speed == point[0] for speed, _ in points):
        raise ValueRefused(
            "there is a point of this speed", where=f"{limit} limit of the motor", remedy="Change that one"
        )
    path = path_of_points(limit)
    changed = with_item(settings, path, point, at) if points else with_points(settings, limit, (point,))
    typed = {f"{path}.{at}.{column}": text for column, text in enumerate(texts) if text}
    return replace(changed, typed=tuple(sorted({**dict(changed.typed), **typed}.items())))


def without_points(settings: DriveSettings, limit: Limit, indices: Collection[int]) -> DriveSettings:
    """Return the settings without some points; without the last one there is no limit.

    Raises:
        EditRefused: there is no such point.
    """
    if set(indices) >= set(range(len(points_at(settings, limit)))):
        return with_points(settings, limit, ())
    return without_items(settings, path_of_points(limit), indices)


def with_points(settings: DriveSettings, limit: Limit, points: tuple[Point, ...]) -> DriveSettings:
    """Return the settings with other points in the place of all of a limit.

    Raises:
        ValueRefused: the speeds do not rise, or a speed or torque is less than 0.
    """
    curve = LimitCurve(points) if points else None
    path = path_of_points(limit)
    typed = tuple((at, text) for at, text in settings.typed if not at.startswith(f"{path}."))
    limits = replace(settings.limits, continuous=curve) if limit == "continuous" else replace(
        settings.limits, peak=curve
    )
    return replace(settings, limits=limits, typed=typed)


def points_of_block(
    text: str, speed: Unit, torque: Unit, decimal_mark: DecimalMark | None = None
) -> tuple[Point, ...]:
    r"""Return the points that a pasted block describes, a row each: speed and torque, in SI.

    The first row may be a heading; empty rows are passed over.

    Args:
        text: cells separated by tabs, semicolons or blanks.
        speed: the unit of speeds without one of their own.
        torque: the same of torques.
        decimal_mark: of the block; None: found out, and refused where both readings fit.

    Raises:
        QuantityError: a cell is no speed or no torque, or the decimal mark is ambiguous or mixed.
        ValueRefused: a row has not these two cells.
    """
    if len(text) > LONGEST_BLOCK:
        raise QuantityError("the block is too long", where=_WHERE, read=f"{len(text)} signs")
    rows = rows_of_block(text)
    check_decimal_mark([cell for row in rows for cell in row], decimal_mark, _WHERE)
    points = []
    for at, row in enumerate(rows, start=1):
        filled = [cell for cell in row if cell]
        if not filled:
            continue
        if len(filled) != len(("speed", "torque")):
            raise ValueRefused(
                "a row has a speed and a torque", where=f"row {at}", read=" | ".join(row[:8]),
                remedy="Separate the two by a tab",
            )
        points.append((
            value_of_cell(filled[0], Kind.SPEED, speed, f"row {at}, speed"),
            value_of_cell(filled[1], Kind.TORQUE, torque, f"row {at}, torque"),
        ))
    if not points:
        raise ValueRefused(
            "there is nothing to paste", where=_WHERE, remedy="Copy rows of a speed and a torque from a spreadsheet"
        )
    return tuple(points)
