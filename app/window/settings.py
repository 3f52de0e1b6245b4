"""What the window remembers between two sessions: its size, its columns, the units, the files used last."""

from __future__ import annotations

import math
from dataclasses import fields
from pathlib import Path
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QByteArray, QLocale, QSettings

from app.window.manner import CHOICES, Manner
from core.errors import QuantityError
from core.quantity import DEFAULT_UNITS, UnitSet, parse_unit_set

if TYPE_CHECKING:
    from collections.abc import Callable

MOST_RECENT = 8


def _step(text: str) -> float | None:
    """Return the step that a text stands for, or None."""
    try:
        value = float(text)
    except ValueError:
        return None
    return value if 0 <= value < math.inf else None


# By the type of a field of the manner: what a stored text means, None where it means nothing.
_READ: dict[str, Callable[[str], object]] = {"float": _step, "bool": {"True": True, "False": False}.get}


class Settings:
    """Typed access to the user's settings file; what cannot be read there counts as never set."""

    def __init__(self) -> None:
        self._store = QSettings(QSettings.Format.IniFormat, QSettings.Scope.UserScope, "masswright", "masswright")

    @property
    def units(self) -> UnitSet:
        """The unit set that was used last."""
        try:
            return parse_unit_set(str(self._store.value("units", DEFAULT_UNITS.name)))
        except QuantityError:
            return DEFAULT_UNITS

    @units.setter
    def units(self, units: UnitSet) -> None:
        self._store.setValue("units", units.name)

    @property
    def decimal_mark(self) -> str:
        """The decimal mark that was chosen, otherwise the system's."""
        mark = str(self._store.value("decimal_mark", QLocale.system().decimalPoint()))
        return mark if mark in {".", ","} else "."

    @decimal_mark.setter
    def decimal_mark(self, mark: str) -> None:
        self._store.setValue("decimal_mark", mark)

    @property
    def manner(self) -> Manner:
        """How lines were placed by hand last."""
        kept: dict[str, Any] = {}
        for field in fields(Manner):
            text = str(self._store.value(f"placing/{field.name}", ""))
            value = _READ[str(field.type)](text) if str(field.type) in _READ else text
            if value is not None and (field.name not in CHOICES or value in CHOICES[field.name]):
                kept[field.name] = value
        return Manner(**kept)

    @manner.setter
    def manner(self, manner: Manner) -> None:
        # As text: numbers that Qt writes lose digits.
        for field in fields(Manner):
            self._store.setValue(f"placing/{field.name}", str(getattr(manner, field.name)))

    @property
    def recent(self) -> list[Path]:
        """The documents used last that are still there, the newest first."""
        stored = self._store.value("recent", [])
        names = [stored] if isinstance(stored, str) else list(stored) if isinstance(stored, list) else []
        return [Path(str(name)) for name in names if Path(str(name)).is_file()]

    def add_recent(self, path: Path) -> None:
        """Put a document in front of those used last."""
        names = [str(path.resolve()), *(str(old) for old in self.recent if old.resolve() != path.resolve())]
        self._store.setValue("recent", names[:MOST_RECENT])

    def state(self, name: str) -> QByteArray | None:
        """Return the stored state of a widget."""
        value = self._store.value(f"state/{name}")
        return value if isinstance(value, QByteArray) else None

    def keep_state(self, name: str, value: QByteArray) -> None:
        """Store the state of a widget."""
        self._store.setValue(f"state/{name}", value)
