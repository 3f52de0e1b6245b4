"""The sheet of a whole document: that of its assembly, with the values of the drive below where any is entered."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from core.drive.cautions import NO_MARGIN, STANDARDS
from core.errors import MasswrightError
from core.handover.drive_lines import REFLECTED, drive_lines, drive_notes
from core.handover.lines import LineMaker
from core.handover.sheet import failed_first, sheet_of_assembly
from core.quantity.units import Kind

if TYPE_CHECKING:
    from core.handover.lines import Entry, SheetChoice
    from core.handover.sheet import Sheet
    from core.machine import Machine
    from core.quantity import UnitSet

# The caution of every sheet says these already.
_SAID = frozenset({NO_MARGIN, STANDARDS})


def sheet_of_machine(machine: Machine, choice: SheetChoice, unit_set: UnitSet, key: str | None = None) -> Sheet:
    """Return the sheet of everything, or of all copies of the part or group with this key.

    The sheet of everything has the values of drive and balance behind the others, so that those stay in their rows,
    where something is entered about the drive; and the checks and cautions that go with them.

    Raises:
        EditRefused: no part or group has this key.
    """
    sheet = sheet_of_assembly(machine.assembly, choice, unit_set, key)
    if key is not None or not machine.has_drive:
        return sheet
    checks = failed_first([finding.check for finding in machine.findings()])
    try:
        entries, notes = drive_lines(machine, unit_set), drive_notes(machine, unit_set)
        cautions = tuple(one for one in machine.drive_answer.cautions if one not in _SAID)
    except MasswrightError as error:
        entries, notes, cautions = (_missing(unit_set, str(error)),), (), ()
    return replace(
        sheet, entries=(*sheet.entries, *entries), checks=checks, notes=(*sheet.notes, *notes),
        cautions=(*cautions, *sheet.cautions),
    )


def _missing(units: UnitSet, reason: str) -> Entry:
    """Return the line that says why there are no others."""
    return LineMaker(REFLECTED, units, "", reason).of(
        Kind.INERTIA, "J_mot", "Inertia reflected to the motor shaft", None
    )
