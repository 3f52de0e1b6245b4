"""The document as one value: the assembly, and what is entered about its drive."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from core.assembly import Assembly, Finding, findings_of, telling_findings
from core.assembly.names import values_of
from core.assembly.seats import seated
from core.checks import Check
from core.drive import LOAD, MOTOR, BalanceAnswer, DriveAnswer, DriveSettings, Duty, balance_answer, drive_answer
from core.drive.naming import drive_uses_of, with_names_read_again, with_names_written_anew
from core.drive.turning import turning_elsewhere
from core.errors import MasswrightError
from core.once import Once

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.drive.naming import DriveUse

_EMPTY = Assembly()
_NOTHING_ENTERED = DriveSettings()

# A duty of more moves and rests, its repeats written out, takes longer to work out than a window may stand still.
LONG_DUTY = 200
BEING_WORKED_OUT = "The duty is long: what it asks of the drive is being worked out."
_WAITING = Check("drive", ok=True, text=BEING_WORKED_OUT)


@dataclass(frozen=True)
class Machine:
    """Everything a document says.

    Attributes:
        assembly: the parts, and the axes they turn about.
        drive: what is entered about the drive; it names lines and axes of the assembly.
    """

    assembly: Assembly = _EMPTY
    drive: DriveSettings = _NOTHING_ENTERED

    @property
    def has_drive(self) -> bool:
        """Whether anything was entered about the drive."""
        return self.drive != _NOTHING_ENTERED

    @property
    def drive_answer(self) -> DriveAnswer:
        """Everything about torque.

        Raises:
            ValueRefused, EditRefused: as drive_answer.
        """
        if isinstance(self._outcome, MasswrightError):
            raise self._outcome.with_traceback(None)
        return self._outcome

    @Once
    def _outcome(self) -> DriveAnswer | MasswrightError:
        try:
            return drive_answer(self.assembly, self.drive)
        except MasswrightError as error:
            return error

    @Once
    def balance_answer(self) -> BalanceAnswer | None:
        """Everything about balance; None where nothing that has mass turns with the shaft.

        Raises:
            ValueRefused, EditRefused: as balance_answer.
        """
        return balance_answer(self.assembly, self.drive)

    @Once
    def turning_elsewhere(self) -> Mapping[str, str]:
        """What parts and groups turn with, in words by key; those that turn with the load are not in it."""
        return turning_elsewhere(self.assembly, self.drive)

    def findings(self) -> tuple[Finding, ...]:
        """Return what the checks on the assembly tell, and then those on the drive where anything is entered about it.

        Looked for anew each time: what is known of a mesh grows.
        """
        return (*telling_findings(self.assembly), *self._drive_findings())

    def all_findings(self) -> tuple[Finding, ...]:
        """Return every finding, those too that have nothing to tell, for who reads them by program."""
        return (*findings_of(self.assembly), *self._drive_findings())

    def _drive_findings(self) -> tuple[Finding, ...]:
        if not self.has_drive:
            return ()
        # A part that grew may be too much for a brake: that is found, and does not forbid the part.
        try:
            found = self.drive_answer.findings
        except MasswrightError as error:
            return (Finding("", "drive", Check("drive", ok=False, text=str(error))),)
        try:
            _ = self.balance_answer
        except MasswrightError as error:
            return (*found, Finding("", "drive", Check("balance", ok=False, text=str(error))))
        return found

    def findings_at_once(self) -> tuple[Finding, ...]:
        """Return the findings as far as they are known without waiting for a long duty."""
        short = self.at_once
        return self.findings() if short is self else (*short.findings(), Finding("", "drive", _WAITING))

    @property
    def at_once(self) -> Machine:
        """The machine if its answer about torque is at hand or takes no time; else without its duty, which is long."""
        known = "_outcome" in self.__dict__
        return self if known or self.drive.duty.count <= LONG_DUTY else self._without_duty

    def worked_out(self) -> DriveAnswer:
        """Work the answer about torque out and keep it; may be called from another thread than those that look at it.

        What is drawn of it is worked out, too, since that takes its time.

        Raises:
            ValueRefused, EditRefused: as drive_answer.
        """
        answer = self.drive_answer
        for shaft in (LOAD, MOTOR):
            answer.curves(shaft)
        return answer

    @Once
    def _without_duty(self) -> Machine:
        return replace(self, drive=replace(self.drive, duty=Duty()))

    def with_assembly(self, assembly: Assembly) -> Machine:
        """Return the machine with another assembly: seated lines follow, and what the drive says of lines and names.

        Raises:
            EditRefused: as `seated`.
            EditRefused, QuantityError: a named dimension that the drive uses is gone, or has a value it cannot take.
        """
        assembly = seated(assembly, self.assembly)
        if assembly is self.assembly:
            return self
        drive = _following_names(self.drive, self.assembly, assembly)
        drive = _following_axes(drive, self.assembly, assembly)
        return Machine(assembly, _without_gone_lines(drive, assembly))

    def with_drive(self, drive: DriveSettings) -> Machine:
        """Return the machine with other settings of its drive."""
        return self if drive is self.drive else replace(self, drive=drive)

    def with_both(self, assembly: Assembly, drive: DriveSettings) -> Machine:
        """Return the machine with another assembly and the settings that go with it."""
        return self.with_assembly(assembly).with_drive(drive)

    def drive_uses_of(self, name: str) -> tuple[DriveUse, ...]:
        """Return every number of the drive that a named dimension says."""
        return drive_uses_of(self.drive, values_of(self.assembly.names), {name})


def _following_names(drive: DriveSettings, before: Assembly, after: Assembly) -> DriveSettings:
    if before.names is after.names:
        return drive
    changes = _renamed([one.name for one in before.names], [one.name for one in after.names])
    drive = with_names_written_anew(drive, changes)
    old = {changes.get(name, name): value for name, value in values_of(before.names).items()}
    return with_names_read_again(drive, old, values_of(after.names))


def _following_axes(drive: DriveSettings, before: Assembly, after: Assembly) -> DriveSettings:
    """Return the settings about the axes as they are called now; about the drive axis what turned about a gone one."""
    if before.axes is after.axes:
        return drive
    there = [axis.name for axis in after.axes]
    changes = _renamed([axis.name for axis in before.axes], there)
    turning = tuple(
        entry if not entry.axis or (entry.axis in there and entry.axis not in changes)
        else replace(entry, axis=changes.get(entry.axis, ""))
        for entry in drive.turning
    )
    return drive if turning == drive.turning else replace(drive, turning=turning)


def _without_gone_lines(drive: DriveSettings, assembly: Assembly) -> DriveSettings:
    turning = tuple(entry for entry in drive.turning if not entry.key or entry.key in assembly)
    if len(turning) != len(drive.turning):
        drive = replace(drive, turning=turning)
    motor = drive.train.motor
    if motor.rotor and motor.rotor not in assembly:
        drive = replace(drive, train=replace(drive.train, motor=replace(motor, rotor="")))
    return drive


def _renamed(before: list[str], after: list[str]) -> dict[str, str]:
    """Return the new name by the old one where one entry of a list is called otherwise, at the place it had."""
    if len(before) != len(after):
        return {}
    changed = {old: new for old, new in zip(before, after, strict=True) if old != new}
    gone, come = set(before) - set(after), set(after) - set(before)
    return changed if len(changed) == 1 and gone == set(changed) and come == set(changed.values()) else {}
