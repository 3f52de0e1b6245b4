"""What a line of the ledger turns with: said in words, and edited."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from core.drive.axis import axis_of, entries_by_line
from core.drive.train import FIXED, LOAD
from core.errors import EditRefused

if TYPE_CHECKING:
    from core.assembly import Assembly
    from core.drive.axis import TurnsWith
    from core.drive.settings import DriveSettings

STANDS_STILL = "stands still"


def with_turning(settings: DriveSettings, entry: TurnsWith) -> DriveSettings:
    """Return the settings with an entry in the place of the one of the same line, or behind the others.

    Raises:
        ValueRefused: the train has no such shaft.
    """
    at = next((at for at, one in enumerate(settings.turning) if one.key == entry.key), len(settings.turning))
    return replace(settings, turning=(*settings.turning[:at], entry, *settings.turning[at + 1 :]))


def without_turning(settings: DriveSettings, key: str) -> DriveSettings:
    """Return the settings without the entry of a line, which then turns with what holds it.

    Raises:
        EditRefused: it is the entry of the whole document.
    """
    if not key:
        raise EditRefused(
            "what nothing else is said of turns with the whole document", where="what turns",
            remedy="Choose another shaft for it, or let it stand still",
        )
    return replace(settings, turning=tuple(one for one in settings.turning if one.key != key))


def turning_of_line(settings: DriveSettings, key: str) -> TurnsWith | None:
    """Return the entry of a line itself; None where it turns with what holds it."""
    return next((entry for entry in settings.turning if entry.key == key), None)


def turning_words(assembly: Assembly, settings: DriveSettings, entry: TurnsWith | None) -> str:
    """Return how an entry is said: the shaft, and the axis where it is not the drive axis; None stands still, too.

    Raises:
        EditRefused: it names an axis that is not there.
    """
    if entry is None or entry.shaft == FIXED:
        return STANDS_STILL
    shaft = settings.train.words_of(entry.shaft)
    axis = axis_of(assembly, entry).name
    return shaft if axis == assembly.drive else f"{shaft}, about {axis}"


def turning_elsewhere(assembly: Assembly, settings: DriveSettings) -> dict[str, str]:
    """Return in words what parts and groups turn with, by key; those that turn with the load are not in it.

    Raises:
        EditRefused: an entry names an axis that is not there.
    """
    train = settings.train
    words: dict[TurnsWith | None, str] = {}
    for entry in (None, *settings.turning):
        shaft = None if entry is None or entry.shaft == FIXED else train.first_name(entry.shaft)
        if entry is None or shaft != LOAD or axis_of(assembly, entry).name != assembly.drive:
            words[entry] = turning_words(assembly, settings, entry)
    if set(words) == {None} and settings.turning and not settings.turning[0].key:
        return {}  # As most documents have it: no line need be looked at.
    by_line = entries_by_line(assembly, settings.turning)
    return {key: words[entry] for key, entry in by_line.items() if entry in words}
