"""The numbers that an entry of the drive cannot have, each refused with the field, the rule and what was read."""

from __future__ import annotations

import math

from core.errors import ValueRefused


def refuse_unless_finite(value: float, field: str, where: str) -> None:
    """Refuse a value that is no finite number.

    Raises:
        ValueRefused: it is infinite or not a number.
    """
    if not math.isfinite(value):
        raise ValueRefused(f"the {field} has to be a finite number", where=where, read=f"{value}")


def refuse_unless_positive(value: float, field: str, where: str) -> None:
    """Refuse a value that is not above 0.

    Raises:
        ValueRefused: it is 0, negative, infinite or not a number.
    """
    refuse_unless_finite(value, field, where)
    if value <= 0:
        raise ValueRefused(
            f"the {field} has to be more than 0", where=where, read=f"{value:g}", remedy="Give a positive value"
        )


def refuse_if_negative(value: float, field: str, where: str) -> None:
    """Refuse a value below 0.

    Raises:
        ValueRefused: it is negative, infinite or not a number.
    """
    refuse_unless_finite(value, field, where)
    if value < 0:
        raise ValueRefused(
            f"the {field} cannot be less than 0", where=where, read=f"{value:g}", remedy="Give 0 or a positive value"
        )


def refuse_unless_efficiency(value: float, where: str) -> None:
    """Refuse an efficiency that is not above 0 and at most 1.

    Raises:
        ValueRefused: it is 0 or less, above 1, or not a number.
    """
    if not 0 < value <= 1:
        raise ValueRefused(
            "an efficiency lies above 0 and at most at 1", where=where, read=f"{value:g}",
            remedy="Give the part of the power that comes out, such as 0.96 or 96 %",
        )


def refuse_unless_braking_efficiency(value: float | None, where: str) -> None:
    """Refuse an efficiency in braking that is not 0…1; 0 means that the load cannot turn the stage.

    Raises:
        ValueRefused: it is negative, above 1, or not a number.
    """
    if value is not None and not 0 <= value <= 1:
        raise ValueRefused(
            "an efficiency in braking lies between 0 and 1", where=where, read=f"{value:g}",
            remedy="Give 0 for a stage that the load cannot turn, or leave it empty to use the same as in driving",
        )
