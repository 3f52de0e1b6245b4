"""The part "Loads": gravity, applied forces and torques, friction."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from app.window.pages.drive_section import shafts_of
from app.window.pages.torque.entries import Entry
from app.window.pages.torque.entries_panel import Addition, EntriesPanel
from app.window.pages.torque.inputs_acting import ACTING, GravitySection
from core.drive import AppliedForce, AppliedTorque, DriveSettings, Friction
from core.drive.gravity import direction_of_gravity, size_of_gravity
from core.drive.items import free_name
from core.quantity import Kind, compact

if TYPE_CHECKING:
    from app.window.fields import Form
    from app.window.pages.drive_section import DriveSection
    from app.window.session import Session

FORCES, TORQUES, FRICTIONS = "forces", "torques", "frictions"
NOTHING = "Only weight acts so far. Add forces of the process, torques, or friction where there are any."


class LoadsPanel(EntriesPanel):
    """What asks torque of the drive besides inertia."""

    def __init__(self, session: Session) -> None:
        super().__init__(session, "Loads", ("Load", "Is", "On shaft"))
        self.table.setColumnWidth(0, 100)
        self.table.setColumnWidth(2, 76)
        self.table.stretch(1)

    def additions(self) -> list[Addition]:
        """Return a force, a torque and a friction."""
        force, point = (0.0, 0.0, -100.0), (0.0, 0.0, 0.0)
        return [
            Addition("Force", FORCES, lambda: AppliedForce(self._free(FORCES, "force"), force, point)),
            Addition("Torque", TORQUES, lambda: AppliedTorque(self._free(TORQUES, "torque"), 1.0)),
            Addition("Friction", FRICTIONS, lambda: Friction(self._free(FRICTIONS, "bearing"))),
        ]

    def _free(self, holder: str, name: str) -> str:
        return free_name(self.session.drive, holder, name)

    def entries(self) -> list[Entry]:
        """Return gravity, forces, torques and frictions."""
        drive = self.session.drive
        rows = [Entry("", "", "gravity", drive, ("gravity", self._gravity(drive), "all"))]
        lists: list[tuple[str, tuple[AppliedForce | AppliedTorque | Friction, ...]]] = [
            (FORCES, drive.forces), (TORQUES, drive.torques), (FRICTIONS, drive.frictions),
        ]
        for holder, items in lists:
            for at, item in enumerate(items):
                shaft = "load" if isinstance(item, AppliedForce) else self.session.drive.train.words_of(item.shaft)
                rows.append(Entry(f"{holder}.{at}", holder, item.name, item, (item.name, self._is(item), shaft)))
        return rows

    def sections(self, form: Form, entry: Entry) -> list[DriveSection]:
        """Return the fields of gravity or a load."""
        if isinstance(entry.item, DriveSettings):
            return [GravitySection(self.session, form)]
        return [ACTING[type(entry.item)](self.session, form, entry.root, entry.name)]

    def fields_depend_on(self, entry: Entry) -> object:
        """Return the shafts, and whether it acts over a range of angles."""
        shafts = tuple(words for words, _ in shafts_of(self.session))
        return shafts, getattr(entry.item, "start", None) is None

    def advice(self) -> str:
        """Return that only weight acts, where that is so."""
        drive = self.session.drive
        return "" if drive.forces or drive.torques or drive.frictions else NOTHING

    # What the rows say

    def _said(self, value: float, kind: Kind) -> str:
        unit = self.session.units[kind]
        return f"{compact(unit.from_si(value), 6, decimal_mark=self.session.decimal_mark)} {unit.symbol}"

    def _gravity(self, drive: DriveSettings) -> str:
        way = direction_of_gravity(drive)
        return f"{self._said(size_of_gravity(drive), Kind.ACCELERATION)}{f', down is {way}' if way else ''}"

    def _is(self, item: AppliedForce | AppliedTorque | Friction) -> str:
        if isinstance(item, AppliedForce):
            return f"force {self._said(math.hypot(*item.force), Kind.FORCE)}{self._range(item)}"
        if isinstance(item, AppliedTorque):
            against = " against the motion" if item.sense == "against motion" else ""
            return f"torque {self._said(item.torque, Kind.TORQUE)}{against}{self._range(item)}"
        said = [
            self._said(item.constant, Kind.TORQUE) if item.constant else "",
            self._said(item.viscous, Kind.VISCOUS_FRICTION) if item.viscous else "",
            f"μ {compact(item.coefficient, 5, decimal_mark=self.session.decimal_mark)}" if item.coefficient else "",
        ]
        return f"friction {', '.join(filter(None, said)) or 'of nothing yet'}"

    def _range(self, item: AppliedForce | AppliedTorque) -> str:
        if item.start is None or item.end is None:
            return ""
        return f", {self._said(item.start, Kind.ANGLE)} to {self._said(item.end, Kind.ANGLE)}"
