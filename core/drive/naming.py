"""Named dimensions in the numbers of a drive: every number that was typed with a name follows it."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from core.assembly.names import USES
from core.drive.fields import kind_at, number_at, with_numbers, words_at
from core.errors import EditRefused, QuantityError, ValueRefused
from core.quantity import Readings, names_in, parse, with_names_changed

if TYPE_CHECKING:
    from collections.abc import Collection, Iterator, Mapping

    from core.drive.settings import DriveSettings
    from core.quantity import Names


@dataclass(frozen=True)
class DriveUse:
    """A number of the drive that a name says: its path, what it is called, and the text as typed."""

    path: str
    where: str
    text: str


def drive_uses_of(settings: DriveSettings, names: Names, wanted: Collection[str]) -> tuple[DriveUse, ...]:
    """Return every number of a drive that is typed with one of the wanted names, which mean what names say."""
    return tuple(_uses(settings, Readings(names, wanted)))


def with_names_read_again(settings: DriveSettings, before: Names, after: Names) -> DriveSettings:
    """Return the settings with the numbers that their texts mean now that names have other values.

    Raises:
        EditRefused: a name that is used is gone, or the settings cannot be with the number that follows.
        QuantityError: a text means nothing any more, or something of another kind.
    """
    moved = {name for name in {*before, *after} if before.get(name) != after.get(name)}
    uses = tuple(_uses(settings, Readings(before, moved))) if moved and settings.typed else ()
    for use in uses:
        for gone in names_in(use.text, moved - set(after)):
            raise EditRefused(
                f'the named dimension "{gone}" is used', where=f'{use.where} ("{use.text}")', remedy="Change that first"
            )
    values, texts = {}, {}
    for use in uses:
        where = USES.join([use.where, *names_in(use.text, moved)])
        values[use.path] = parse(use.text, kind_at(use.path), where=where, names=after).value
        texts[use.path] = use.text
    if not values:
        return settings
    try:
        return with_numbers(settings, values, texts)
    except (ValueRefused, QuantityError) as error:
        used = [name for use in uses for name in names_in(use.text, moved)]
        where = USES.join([error.where or "drive", *dict.fromkeys(used)])
        raise EditRefused(error.what, where=where, read=error.read, remedy=error.remedy) from error


def with_names_written_anew(settings: DriveSettings, changes: Mapping[str, str]) -> DriveSettings:
    """Return the settings with names called otherwise in every text, new names by old ones; no number changes."""
    typed = tuple((path, with_names_changed(text, changes)) for path, text in settings.typed)
    return settings if typed == settings.typed else replace(settings, typed=typed)


def _uses(settings: DriveSettings, readings: Readings) -> Iterator[DriveUse]:
    for path, text in settings.typed:
        if readings.uses(text) and readings.means(text, kind_at(path), number_at(settings, path)):
            yield DriveUse(path, words_at(settings, path), text)
