"""Paths into nested frozen values and tuples: what lies at the end of one, and the value with something else there."""

from __future__ import annotations

from dataclasses import is_dataclass, replace
from typing import TYPE_CHECKING, Any

from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Mapping


def one_step(at: Any, step: str) -> Any:
    """Return the attribute of a value, or the entry of a tuple, that a step of a path names; None where none is."""
    if isinstance(at, tuple):
        return at[int(step)] if step.isdecimal() and int(step) < len(at) else None
    return getattr(at, step, None) if is_dataclass(at) else None


def found_at(at: Any, path: str) -> Any:
    """Return what lies at the end of a path; None where nothing does."""
    for step in path.split("."):
        at = one_step(at, step)
    return at


def changed_at(at: Any, changes: Mapping[tuple[str, ...], object]) -> Any:
    """Return a value or tuple with what lies at the end of each of the paths exchanged, all at once.

    Raises:
        EditRefused: a path leads nowhere.
    """
    under: dict[str, dict[tuple[str, ...], object]] = {}
    for steps, new in changes.items():
        under.setdefault(steps[0], {})[steps[1:]] = new
    made = {}
    for step, deeper in under.items():
        inner = one_step(at, step)
        known = step.isdecimal() if isinstance(at, tuple) else hasattr(at, step)
        if not known or (inner is None and () not in deeper):
            raise EditRefused("the drive has no such entry", read=step)
        made[step] = deeper[()] if () in deeper else changed_at(inner, deeper)
    if isinstance(at, tuple):
        return tuple(made.get(str(place), one) for place, one in enumerate(at))
    return replace(at, **made)
