"""The sheet of a whole document: that of its assembly, with the values of the drive below where any is entered."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

from core.drive import BalanceSettings
from core.drive.cautions import NO_MARGIN, STANDARDS, balance_cautions
from core.drive.turning import turning_elsewhere
from core.errors import MasswrightError
from core.handover.balance_lines import angle_note, balance_lines, rotor_basis
from core.handover.drive_lines import REFLECTED, drive_lines, drive_notes
from core.handover.lines import LineMaker
from core.handover.sheet import failed_first, sheet_of_assembly
from core.quantity.units import Kind

if TYPE_CHECKING:
    from core.handover.lines import Entry, SheetChoice
    from core.handover.sheet import Sheet
    from core.machine import Machine
    from core.quantity import UnitSet

BALANCE: Final = "Balance"
# So many parts are named in a note.
MOST_NAMED: Final = 5
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
    drive, balance = _drive(machine, unit_set), _balance(machine, unit_set)
    return replace(
        sheet,
        entries=(*sheet.entries, *drive.entries, *balance.entries),
        checks=failed_first([finding.check for finding in machine.findings()]),
        notes=(*sheet.notes, *_apart_note(machine), *drive.notes, *balance.notes),
        cautions=(*(one for one in (*drive.cautions, *balance.cautions) if one not in _SAID), *sheet.cautions),
    )


@dataclass(frozen=True)
class _Added:
    """What joins a sheet."""

    entries: tuple[Entry, ...] = ()
    notes: tuple[str, ...] = ()
    cautions: tuple[str, ...] = ()


def _drive(machine: Machine, units: UnitSet) -> _Added:
    """Return what there is about torque; one line that says why where it cannot be worked out."""
    try:
        return _Added(drive_lines(machine, units), drive_notes(machine, units), machine.drive_answer.cautions)
    except MasswrightError as error:
        make = LineMaker(REFLECTED, units, "", str(error))
        return _Added((make.of(Kind.INERTIA, "J_mot", "Inertia reflected to the motor shaft", None),))


def _apart_note(machine: Machine) -> tuple[str, ...]:
    """Return which parts count in the values of the whole although they do not turn with the load."""
    assembly = machine.assembly
    try:
        elsewhere = turning_elsewhere(assembly, machine.drive)
    except MasswrightError:
        return ()  # The lines of the drive say why.
    apart = [f"{part.name} ({elsewhere[part.key]})" for part in assembly.table.parts if part.key in elsewhere]
    if not apart:
        return ()
    left = len(apart) - MOST_NAMED
    told = ", ".join(apart[:MOST_NAMED]) + (f" and {left} more" if left > 0 else "")
    return (f"The values of the whole count these too, which do not turn with the load: {told}.",)


def _balance(machine: Machine, units: UnitSet) -> _Added:
    """Return what there is about balance; one line that says why where it cannot be worked out."""
    wanted = machine.drive.balance
    try:
        answer = machine.balance_answer
    except MasswrightError as error:
        make = LineMaker(BALANCE, units, "", str(error))
        return _Added((make.of(Kind.UNBALANCE, "U", "Static unbalance m·e", None),))
    if answer is None:
        return _Added()
    lines = balance_lines(answer, machine.drive, units, rotor_basis(machine.assembly, machine.drive))
    entries = tuple(replace(one, section=f"{BALANCE}: {one.section[0].lower()}{one.section[1:]}") for one in lines)
    notes = [angle_note(answer.axis)]
    if answer.keeps is not None and answer.grade is not None:
        verb = "keeps" if answer.keeps else "does not keep"
        notes.append(f"The rotor {verb} to G {wanted.grade:g}: it has G {answer.grade.worst:.3g}.")
    return _Added(entries, tuple(notes), balance_cautions() if wanted != BalanceSettings() else ())
