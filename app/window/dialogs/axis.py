"""Defining a drive axis: a name, a point and a direction in the document's frame."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from app.window.dialogs.form import FormDialog
from app.window.fields import Form, TextField, TripleField
from core.assembly import Assembly, DriveAxis
from core.quantity import Kind

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

    from app.window.session import Session


class AxisDialog(FormDialog):
    """Edits one of the document's axes, or adds one; it becomes the drive axis."""

    def __init__(self, session: Session, axis: DriveAxis | None, parent: QWidget | None = None) -> None:
        super().__init__("Drive axis" if axis else "New axis", "Use this axis", 520, parent)
        self._session = session
        self._old = axis
        shown = axis or DriveAxis(name="")
        self.name = TextField("Name", "Spindle, Tilt axis …")
        self.name.set_value(shown.name)
        self.point = TripleField(session, "through", Kind.LENGTH)
        self.point.set_values(shown.point)
        self.direction = TripleField(session, "along", Kind.NUMBER)
        self.direction.set_values(shown.direction)
        form = Form()
        form.add("name", self.name)
        form.add("through", self.point, "Any point of the axis, in the document's frame.")
        form.add("along", self.direction, "Its direction, of any length. J does not depend on the sign.")
        self.stack(form)

    def take(self) -> None:
        """Make the axis the drive axis, or say in place why it cannot be one."""
        point, direction, name = self.point.read(), self.direction.read(), self.name.text().strip()
        self.refuse("" if name else "The axis needs a name.")
        if point is None or direction is None or not name:
            return
        words = f"Axis {name}" if self._old else f"Add axis {name}"
        refusal = self._session.attempt(words, lambda before: self._with_axis(before, name, point, direction))
        self.refuse(refusal)
        if not refusal:
            self.accept()

    def _with_axis(
        self, before: Assembly, name: str, point: tuple[float, float, float], direction: tuple[float, float, float]
    ) -> Assembly:
        axis = DriveAxis(name, point, direction)
        if self._old is None:
            return replace(before, axes=(*before.axes, axis), drive=name)
        axes = tuple(axis if each.name == self._old.name else each for each in before.axes)
        return replace(before, axes=axes, drive=name)
