"""The fields for what a part or group turns with, and about which axis."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.window.fields import ChoiceField, Form
from app.window.pages.drive_section import shafts_of
from app.window.pages.section import Section
from core.assembly import Cut
from core.drive import FIXED, TurnsWith
from core.drive.axis import entries_by_line
from core.drive.turning import STANDS_STILL, turning_of_line, turning_words, with_turning, without_turning

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly import Node
    from core.assembly.fields import AnyLine

# Chosen as a shaft: whatever the group that holds the line turns with.
AS_HELD = ""
TIP = "The shaft of the train that it turns with, as the Torque page has it; with a group all that it holds."


class TurningSection(Section):
    """The shaft that a line turns with and the axis that it turns about; at first those of what holds it."""

    def __init__(self, session: Session, form: Form, node: Node) -> None:
        super().__init__(session, form, node.key)
        form.heading("Turns")
        self.shaft = ChoiceField("Turns with", [])
        self.axis = ChoiceField("About", [])
        form.add("with", self.shaft, TIP)
        form.add("about", self.axis, "What it turns about; J about the drive axis in the ledger is not changed by it.")
        self.shaft.chosen.connect(lambda shaft: self._choose(str(shaft), str(self.axis.currentData() or "")))
        self.axis.chosen.connect(lambda axis: self._choose(str(self.shaft.currentData()), str(axis)))

    def show(self, node: AnyLine) -> None:
        """Show what the line turns with now, among what there is to choose from."""
        if isinstance(node, Cut):
            return
        assembly, drive = self.session.assembly, self.session.drive
        entry = turning_of_line(drive, node.key)
        held = (self._held_words(node.key), AS_HELD)
        _offer(self.shaft, [held, *shafts_of(self.session), (STANDS_STILL, FIXED)])
        others = [axis.name for axis in assembly.axes if axis.name != assembly.drive]
        _offer(self.axis, [(f"the drive axis, {assembly.drive}", ""), *((name, name) for name in others)])
        fixed = entry is not None and entry.shaft == FIXED
        first = AS_HELD if entry is None else FIXED if fixed else drive.train.first_name(entry.shaft)
        self.shaft.set_value(first)
        self.axis.set_value("" if entry is None or entry.axis == assembly.drive else entry.axis)
        self.form.show_row(self.axis, wanted=entry is not None and not fixed)

    def _held_words(self, key: str) -> str:
        """Return what the line turns with unless something else is chosen."""
        assembly, drive = self.session.assembly, self.session.drive
        above = assembly.groups_above(key)
        held = entries_by_line(assembly, drive.turning)[above[-1].key] if above else turning_of_line(drive, "")
        holder = f"the group {above[-1].name}" if above else "the whole document"
        return f"as {holder}: {turning_words(assembly, drive, held)}"

    def _choose(self, shaft: str, axis: str) -> None:
        assembly, key = self.session.assembly, self.key
        name = assembly.node(key).name
        if shaft == AS_HELD:
            taken = self.session.edit_drive(f"{name} turns as what holds it", lambda drive: without_turning(drive, key))
        else:
            entry = TurnsWith(key, shaft, "" if shaft == FIXED else axis)
            words = turning_words(assembly, self.session.drive, entry)
            said = f"{name} {words}" if shaft == FIXED else f"{name} turns with {words}"
            taken = self.session.edit_drive(said, lambda drive: with_turning(drive, entry))
        if not taken:
            self.show(assembly.node(key))


def _offer(field: ChoiceField, choices: list[tuple[str, object]]) -> None:
    """Let a field offer other choices, unless they are those that it offers."""
    if [(field.itemText(at), field.itemData(at)) for at in range(field.count())] != choices:
        field.clear()
        for words, value in choices:
            field.addItem(words, value)
