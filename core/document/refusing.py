"""Values built from checked entries; what refuses them says the place in the document."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeVar

from core.document.validation import short_place
from core.errors import DocumentError, MasswrightError

if TYPE_CHECKING:
    from collections.abc import Callable

Built = TypeVar("Built")


def made_at(place: str, make: Callable[[], Built]) -> Built:
    """Return what make returns; a refusal says the place in the document before its own sentence.

    Raises:
        DocumentError: make refused.
    """
    try:
        return make()
    except MasswrightError as error:
        where = ", ".join(said for said in (short_place(place), error.where) if said)
        raise DocumentError(error.what, where=where, read=error.read, remedy=error.remedy) from error
