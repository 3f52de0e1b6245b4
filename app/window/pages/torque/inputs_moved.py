"""Fields of what hangs on the shafts of the train: moved masses, typed inertias, and lines of the ledger."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from app.window.pages.drive_section import shafts_of
from app.window.pages.torque.entry_section import Choices, EntrySection
from app.window.pages.torque.inputs_stages import BRAKING, BRAKING_EFFICIENCY
from core.assembly import walk
from core.drive import FIXED, LeadScrew, RackOrDrum, ShaftInertia, TurnsWith
from core.drive.turning import STANDS_STILL

if TYPE_CHECKING:
    from app.window.fields import Form
    from app.window.session import Session

WHOLE = "whole document"


class MovedSection(EntrySection):
    """A mass that a rack, a drum or a screw moves along a line."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field()
        if isinstance(self.item, LeadScrew):
            self.number("lead", "lead", "How far it moves for a full turn.")
        else:
            self.number("radius", "radius", "Of the pinion's pitch circle or the drum, with half the rope.")
        self.number("mass", "mass", "Of what moves along.")
        self.number("slope", "slope", "How steeply it climbs as its shaft turns forwards: 0 level, 90° straight up.")
        self.number("efficiency", "efficiency", "Of turning to moving, such as 0.96 or 96 %.")
        self.open_number("efficiency in braking", "braking_efficiency", BRAKING, BRAKING_EFFICIENCY)
        self.number("friction", "friction", "Of the guide, whatever the load.")
        self.number("friction coefficient", "friction_coefficient", "Of the guide, times the weight across the slope.")
        self.number("inertia", "inertia", "Of the pinion, drum or screw, on its shaft.")
        self.shaft_choice()


class InertiaSection(EntrySection):
    """Something of known inertia on a shaft."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field()
        self.number("inertia", "inertia", "About its shaft.")
        self.shaft_choice()


class TurnsWithSection(EntrySection):
    """Which shaft a line of the ledger turns with, about which axis."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        assembly = session.assembly
        lines: Choices = [(WHOLE, "")]
        lines += [("  " * depth + node.name, node.key) for node, depth in walk(assembly.members)]
        axes: Choices = [("the drive axis", ""), *((axis.name, axis.name) for axis in assembly.axes)]
        self.choice("line", "key", lines, "A part, or a group with all it holds; the innermost entry counts.")
        self.choose(
            "turns with", [*shafts_of(session), (STANDS_STILL, FIXED)],
            lambda: FIXED if self.item.shaft == FIXED else session.drive.train.first_name(self.item.shaft),
            lambda item, shaft: replace(item, shaft=shaft), "The shaft that it turns with.",
        )
        self.choice("about", "axis", axes, "The axis that it turns about.")


HUNG: dict[type, type[EntrySection]] = {
    RackOrDrum: MovedSection, LeadScrew: MovedSection, ShaftInertia: InertiaSection, TurnsWith: TurnsWithSection,
}
