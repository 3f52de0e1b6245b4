"""Fields of the motor and of the stages of its train."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from app.window.fields import ChoiceField, Form
from app.window.pages.drive_section import DriveSection
from app.window.pages.torque.entry_section import EntrySection
from core.assembly import walk
from core.drive import Belt, Brake, Coupling, Gear

if TYPE_CHECKING:
    from app.window.session import Session
    from core.drive import DriveSettings

BRAKING = "as in driving"
EFFICIENCY = "Power out per power in while the motor drives, such as 0.96 or 96 %."
BRAKING_EFFICIENCY = "The same while the load drives the motor; 0 where the load cannot turn it, empty: as in driving."
RATIO = "Turns of the motor side for one turn of the load side; negative where the load side turns the other way."
SIDES: list[tuple[str, object]] = [("motor side", "motor side"), ("load side", "load side")]


class MotorSection(DriveSection):
    """What the motor's data sheet says, the limit of the user's own, and which line of the ledger is the rotor."""

    def __init__(self, session: Session, form: Form) -> None:
        super().__init__(session, form, "train.motor", "motor")
        self.number("rotor inertia", "inertia", "Of the rotor, from the motor's data sheet.")
        self.open_number(
            "limit load : motor", "ratio_limit", "not judged",
            "The limit of load inertia per motor inertia that you set yourself.",
        )
        self._lines: list[tuple[str, object]] = []
        self.rotor = ChoiceField("rotor's line", [])
        self.rotor.chosen.connect(self._choose_rotor)
        form.add("rotor's line", self.rotor, "The line of the ledger that is this rotor, so that it counts once.")

    def show(self) -> None:
        """Show the motor as it is now."""
        super().show()
        lines: list[tuple[str, object]] = [("none", "")]
        lines += [("  " * depth + node.name, node.key) for node, depth in walk(self.session.assembly.members)]
        if lines != self._lines:
            self._lines = lines
            self.rotor.clear()
            for words, key in lines:
                self.rotor.addItem(words, key)
        self.rotor.set_value(self.session.drive.train.motor.rotor)

    def _choose_rotor(self, key: object) -> None:
        def change(settings: DriveSettings) -> DriveSettings:
            motor = replace(settings.train.motor, rotor=str(key))
            return replace(settings, train=replace(settings.train, motor=motor))

        words = self.rotor.currentText().strip()
        if key != self.session.drive.train.motor.rotor:
            self.edit(f"Rotor of the motor: {words}", change)


class GearSection(EntrySection):
    """A gear pair or gearbox."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field("Also names the shaft on its load side.")
        self.number("ratio", "ratio", RATIO)
        _efficiencies(self)
        self.number("inertia", "inertia", "Of the stage itself, seen from the side chosen below.")
        self.choice("inertia quoted at", "quoted_at", SIDES, "The shaft that the data sheet quotes the inertia at.")


class BeltSection(EntrySection):
    """A belt or chain over two wheels."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field("Also names the shaft on its load side.")
        self.number("radius, motor side", "motor_radius", "Of the pitch circle of the wheel on the motor side.")
        self.number("radius, load side", "load_radius", "Of the pitch circle of the wheel on the load side.")
        _efficiencies(self)
        self.number("inertia, motor side", "motor_inertia", "Of the wheel on the motor side, on its own shaft.")
        self.number("inertia, load side", "load_inertia", "Of the wheel on the load side, on its own shaft.")
        self.number("mass", "mass", "Of the belt or chain itself.")


class CouplingSection(EntrySection):
    """A coupling."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field("Also names the shaft on its load side.")
        self.number("inertia", "inertia", "Of the whole coupling.")


class BrakeSection(EntrySection):
    """A brake on the shaft that runs through it."""

    def __init__(self, session: Session, form: Form, root: str, name: str) -> None:
        super().__init__(session, form, root, name)
        self.name_field("Also names the shaft on its load side.")
        self.number("braking torque", "torque", "At its own shaft, when it is applied.")
        self.number("inertia", "inertia", "Of what turns in it.")


STAGES: dict[type, type[EntrySection]] = {
    Gear: GearSection, Belt: BeltSection, Coupling: CouplingSection, Brake: BrakeSection,
}


def _efficiencies(section: DriveSection) -> None:
    section.number("efficiency", "efficiency", EFFICIENCY)
    section.open_number("efficiency in braking", "braking_efficiency", BRAKING, BRAKING_EFFICIENCY)
