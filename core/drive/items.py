"""The lists in a drive's settings: entries added, taken away, moved and exchanged; typed texts go with their numbers.

A list is named by its path: train.stages, train.linear, train.inertias, duty.steps, duty.steps.2.steps (of a repeat),
forces, torques, frictions, stops, turning, balance.planes, limits.peak.points.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Any, cast

from core.drive.paths import changed_at, found_at
from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.drive.settings import DriveSettings
    from core.drive.train import Stage

_STAGES = "train.stages"


def items_at(settings: DriveSettings, path: str) -> tuple[Any, ...]:
    """Return the entries of a list.

    Raises:
        EditRefused: the settings have no such list.
    """
    at = found_at(settings, path)
    if not isinstance(at, tuple):
        raise EditRefused("the drive has no such list", read=path)
    return at


def with_item(settings: DriveSettings, path: str, item: object, index: int | None = None) -> DriveSettings:
    """Return the settings with an entry put into a list before index (None: at the end).

    Raises:
        EditRefused: the settings have no such list.
        ValueRefused: the settings cannot be with it.
    """
    items = items_at(settings, path)
    at = len(items) if index is None else index
    return _with_items(settings, path, (*items[:at], item, *items[at:]), lambda old: old + (old >= at))


def without_item(settings: DriveSettings, path: str, index: int) -> DriveSettings:
    """Return the settings without the entry at index; what hung on the shaft of a stage hangs on the load then.

    Raises:
        EditRefused: the settings have no such entry.
        ValueRefused: the settings cannot be without it.
    """
    items = _holding(settings, path, index)
    return _with_items(
        settings, path, (*items[:index], *items[index + 1 :]), lambda old: None if old == index else old - (old > index)
    )


def with_item_moved(settings: DriveSettings, path: str, index: int, to: int) -> DriveSettings:
    """Return the settings with the entry at index put so that it stands at place to.

    Raises:
        EditRefused: the settings have no such entry.
        ValueRefused: the settings cannot be in this order.
    """
    order = list(range(len(_holding(settings, path, index))))
    order.insert(to, order.pop(index))
    items = items_at(settings, path)
    return _with_items(settings, path, tuple(items[old] for old in order), order.index)


def with_item_at(settings: DriveSettings, path: str, index: int, item: object) -> DriveSettings:
    """Return the settings with another entry in the place of the one at index; a stage may be named anew by it.

    Raises:
        EditRefused: the settings have no such entry.
        ValueRefused: the settings cannot be with it.
    """
    items = _holding(settings, path, index)
    changed = (*items[:index], item, *items[index + 1 :])
    if path == _STAGES:
        old, new = items[index].name, cast("Stage", item).name
        return settings.with_stages(changed, {} if old == new else {old: new})
    return _with_items(settings, path, changed, lambda old: old)


def _holding(settings: DriveSettings, path: str, index: int) -> tuple[Any, ...]:
    items = items_at(settings, path)
    if not 0 <= index < len(items):
        raise EditRefused("the list has no such entry", where=path, read=f"{index + 1} of {len(items)}")
    return items


def _with_items(
    settings: DriveSettings, path: str, items: tuple[Any, ...], moved: Callable[[int], int | None]
) -> DriveSettings:
    """Return the settings with other entries in a list; moved gives the new place of an old one, None if it is gone."""
    changed = settings.with_stages(items) if path == _STAGES else changed_at(settings, {tuple(path.split(".")): items})
    typed: list[tuple[str, str]] = []
    for where, text in settings.typed:
        head, dot, tail = where.removeprefix(f"{path}.").partition(".")
        if where == head + dot + tail:
            typed.append((where, text))
            continue
        place = moved(int(head))
        if place is not None:
            typed.append((f"{path}.{place}{dot}{tail}", text))
    return cast("DriveSettings", replace(changed, typed=tuple(sorted(typed))))
