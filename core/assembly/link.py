"""The tie from a group to the document file that its members were read from."""

from __future__ import annotations

import ntpath
from dataclasses import dataclass
from typing import Final, Literal, TypeAlias

# Of a linked file: nobody has looked since; it holds what was read; it holds something else; it is not to be read.
LinkState: TypeAlias = Literal["not looked at", "as read", "changed", "missing"]

# How the basis begins of values that a linked file no longer stands behind.
LAST_VALUES: Final = "last values"
_BASES: Final[dict[LinkState, str]] = {
    "missing": f"{LAST_VALUES}: linked file missing", "changed": f"{LAST_VALUES}: linked file has changed",
}


@dataclass(frozen=True)
class Link:
    """Where a linked group was read from.

    What is known of the file now is no part of the value: it is kept beside it, for all assemblies that share the link.

    Attributes:
        path: of the document file, absolute; a document on disk keeps it relative to its own folder where that can be.
        sha256: of the file's bytes when they were read.
    """

    path: str
    sha256: str

    @property
    def file_name(self) -> str:
        """The name of the file without its folders, whichever system the path was written on."""
        return ntpath.basename(self.path) or self.path

    @property
    def state(self) -> LinkState:
        """What the last look at the file told."""
        state: LinkState = self.__dict__.get("_state", "not looked at")
        return state

    def note(self, found: str | None) -> None:
        """Keep what a look at the file told: the SHA-256 of its bytes now, None where it could not be read."""
        state: LinkState = "missing" if found is None else "as read" if found == self.sha256 else "changed"
        self.__dict__["_state"] = state

    @property
    def basis(self) -> str:
        """Where the group's values come from, where the file does not stand behind them; otherwise ""."""
        return _BASES.get(self.state, "")
