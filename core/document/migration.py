"""Documents of older versions of the schema, brought up to date in memory; a file changes only when saved."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, TypeAlias

from core.document.validation import shown
from core.errors import DocumentError

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

Data: TypeAlias = dict[str, Any]

# Version of the schema that this program writes.
MAJOR, MINOR = 1, 0

# Major version → the step that makes the data of the next major version out of it.
STEPS: Mapping[int, Callable[[Data], Data]] = {}

_REMEDY_NEWER = "Open it with the version of Masswright that wrote it, or a newer one"


def migrated(data: Data, steps: Mapping[int, Callable[[Data], Data]] = STEPS, major: int = MAJOR) -> Data:
    """Return the data as this major version has it; data of this version are returned as they are.

    Raises:
        DocumentError: there is no version, it is newer than this program, or no step leads on from it.

    """
    found = major_of(data)
    if found > major:
        raise DocumentError(
            f"the document was written by a newer version; this one reads up to {major}",
            where="version", read=f"version {found}", remedy=_REMEDY_NEWER,
        )
    for step in range(found, major):
        if step not in steps:
            raise DocumentError(
                "there never was a document of this version", where="version", read=f"version {found}",
                remedy="Look for a copy of the document that was saved by Masswright",
            )
        data = {**steps[step](data), "version": {"major": step + 1, "minor": 0}}
    return data


def major_of(data: Data) -> int:
    """Return the major version that the data say they are of."""
    version = data.get("version")
    major = version.get("major") if isinstance(version, dict) else None
    if not isinstance(major, int) or isinstance(major, bool):
        raise DocumentError(
            "the document does not say which version of the schema it follows", where="version.major",
            read="nothing" if major is None else shown(major),
            remedy='It has to hold "version": {"major": 1, "minor": 0}',
        )
    return major
