"""The lists in a drive's settings: entries added, taken away, moved and exchanged; typed texts go with their numbers.

A list is named by its path: train.stages, train.linear, train.inertias, duty.steps, duty.steps.2.steps (of a repeat),
forces, torques, frictions, stops, turning, balance.planes, limits.peak.points.
"""

from __future__ import annotations

from dataclasses import replace
from itertools import count
from typing import TYPE_CHECKING, Any, cast

from core.drive.fields import number_at
from core.drive.paths import changed_at, found_at
from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Callable, Collection

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
    return with_items(settings, path, (item,), index)


def with_items(
    settings: DriveSettings, path: str, new: tuple[object, ...], index: int | None = None
) -> DriveSettings:
    """Return the settings with several entries put into a list before index; `with_item` for more than one."""
    items = items_at(settings, path)
    at = len(items) if index is None else index
    return _with_items(settings, path, (*items[:at], *new, *items[at:]), lambda old: old + len(new) * (old >= at))


def without_item(settings: DriveSettings, path: str, index: int) -> DriveSettings:
    """Return the settings without the entry at index; what hung on the shaft of a stage hangs on the load then.

    Raises:
        EditRefused: the settings have no such entry.
        ValueRefused: the settings cannot be without it.
    """
    return without_items(settings, path, (index,))


def without_items(settings: DriveSettings, path: str, indices: Collection[int]) -> DriveSettings:
    """Return the settings without the entries at several places; `without_item` for more than one."""
    for index in indices:
        _holding(settings, path, index)
    items, gone = items_at(settings, path), frozenset(indices)
    kept = [old for old in range(len(items)) if old not in gone]
    place = {old: new for new, old in enumerate(kept)}
    return _with_items(settings, path, tuple(items[old] for old in kept), place.get)


def with_item_moved(settings: DriveSettings, path: str, index: int, to: int) -> DriveSettings:
    """Return the settings with the entry at index put so that it stands at place to.

    Raises:
        EditRefused: the settings have no such entry.
        ValueRefused: the settings cannot be in this order.
    """
    return with_items_moved(settings, path, (index,), to)


def with_items_moved(settings: DriveSettings, path: str, indices: Collection[int], to: int) -> DriveSettings:
    """Return the settings with several entries put together, in their order, the first of them at place to."""
    items = items_at(settings, path)
    for index in indices:
        _holding(settings, path, index)
    moved = sorted(indices)
    order = [old for old in range(len(items)) if old not in frozenset(moved)]
    order[to:to] = moved
    place = {old: new for new, old in enumerate(order)}
    return _with_items(settings, path, tuple(items[old] for old in order), place.get)


def with_item_doubled(settings: DriveSettings, path: str, index: int) -> DriveSettings:
    """Return the settings with a copy of an entry behind it, typed texts and all, under a name that is free.

    Raises:
        EditRefused: the settings have no such entry.
        ValueRefused: the settings cannot be with it.
    """
    item = _holding(settings, path, index)[index]
    copy = replace(item, name=free_name(settings, path, item.name)) if hasattr(item, "name") else item
    changed = with_item(settings, path, copy, index + 1)
    here, there = f"{path}.{index}.", f"{path}.{index + 1}."
    texts = [(there + at.removeprefix(here), text) for at, text in settings.typed if at.startswith(here)]
    return replace(changed, typed=tuple(sorted((*changed.typed, *texts))))


def free_name(settings: DriveSettings, path: str, name: str) -> str:
    """Return a name that no entry of a list has yet: the one wanted, or that with a number behind it."""
    taken = {getattr(item, "name", "") for item in items_at(settings, path)}
    stem, _, number = name.rpartition(" ")
    if name in taken and number.isdecimal():
        name = stem
    numbered = (f"{name} {number}" for number in count(2))
    return name if name not in taken else next(each for each in numbered if each not in taken)


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
        return _with_texts_kept(settings.with_stages(changed, {} if old == new else {old: new}))
    return _with_texts_kept(_with_items(settings, path, changed, lambda old: old))


def _with_texts_kept(settings: DriveSettings) -> DriveSettings:
    """Return the settings without the texts of numbers that an exchanged entry has no longer."""
    kept = tuple((path, text) for path, text in settings.typed if number_at(settings, path) is not None)
    return settings if kept == settings.typed else replace(settings, typed=kept)


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
