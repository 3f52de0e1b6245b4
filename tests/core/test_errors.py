"""The tree of refusals, and the one line that each becomes."""

from __future__ import annotations

import inspect
import re

import pytest

from core import errors
from core.errors import Cancelled, DocumentError, MasswrightError, ShapeError

LINE = re.compile(r"^(?P<lead>[│├└─ ]*)(?P<name>[A-Z]\w+)(?: \((?P<builtin>\w+)\))?(?:  |$)")


def drawn_tree() -> dict[str, set[str]]:
    """The names in the module's docstring, each with the names of the classes above it."""
    bases: dict[str, set[str]] = {}
    above: list[str] = []
    for line in (errors.__doc__ or "").splitlines():
        found = LINE.match(line)
        if not found:
            continue
        depth = len(found["lead"]) // 4
        above[depth:] = [found["name"]]
        parents = {above[depth - 1]} if depth else {"Exception"}
        bases[found["name"]] = parents | ({found["builtin"]} - {None})
    return bases


def test_the_tree_drawn_in_the_docstring_is_the_tree_of_classes():
    defined = {
        name: {base.__name__ for base in cls.__bases__}
        for name, cls in inspect.getmembers(errors, inspect.isclass)
        if cls.__module__ == errors.__name__
    }
    assert drawn_tree() == defined


def test_every_refusal_is_also_a_built_in_error():
    for name, cls in inspect.getmembers(errors, inspect.isclass):
        if cls is not MasswrightError and name != "MasswrightError":
            assert issubclass(cls, ValueError | RuntimeError), name


@pytest.mark.parametrize(
    ("error", "text"),
    [
        (MasswrightError("the mesh is empty"), "the mesh is empty."),
        (
            ShapeError(
                "the bore is wider than the plate", where="plate", read="42 mm", remedy="Make it smaller"
            ),
            "plate: the bore is wider than the plate; read 42 mm. Make it smaller.",
        ),
        (
            DocumentError("the file ends too soon", where="dial.masswright"),
            "dial.masswright: the file ends too soon.",
        ),
        (ShapeError("too few steps", read="2"), "too few steps; read 2."),
        (
            Cancelled("reading was cancelled", remedy="Nothing was changed"),
            "reading was cancelled. Nothing was changed.",
        ),
    ],
)
def test_a_refusal_says_where_what_what_was_read_and_what_to_do_in_this_order(error, text):
    assert str(error) == text


def test_text_from_a_file_cannot_break_the_message_into_lines():
    assert (
        str(MasswrightError("no number", where="part\n7", read="a\r\n\tb")) == "part 7: no number; read a b."
    )


def test_the_four_answers_stay_apart():
    error = ShapeError("what", where="where", read="read", remedy="remedy")
    assert (error.what, error.where, error.read, error.remedy) == ("what", "where", "read", "remedy")
