"""The fields for where a line stands: position and turn, in the frame that holds it or in the document's."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from functools import partial
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QWidget

from app.window.commands import lay_on_drive_axis
from app.window.fields import ChoiceField, Form, QuantityField, TripleField
from app.window.pages.section import Section
from core.assembly import Cut
from core.assembly.fields import typed_for, with_typed, with_value
from core.assembly.placing import pose_in_document, posed, posed_in_document
from core.errors import MasswrightError
from core.placement import Placement, Pose, Triple, axis_and_angle_of, turn_about
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.arrays import FloatArray
    from core.assembly import Assembly
    from core.assembly.fields import AnyLine

WAYS: list[tuple[str, object]] = [("about x, y and z", "turns"), ("about one axis", "axis")]
# An axis and angle as typed stand for the turn that makes the same matrix, but for round-off.
_SAME_TURN = 1e-12


@dataclass(frozen=True)
class _OneTurn:
    """A turn about one axis, as it was typed: a pose keeps only the three turns that it comes to."""

    axis: Triple = (0.0, 0.0, 1.0)
    angle: float = 0.0
    typed: dict[str, str] = field(default_factory=dict)

    @classmethod
    def of(cls, pose: Pose) -> _OneTurn:
        axis, angle = axis_and_angle_of(pose.placement.turn)
        x, y, z = axis.tolist()
        return cls((x, y, z), angle)

    def makes(self, pose: Pose) -> bool:
        turn = turn_about(self.axis, self.angle)
        return bool(np.abs(turn - pose.placement.turn).max() <= _SAME_TURN)


class PlaceSection(Section):
    """Position and turn of a line."""

    def __init__(self, session: Session, form: Form, node: AnyLine) -> None:
        super().__init__(session, form, node.key)
        self._one_turn = _OneTurn()
        form.heading("Placement")
        self._seated = form.say("Its seat says where it stands. To place it by numbers, remove the seat below.")
        holder = "its part" if isinstance(node, Cut) else "its group"
        self._frame = ChoiceField("Frame of the placement", [(holder, "holder"), ("the document", "document")])
        form.add("in the frame of", self._frame, "Of copies of a group, the first one is meant.")
        self._frame.chosen.connect(lambda chosen: self._choose(numbers_in=chosen))
        self._position = TripleField(session, "position", Kind.LENGTH)
        form.add("position", self._position, "Of the line's own origin.")
        self._way = ChoiceField("How the turn is given", WAYS)
        form.add("turned", self._way, "Three turns one after the other, or one turn about any axis; both say the same.")
        self._way.chosen.connect(lambda chosen: self._choose(turn_given=chosen))
        self._turns = TripleField(session, "turn about", Kind.ANGLE, UNITS["°"])
        form.add("turn about", self._turns, "About the fixed axes of the frame: x first, then y, then z.")
        self._axis = TripleField(session, "axis", Kind.NUMBER)
        form.add("axis along", self._axis, "The direction of the axis in the frame, of any length.")
        self._angle = QuantityField(session, "angle about the axis", Kind.ANGLE, UNITS["°"])
        form.add("angle", self._angle, "Positive as a right-hand screw goes along the axis.")
        self._lay_button()
        self._connect()

    def _lay_button(self) -> None:
        self._lay = QPushButton("Lay its axis on the drive axis")
        self._lay.clicked.connect(lambda: lay_on_drive_axis(self.session, (self.key,)))
        row = QWidget()
        layout = QHBoxLayout(row)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self._lay)
        layout.addStretch(1)
        self.form.add("", row)

    def _connect(self) -> None:
        for at, letter in enumerate("xyz"):
            self._take_pose(self._position.fields[at], f"Position {letter}", f"position.{at}", at)
            self._take_pose(self._turns.fields[at], f"Turn about {letter}", f"turn.{at}", at)
            self._take_turn(self._axis.fields[at], f"Axis {letter}", f"axis.{at}", partial(_with_axis, at=at))
        self._take_turn(self._angle, "Angle", "angle", lambda turn, value: replace(turn, angle=value))

    def show(self, node: AnyLine) -> None:
        """Show position and turn."""
        self.form.show_row(self._seated, wanted=not isinstance(node, Cut) and node.seat is not None)
        held = self._is_held
        self.form.show_row(self._frame, wanted=held)
        self._frame.set_value(self.session.manner.numbers_in)
        pose = self._pose(self.session.assembly)

        def typed(path: str) -> str:
            return "" if self._in_document else typed_for(node, path)

        self._position.set_values(pose.position, lambda at: typed(f"position.{at}"))
        way = self.session.manner.turn_given
        self._way.set_value(way)
        for row in (self._turns, self._axis, self._angle):
            self.form.show_row(row, wanted=(row is self._turns) == (way == "turns"))
        self._turns.set_values(pose.turns, lambda at: typed(f"turn.{at}"))
        if not self._one_turn.makes(pose):
            self._one_turn = _OneTurn.of(pose)
        turn = self._one_turn
        self._axis.set_values(turn.axis, lambda at: turn.typed.get(f"axis.{at}", ""))
        self._angle.set_value(turn.angle, turn.typed.get("angle", ""))
        drive = self.session.assembly.drive
        self._lay.setToolTip(
            f"Moves it no further than it takes to lay its own axis on {drive}: turned the short way, shifted square\n"
            "to the axis. Its axis is that of a round shape; else a principal axis through its centre of mass."
        )

    @property
    def _is_held(self) -> bool:
        """Whether the line stands in a frame other than the document's."""
        assembly = self.session.assembly
        return assembly.is_cut(self.key) or bool(assembly.groups_above(self.key))

    @property
    def _in_document(self) -> bool:
        return self._is_held and self.session.manner.numbers_in == "document"

    def _pose(self, assembly: Assembly) -> Pose:
        return pose_in_document(assembly, self.key) if self._in_document else assembly.line(self.key).pose

    def _posed(self, assembly: Assembly, pose: Pose) -> Assembly:
        put = posed_in_document if self._in_document else posed
        return put(assembly, self.key, pose)

    def _choose(self, **chosen: object) -> None:
        self.session.set_manner(replace(self.session.manner, **chosen))  # type: ignore[arg-type]  # one of its fields

    def _take_pose(self, entry: QuantityField, words: str, path: str, at: int) -> None:
        """Let a field edit one number of the pose; the text as typed is kept where the number itself is."""

        def change(assembly: Assembly, value: float, text: str) -> Assembly:
            if not self._in_document:
                line = assembly.line(self.key)
                return assembly.with_line(with_typed(with_value(line, path, value), path, text))
            pose = self._pose(assembly)
            if path.startswith("position"):
                return self._posed(assembly, replace(pose, position=_with(pose.position, at, value)))
            return self._posed(assembly, replace(pose, turns=_with(pose.turns, at, value)))

        def entered(value: float, text: str) -> None:
            refusal = self.session.attempt(self._edit_name(words, entry), lambda before: change(before, value, text))
            if refusal:
                entry.turn_down(refusal)

        entry.entered.connect(entered)

    def _take_turn(
        self, entry: QuantityField, words: str, path: str, changed: Callable[[_OneTurn, float], _OneTurn]
    ) -> None:
        """Let a field edit the turn about one axis."""

        def entered(value: float, text: str) -> None:
            before = self._one_turn
            after = replace(changed(before, value), typed={**before.typed, path: text})
            try:
                turn = turn_about(after.axis, after.angle)
            except MasswrightError as error:
                entry.turn_down(str(error))
                return
            # Kept before the edit, which shows the line again; while nothing is turned, an axis is only kept.
            self._one_turn = after
            if before.angle or after.angle:
                refusal = self.session.attempt(
                    self._edit_name(words, entry), lambda assembly: self._turned(assembly, turn)
                )
                if refusal:
                    self._one_turn = before
                    entry.turn_down(refusal)

        entry.entered.connect(entered)

    def _turned(self, assembly: Assembly, turn: FloatArray) -> Assembly:
        pose = self._pose(assembly)
        return self._posed(assembly, replace(Pose.of(Placement(turn, np.zeros(3))), position=pose.position))

    def _edit_name(self, words: str, entry: QuantityField) -> str:
        where = " in the document" if self._in_document else ""
        return f"{words} of {self.session.assembly.line(self.key).name}{where}: {entry.line.text().strip()}"


def _with(triple: Triple, at: int, value: float) -> Triple:
    x, y, z = (value if each == at else old for each, old in enumerate(triple))
    return x, y, z


def _with_axis(turn: _OneTurn, value: float, at: int) -> _OneTurn:
    return replace(turn, axis=_with(turn.axis, at, value))
