"""The file `name.masswright`, read, brought up to date and saved.

A ZIP with assembly.json (all that the assembly says, in SI units) and the mesh files as they were imported.
"""

from core.document.linking import hash_of, linked_paths, look_at_links, note_links, read_linked
from core.document.reading import read_document, read_document_bytes
from core.document.saving import save_document

__all__ = [
    "hash_of",
    "linked_paths",
    "look_at_links",
    "note_links",
    "read_document",
    "read_document_bytes",
    "read_linked",
    "save_document",
]
