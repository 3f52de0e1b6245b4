"""The part "Train": motor, stages in their order, what hangs on the shafts and which lines turn with which."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from app.window.pages.drive_section import shafts_of
from app.window.pages.torque.entries import Entry
from app.window.pages.torque.entries_panel import Addition, EntriesPanel
from app.window.pages.torque.inputs_moved import HUNG, WHOLE
from app.window.pages.torque.inputs_stages import STAGES, MotorSection
from core.assembly import walk
from core.drive import (
    FIXED,
    Belt,
    Brake,
    Coupling,
    Gear,
    LeadScrew,
    Motor,
    RackOrDrum,
    ShaftInertia,
    TurnsWith,
)
from core.drive.items import free_name
from core.drive.turning import STANDS_STILL
from core.quantity import Kind, compact

if TYPE_CHECKING:
    from app.window.fields import Form
    from app.window.pages.drive_section import DriveSection
    from app.window.session import Session

STAGE_LIST, MOVED_LIST, INERTIA_LIST, TURNING_LIST = "train.stages", "train.linear", "train.inertias", "turning"
DIRECT = "No stage yet: the motor turns the load directly. Add a gearbox, a belt, a coupling or a brake between them."


class TrainPanel(EntriesPanel):
    """Everything that the motor turns."""

    def __init__(self, session: Session) -> None:
        super().__init__(session, "Train", ("Train", "Is", "On shaft"))
        self.table.setColumnWidth(0, 130)
        self.table.setColumnWidth(2, 112)
        self.table.stretch(1)

    def additions(self) -> list[Addition]:
        """Return the stages, the moved masses, an inertia, and a line of the ledger."""
        return [
            Addition("Gearbox", STAGE_LIST, lambda: Gear(self._free(STAGE_LIST, "gearbox"), 1.0)),
            Addition("Belt or chain", STAGE_LIST, lambda: Belt(self._free(STAGE_LIST, "belt"), 0.05, 0.05)),
            Addition("Coupling", STAGE_LIST, lambda: Coupling(self._free(STAGE_LIST, "coupling"))),
            Addition("Brake", STAGE_LIST, lambda: Brake(self._free(STAGE_LIST, "brake"))),
            Addition(
                "Mass on a rack or drum", MOVED_LIST, lambda: RackOrDrum(self._free(MOVED_LIST, "carriage"), 0.05, 1.0)
            ),
            Addition("Mass on a screw", MOVED_LIST, lambda: LeadScrew(self._free(MOVED_LIST, "slide"), 0.01, 1.0)),
            Addition("Inertia on a shaft", INERTIA_LIST, lambda: ShaftInertia(self._free(INERTIA_LIST, "hub"), 0.0)),
            Addition("Line of the ledger that turns", TURNING_LIST, self._turning),
        ]

    def _free(self, holder: str, name: str) -> str:
        return free_name(self.session.drive, holder, name)

    def _turning(self) -> TurnsWith:
        """Return an entry for the selected line of the ledger, or for the first that has none."""
        taken = {entry.key for entry in self.session.drive.turning}
        lines = [key for key in self.session.selected if key in self.session.assembly]
        keys = [*lines, "", *(node.key for node in self.session.assembly.members)]
        return TurnsWith(next((key for key in keys if key not in taken), ""))

    def entries(self) -> list[Entry]:
        """Return motor, stages, masses, inertias and lines."""
        drive = self.session.drive
        train = drive.train
        rows = [Entry("train.motor", "", "motor", train.motor, ("motor", self._motor(train.motor), "motor"))]
        shafts = [words for words, _ in shafts_of(self.session)]
        for at, stage in enumerate(train.stages):
            lies = f"{shafts[at].removeprefix('behind ')} → {shafts[at + 1].removeprefix('behind ')}"
            rows.append(
                Entry(f"{STAGE_LIST}.{at}", STAGE_LIST, stage.name, stage, (stage.name, self._stage(stage), lies))
            )
        for at, moved in enumerate(train.linear):
            cells = (moved.name, self._moved(moved), train.words_of(moved.shaft))
            rows.append(Entry(f"{MOVED_LIST}.{at}", MOVED_LIST, moved.name, moved, cells))
        for at, inertia in enumerate(train.inertias):
            cells = (inertia.name, self._said(inertia.inertia, Kind.INERTIA), train.words_of(inertia.shaft))
            rows.append(Entry(f"{INERTIA_LIST}.{at}", INERTIA_LIST, inertia.name, inertia, cells))
        return [*rows, *(self._turns(at, entry) for at, entry in enumerate(drive.turning))]

    def sections(self, form: Form, entry: Entry) -> list[DriveSection]:
        """Return the fields of the motor, a stage, or what hangs on a shaft."""
        if isinstance(entry.item, Motor):
            return [MotorSection(self.session, form)]
        section = {**STAGES, **HUNG}[type(entry.item)]
        return [section(self.session, form, entry.root, entry.name)]

    def fields_depend_on(self, entry: Entry) -> object:
        """Return the shafts and, of a line, what else there is to choose from."""
        shafts = tuple(words for words, _ in shafts_of(self.session))
        if not isinstance(entry.item, TurnsWith):
            return shafts
        assembly = self.session.assembly
        lines = tuple((node.key, node.name, depth) for node, depth in walk(assembly.members))
        return shafts, lines, tuple(axis.name for axis in assembly.axes)

    def advice(self) -> str:
        """Return that there is no stage yet, where there is none."""
        return "" if self.session.drive.train.stages else DIRECT

    def words_of(self, item: object) -> str:
        """Return an entry's name, of a line that of the line."""
        return self._line(item) if isinstance(item, TurnsWith) else super().words_of(item)

    # What the rows say

    def _said(self, value: float, kind: Kind) -> str:
        unit = self.session.units[kind]
        return f"{self._number(unit.from_si(value))} {unit.symbol}"

    def _number(self, value: float) -> str:
        return compact(value, 5, decimal_mark=self.session.decimal_mark)

    def _motor(self, motor: Motor) -> str:
        return self._said(motor.inertia, Kind.INERTIA) if motor.inertia else "inertia not given"

    def _stage(self, stage: object) -> str:
        if isinstance(stage, Gear):
            return f"gear {self._number(stage.ratio)} : 1, {self._percent(stage.efficiency)}"
        if isinstance(stage, Belt):
            return f"belt {self._number(stage.ratio)} : 1, {self._percent(stage.efficiency)}"
        if isinstance(stage, Brake):
            return f"brake {self._said(stage.torque, Kind.TORQUE)}"
        return "coupling"

    def _percent(self, share: float) -> str:
        return f"{self._number(100 * share)} %"

    def _moved(self, moved: RackOrDrum | LeadScrew) -> str:
        mass = self._said(moved.mass, Kind.MASS)
        if isinstance(moved, LeadScrew):
            return f"{mass}, lead {self._said(moved.travel * 2 * math.pi, Kind.LENGTH)}"
        return f"{mass} at radius {self._said(moved.radius, Kind.LENGTH)}"

    def _turns(self, at: int, entry: TurnsWith) -> Entry:
        name = self._line(entry)
        about = entry.axis or self.session.assembly.drive
        fixed = entry.shaft == FIXED
        cells = (
            name, STANDS_STILL if fixed else f"turns about {about}",
            "–" if fixed else self.session.drive.train.words_of(entry.shaft),
        )
        return Entry(f"{TURNING_LIST}.{at}", TURNING_LIST, name, entry, cells)

    def _line(self, entry: TurnsWith) -> str:
        return self.session.assembly.node(entry.key).name if entry.key else WHOLE
