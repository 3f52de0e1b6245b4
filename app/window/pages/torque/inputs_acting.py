"""Fields of what acts on the drive: gravity, applied forces and torques, friction."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import TYPE_CHECKING

from app.window.fields import ChoiceField, Form, QuantityField
from app.window.pages.drive_section import DriveSection
from app.window.pages.torque.entry_section import Choices, EntrySection
from core.drive import AppliedForce, AppliedTorque, Friction
from core.drive.gravity import DOWN, direction_of_gravity, size_of_gravity, with_gravity_along, with_gravity_size
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session

ALWAYS, BETWEEN = "always", "between two angles"
OTHER = "another way"
FOLLOWS: Choices = [("stays as it is", "space"), ("turns with the part", "part")]
SENSES: Choices = [("one way, whatever the motion", "fixed"), ("against the motion", "against motion")]
OWN_WEIGHT = "own weight"
RANGE = "The angles of the load between which it acts, every turn again."


class GravitySection(DriveSection):
    """How strong gravity is, and which way things fall."""

    def __init__(self, session: Session, form: Form) -> None:
        super().__init__(session, form, "", "")
        self.size = QuantityField(session, "gravity", Kind.ACCELERATION)
        form.add("gravity", self.size, "How strong it is; 0 leaves all weight out.")
        self.size.entered.connect(self._resize)
        self.down = ChoiceField("down is", [*((words, words) for words in DOWN), (OTHER, "")])
        form.add("down is", self.down, "Which way of the document things fall.")
        self.down.chosen.connect(self._turn)
        self.triple("as a vector", "gravity", "Along the axes of the document.")

    def show(self) -> None:
        """Show gravity as it is now."""
        super().show()
        self.size.set_value(size_of_gravity(self.session.drive))
        self.down.set_value(direction_of_gravity(self.session.drive))

    def _resize(self, size: float, _text: str) -> None:
        words = f"Gravity: {self.size.line.text().strip()}"
        refusal = self.attempt(words, lambda settings: with_gravity_size(settings, size))
        if refusal:
            self.size.turn_down(refusal)

    def _turn(self, words: object) -> None:
        if words and words != direction_of_gravity(self.session.drive):
            self.edit(f"Down is {words}", lambda settings: with_gravity_along(settings, str(words)))
        self.show()


class RangedSection(EntrySection):
    """What acts always, or between two angles of every turn."""

    def range_fields(self) -> None:
        """Add the choice, and the two angles where it is made."""
        self.choose(
            "acts", [(ALWAYS, ALWAYS), (BETWEEN, BETWEEN)], self._acts, _acting, RANGE
        )
        if self.item.start is not None:
            self.number("from", "start", RANGE)
            self.number("to", "end", RANGE)

    def _acts(self) -> str:
        return ALWAYS if self.item.start is None else BETWEEN


class ForceSection(RangedSection):
    """An applied force."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field()
        self.triple("force", "force", "Along the axes of the document, as the document stands.")
        self.triple("acts at", "point", "Where it acts as the document stands, from the document's origin.")
        self.choice("its direction", "direction_in", FOLLOWS, "Whether its direction turns with the part.")
        self.choice("its point", "point_in", FOLLOWS, "Whether the point turns with the part, or stays as a tool does.")
        self.range_fields()


class TorqueSection(RangedSection):
    """An applied torque."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field()
        self.number("torque", "torque", "At its shaft; a positive one asks a positive torque of the drive.")
        self.choice("sense", "sense", SENSES, "One way, as a spring; or against the motion, as friction.")
        self.shaft_choice()
        self.range_fields()


class FrictionSection(EntrySection):
    """Friction of a shaft: constant + coefficient · radius · load, and viscous · ω."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field()
        self.number("constant", "constant", "Whatever the speed and the load.")
        self.number("viscous", "viscous", "Times the speed of its shaft.")
        self.number("coefficient", "coefficient", "Of the bearing; times radius and load.")
        self.number("radius", "radius", "At which the bearing rubs.")
        self.open_number("load", "load", OWN_WEIGHT, "On the bearing; empty: the weight of what turns with it.")
        self.shaft_choice()


ACTING: dict[type, type[EntrySection]] = {
    AppliedForce: ForceSection, AppliedTorque: TorqueSection, Friction: FrictionSection,
}


def _acting(item: AppliedForce | AppliedTorque, how: str) -> AppliedForce | AppliedTorque:
    if how == ALWAYS:
        return replace(item, start=None, end=None)
    return item if item.start is not None else replace(item, start=0.0, end=math.pi / 2)
