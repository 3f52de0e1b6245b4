"""Edits of a document's axes; each gives a new assembly."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from core.assembly.following import axis_of_part
from core.errors import EditRefused

if TYPE_CHECKING:
    from core.assembly.assembly import Assembly
    from core.assembly.axis import DriveAxis


def with_axis_added(assembly: Assembly, axis: DriveAxis) -> Assembly:
    """Return the assembly with one more axis; the drive axis stays what it is.

    Raises:
        EditRefused: it has no name, or that of another one, or is the axis of a part that has none.
    """
    return replace(assembly, axes=(*assembly.axes, _named(assembly, axis)))


def with_axis_changed(assembly: Assembly, name: str, axis: DriveAxis) -> Assembly:
    """Return the assembly with an axis in the place of the one of this name, which may get another name by it.

    Raises:
        EditRefused: as with_axis_added, or there is no axis of this name.
    """
    old = assembly.axis(name)
    new = _named(assembly, axis, but=old)
    axes = tuple(new if each is old else each for each in assembly.axes)
    return replace(assembly, axes=axes, drive=new.name if assembly.drive == name else assembly.drive)


def with_axis_renamed(assembly: Assembly, name: str, new: str) -> Assembly:
    """Return the assembly with an axis called otherwise; what is driven stays the same axis.

    Raises:
        EditRefused: as with_axis_changed.
    """
    return with_axis_changed(assembly, name, replace(assembly.axis(name), name=new))


def without_axis(assembly: Assembly, name: str) -> Assembly:
    """Return the assembly without an axis.

    Raises:
        EditRefused: it is the last one, or the drive axis.
    """
    gone = assembly.axis(name)
    if len(assembly.axes) == 1:
        raise EditRefused(
            "a document keeps one axis at least", where=name, remedy="Edit it, or add another one first"
        )
    if name == assembly.drive:
        raise EditRefused(
            "the drive axis cannot be deleted", where=name, remedy="Make another one the drive axis first"
        )
    return replace(assembly, axes=tuple(axis for axis in assembly.axes if axis is not gone))


def driven_about(assembly: Assembly, name: str) -> Assembly:
    """Return the assembly with the axis of this name as its drive axis.

    Raises:
        EditRefused: there is no axis of this name.
    """
    return replace(assembly, drive=assembly.axis(name).name)


def driven_about_part(assembly: Assembly, key: str) -> Assembly:
    """Return the assembly with a part's own axis as its drive axis: the one that it has already, or a new one.

    Args:
        assembly: it stays as it is.
        key: of the part, or of a cut in it.

    Raises:
        EditRefused: the key is that of a group, or the part has no axis of its own.
    """
    part = assembly.node_of_line(key)
    held = next((axis for axis in assembly.axes if axis.part == part.key), None)
    if held is not None:
        return driven_about(assembly, held.name)
    axis = axis_of_part(assembly, part.key, fresh_axis_name(assembly, f"axis of {part.name}"))
    return replace(assembly, axes=(*assembly.axes, axis), drive=axis.name)


def fresh_axis_name(assembly: Assembly, stem: str) -> str:
    """Return stem, or stem with the first number that makes it a name no axis has."""
    taken = {axis.name for axis in assembly.axes}
    name, number = stem, 2
    while name in taken:
        name, number = f"{stem} {number}", number + 1
    return name


def _named(assembly: Assembly, axis: DriveAxis, but: DriveAxis | None = None) -> DriveAxis:
    """Return the axis with its name without blanks around it, or refuse a name that is none, or another axis's."""
    name = axis.name.strip()
    if not name:
        raise EditRefused("an axis needs a name", where="axes", remedy="Type one, such as Spindle")
    if any(each.name == name for each in assembly.axes if each is not but):
        raise EditRefused("another axis has this name", where="axes", read=repr(name), remedy="Choose another one")
    return replace(axis, name=name)
