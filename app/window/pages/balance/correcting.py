"""The corrections made with one click: masses added as parts, or holes drilled into a part."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QPushButton

from app.window.fields import ChoiceField, Form, QuantityField
from app.window.pages.balance.inputs import BalanceSection, in_a_row
from app.window.tasks import Task
from core.drive.correcting import Drill, drillable, with_holes_drilled, with_masses_added
from core.errors import MasswrightError
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly import Assembly
    from core.drive import BalanceAnswer
    from core.drive.correcting import Form as MassForm
    from core.drive.correcting import Way
    from core.machine import Machine

FORMS: list[tuple[str, object]] = [("steel discs", "disc"), ("point masses", "point mass")]
WAYS: list[tuple[str, object]] = [
    ("towards the axis", "inwards"), ("along the axis, forwards", "forwards"),
    ("along the axis, backwards", "backwards"),
]
USUAL_DIAMETER = 0.01
TURN = 2 * math.pi
NONE_TO_DRILL = "No part of the rotor can be drilled: each is weighed, known by its data, or there several times."
CHANGED = "The document changed while the depths were worked out; nothing was drilled. Drill again."


class CorrectSection(BalanceSection):
    """What the corrections are made of, and the buttons that make them."""

    def __init__(self, session: Session, form: Form) -> None:
        super().__init__(session, form)
        form.heading("Make the corrections")
        self.says = form.say("")
        self.as_ = ChoiceField("What the masses are", FORMS)
        form.add("masses are", self.as_, "Discs lie across the axis and are half as thick as wide.")
        self.part = ChoiceField("Part to drill into", [])
        self.part.setSizeAdjustPolicy(ChoiceField.SizeAdjustPolicy.AdjustToContents)
        form.add("drill into", self.part, "Parts of the rotor that are there once and weigh by their volume.")
        self.diameter = QuantityField(session, "diameter of the holes", Kind.LENGTH)
        self.diameter.set_value(USUAL_DIAMETER)
        form.add("hole diameter", self.diameter, "The depth follows from it.")
        self.way = ChoiceField("Which way the holes go", WAYS)
        form.add("drilled", self.way, "A hole begins at the station and radius of its plane.")
        self.add = QPushButton("Add the masses")
        self.drill = QPushButton("Drill the holes")
        self.stop = QPushButton("Stop")
        self._refused = self.refusal()
        form.add_row(in_a_row(self.add, self.drill, self.stop))
        self.add.clicked.connect(self.add_masses)
        self.drill.clicked.connect(self.drill_holes)
        self.stop.clicked.connect(self._leave)
        self._task: Task[Assembly] | None = None

    def show(self) -> None:
        """Show what goes with the way of correcting."""
        super().show()
        removing, planes = self.wanted.by == "removing", self.wanted.planes
        self.form.setVisible(bool(planes))
        self.form.show_row(self.as_, wanted=not removing)
        for field in (self.part, self.diameter, self.way):
            self.form.show_row(field, wanted=removing)
        self.diameter.set_value(self.diameter.value)
        self.add.setVisible(not removing)
        self._show_drilling()
        if removing and planes:
            self._fill_parts()

    def show_answer(self, answer: BalanceAnswer | None) -> None:
        """Say what is to be added or removed."""
        if answer is None:
            self.says.setText("")
            return
        units, mark = self.session.units, self.session.decimal_mark
        verb = "Add" if self.wanted.by == "adding" else "Remove"
        each = [
            f"{units.text(abs(one.mass), Kind.MASS, 4, decimal_mark=mark)} at "
            f"{units.text(one.angle % TURN, Kind.ANGLE, 4, decimal_mark=mark)} in plane {at}"
            for at, one in enumerate(answer.made, 1) if one.mass
        ]
        self.says.setText(f"{verb} {' and '.join(each)}." if each else "There is nothing to correct.")

    def add_masses(self) -> None:
        """Add the masses as parts, in one edit."""
        form: MassForm = "point mass" if self.as_.currentData() == "point mass" else "disc"

        def change(machine: Machine) -> Machine:
            return machine.with_both(*with_masses_added(machine.assembly, machine.drive, form))

        self._tell(self.session.attempt_machine("Add balance masses", change), "Added the balance masses")

    def drill_holes(self) -> None:
        """Work out the depths of the holes, off the window's thread, and drill them in one edit."""
        key, read = self.part.currentData(), self.diameter.read()
        if read is None or self._task is not None:
            return
        if key is None:
            self._tell(NONE_TO_DRILL)
            return
        try:
            drill = Drill(str(key), read.value, self._way)
        except MasswrightError as error:
            self.diameter.refuse(str(error))
            return
        machine = self.session.machine
        self._tell("")
        self._task = Task(
            self.form, lambda progress: with_holes_drilled(machine.assembly, machine.drive, drill, progress),
            lambda after: self._drilled(machine, after), self._failed,
        )
        self._show_drilling()

    @property
    def _way(self) -> Way:
        chosen = self.way.currentData()
        return "forwards" if chosen == "forwards" else "backwards" if chosen == "backwards" else "inwards"

    def _drilled(self, machine: Machine, after: Assembly) -> None:
        self._end()
        if self.session.machine is not machine:
            self._tell(CHANGED)
            return
        self._tell(self.session.attempt("Drill balance holes", lambda _before: after), "Drilled the balance holes")

    def _failed(self, sentence: str) -> None:
        self._end()
        self._tell(sentence)

    def _leave(self) -> None:
        if self._task is not None:
            self._task.leave()
        self._end()

    def _end(self) -> None:
        self._task = None
        self._show_drilling()

    def _show_drilling(self) -> None:
        removing, busy = self.wanted.by == "removing", self._task is not None
        self.drill.setVisible(removing)
        self.drill.setEnabled(not busy)
        self.drill.setText("Working out the depths…" if busy else "Drill the holes")
        self.stop.setVisible(busy)

    def _fill_parts(self) -> None:
        assembly, before = self.session.assembly, self.part.currentData()
        keys = drillable(assembly, self.session.drive)
        self.part.clear()
        for key in keys:
            self.part.addItem(assembly.node(key).name, key)
        if before in keys:
            self.part.set_value(before)

    def _tell(self, refused: str, done: str = "") -> None:
        self._refused.setText(refused)
        self._refused.setVisible(bool(refused))
        if done and not refused:
            left = self.session.machine.balance_answer
            amount = 0.0 if left is None else left.found.amount
            words = self.session.units.text(amount, Kind.UNBALANCE, 3, decimal_mark=self.session.decimal_mark)
            self.session.said.emit(f"{done}; static unbalance now {words}")
