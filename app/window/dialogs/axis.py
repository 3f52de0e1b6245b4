"""Defining an axis: by a point and a direction, through two points, or as the own axis of a part."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Literal, TypeAlias

from PySide6.QtWidgets import QCheckBox

from app.window.dialogs.form import FormDialog
from app.window.fields import ChoiceField, Form, TextField, TripleField, kept_text
from core.assembly import Assembly, DriveAxis, Part, walk
from core.assembly.axes import driven_about, with_axis_added, with_axis_changed
from core.assembly.fields import typed_for
from core.assembly.following import axis_of_part
from core.quantity import Kind

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

    from app.window.session import Session

Way: TypeAlias = Literal["direction", "points", "part"]
WAYS: list[tuple[str, object]] = [
    ("a point and a direction", "direction"), ("two points", "points"), ("the own axis of a part", "part"),
]
OF_PART = (
    "Of a round shape the axis it is built about, else the principal axis that stands out, or the one nearest to the "
    "drive axis. It follows the part, and stays where it was when the part is deleted."
)


class AxisDialog(FormDialog):
    """Edits one of the document's axes, or adds one."""

    def __init__(self, session: Session, axis: DriveAxis | None, parent: QWidget | None = None) -> None:
        super().__init__(f"Axis {axis.name}" if axis else "New axis", "Use this axis", 560, parent)
        self._session = session
        self._old = axis
        shown = axis or DriveAxis(name="")
        self.name = TextField("Name", "Spindle, Tilt axis …")
        self.name.set_value(shown.name)
        parts = _parts(session.assembly)
        self.way = ChoiceField("The axis is given by", WAYS if parts else WAYS[:2])
        self.point = TripleField(session, "through", Kind.LENGTH)
        self.direction = TripleField(session, "along", Kind.NUMBER)
        self.second = TripleField(session, "second point", Kind.LENGTH)
        self.part = ChoiceField("Part", [(words, key) for key, words in parts.items()])
        self.drives = QCheckBox("make it the drive axis")
        self.drives.setChecked(axis is None or axis.name == session.assembly.drive)
        self.drives.setEnabled(axis is None or axis.name != session.assembly.drive)
        self._show_axis(shown)
        self._form = Form()
        self._form.add("name", self.name)
        self._form.add("given by", self.way)
        self._form.add("through", self.point, "Any point of the axis, in the document's frame.")
        self._form.add("along", self.direction, "Its direction, of any length. J does not depend on the sign.")
        self._form.add("and through", self.second, "Another point of the axis; it points from the first to this one.")
        self._form.add("part", self.part, OF_PART)
        self._told = self._form.say(OF_PART)
        self._form.add_row(self.drives)
        self.stack(self._form)
        self.way.chosen.connect(lambda _way: self._show_fields())
        self._show_fields()

    def _show_axis(self, axis: DriveAxis) -> None:
        self.way.set_value("part" if axis.part else "direction" if axis.second is None else "points")
        self.point.set_values(axis.point, lambda at: typed_for(axis, f"axis.point.{at}"))
        self.direction.set_values(axis.direction, lambda at: typed_for(axis, f"axis.direction.{at}"))
        ahead = tuple(here + 0.1 * float(step) for here, step in zip(axis.point, axis.unit, strict=True))
        second = axis.second or (ahead[0], ahead[1], ahead[2])
        self.second.set_values(second, lambda at: typed_for(axis, f"axis.second.{at}"))
        selected = self._session.selected_part
        self.part.set_value(axis.part or (selected.key if selected else ""))

    def _show_fields(self) -> None:
        way = self.way.currentData()
        for field, wanted in (
            (self.point, way != "part"), (self.direction, way == "direction"), (self.second, way == "points"),
            (self.part, way == "part"), (self._told, way == "part"),
        ):
            self._form.show_row(field, wanted=wanted)
        self.refuse("")

    def take(self) -> None:
        """Make the axis, or say in place why it cannot be one."""
        name, way = self.name.text().strip(), self.way.currentData()
        self.refuse("" if name else "The axis needs a name.")
        read = self._read(way)
        if not name or read is None:
            return
        values, typed = read

        def change(before: Assembly) -> Assembly:
            after = self._put(before, self._axis(before, name, way, values, typed))
            return driven_about(after, name) if self.drives.isChecked() else after

        refusal = self._session.attempt(f"Axis {name}" if self._old else f"Add axis {name}", change)
        self.refuse(refusal)
        if not refusal:
            self.accept()

    def _read(self, way: Way) -> tuple[list[tuple[float, float, float]], tuple[tuple[str, str], ...]] | None:
        """Return the numbers that are shown, and what was typed for them; None after saying in place what is wrong."""
        fields = {"direction": [("point", self.point), ("direction", self.direction)],
                  "points": [("point", self.point), ("second", self.second)], "part": []}[way]
        values, typed = [], []
        for name, field in fields:
            read = field.read()
            if read is None:
                return None
            values.append(read)
            typed += [(f"axis.{name}.{at}", kept_text(text)) for at, text in enumerate(field.texts())]
        return values, tuple(sorted((path, text) for path, text in typed if text))

    def _axis(
        self, before: Assembly, name: str, way: Way, values: list[tuple[float, float, float]],
        typed: tuple[tuple[str, str], ...],
    ) -> DriveAxis:
        if way == "part":
            key = str(self.part.currentData())
            held = self._old is not None and self._old.part == key
            return replace(self._old, name=name) if held and self._old else axis_of_part(before, key, name)
        if way == "points":
            return DriveAxis(name, values[0], second=values[1], typed=typed)
        return DriveAxis(name, values[0], values[1], typed=typed)

    def _put(self, before: Assembly, axis: DriveAxis) -> Assembly:
        return with_axis_added(before, axis) if self._old is None else with_axis_changed(before, self._old.name, axis)


def _parts(assembly: Assembly) -> dict[str, str]:
    """Return the parts by their keys, in the order of the ledger, each behind the groups that hold it."""
    above: list[str] = []
    found = {}
    for node, depth in walk(assembly.members):
        above[depth:] = [node.name]
        if isinstance(node, Part):
            found[node.key] = " / ".join(above)
    return found
