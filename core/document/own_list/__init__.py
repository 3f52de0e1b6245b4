"""The user's own list: materials and known parts in plain text files, groups as documents in a folder.

Nothing in the list is ever replaced: what has a name that is taken gets another one, or is refused. The folder is
given by whoever asks; a document says all that it needs itself, and never reads the list.
"""

from core.document.own_list.entries import KNOWN_PARTS, OWN_MATERIALS, ListKind, OwnPart
from core.document.own_list.groups import (
    group_files,
    with_group_exported,
    with_group_imported,
    with_group_kept,
    without_group,
)
from core.document.own_list.lists import (
    Imported,
    read_list,
    with_entries_exported,
    with_entries_imported,
    with_entry_kept,
    without_entry,
)

__all__ = [
    "KNOWN_PARTS",
    "OWN_MATERIALS",
    "Imported",
    "ListKind",
    "OwnPart",
    "group_files",
    "read_list",
    "with_entries_exported",
    "with_entries_imported",
    "with_entry_kept",
    "with_group_exported",
    "with_group_imported",
    "with_group_kept",
    "without_entry",
    "without_group",
]
