"""The sheet: what is handed over to whoever chooses the drive, of an assembly, a line of it, or a mesh."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from core.checks import REMARKS
from core.handover.lines import (
    FOR_THE_DRIVE,
    MASS_AND_CENTRE,
    AxisLine,
    Entry,
    LineMaker,
    SheetChoice,
    Subject,
    joint_basis,
    lines_of,
    tie_note,
)
from core.quantity.units import Kind

if TYPE_CHECKING:
    from core.assembly import Assembly, Part
    from core.assembly.selection import Selection
    from core.checks import Check
    from core.handover.mesh_reading import MeshReading
    from core.quantity import UnitSet

MARGIN_CAUTION: Final = (
    "These values carry no margin and no allowance for what is not modelled. Rotating and lifted masses hurt "
    "people: the applicable machine-safety standards, local codes and a responsible engineer decide."
)
NOTHING_WEIGHS: Final = "no part in it has a mass; set a material, a density or a weighed mass"
_MOST_NAMES: Final = 8


@dataclass(frozen=True)
class Source:
    """Where values came from.

    Attributes:
        basis: computed, weighed, data sheet, estimated …, not set.
        text: of which parts, from what document.

    """

    basis: str
    text: str


@dataclass(frozen=True)
class Sheet:
    """The values to hand over, in order, with what a reader must know to trust them.

    Attributes:
        title: what the values are of.
        entries: the values.
        choice: which tensor is shown.
        basis: of the values together.
        sources: where they came from, a line for each basis and each data sheet.
        checks: on what is in it: those that failed first, then remarks, and of a mesh all others.
        notes: what was noticed, which makes no value wrong.
        cautions: what may make the values wrong or harmful.

    """

    title: str
    entries: tuple[Entry, ...]
    choice: SheetChoice
    basis: str
    sources: tuple[Source, ...]
    checks: tuple[Check, ...]
    notes: tuple[str, ...]
    cautions: tuple[str, ...]

    @property
    def sections(self) -> tuple[tuple[str, tuple[Entry, ...]], ...]:
        """The entries under their headings, in order."""
        found: dict[str, list[Entry]] = {}
        for entry in self.entries:
            found.setdefault(entry.section, []).append(entry)
        return tuple((name, tuple(entries)) for name, entries in found.items())

    @property
    def failed(self) -> tuple[Check, ...]:
        """The checks that failed."""
        return tuple(check for check in self.checks if not check.ok)


def sheet_of_assembly(assembly: Assembly, choice: SheetChoice, unit_set: UnitSet, key: str | None = None) -> Sheet:
    """Return the sheet of everything, or of all copies of the part or group with this key.

    All values refer to the document's frame; J is about the assembly's drive axis.

    Raises:
        EditRefused: no part or group has this key.

    """
    from core.assembly import telling_findings, walk
    from core.assembly.selection import selected

    selection = selected(assembly, key)
    subject = subject_of_assembly(assembly, key)
    keys = {""} if key is None else {node.key for node, _ in walk((assembly.node(key),))}
    checks = [finding.check for finding in telling_findings(assembly) if key is None or finding.key in keys]
    return Sheet(
        title=selection.name,
        entries=lines_of(subject, choice, unit_set),
        choice=choice,
        basis=subject.basis,
        sources=_sources(selection),
        checks=failed_first(checks),
        notes=(*_variant_note(assembly), *_remarks(checks), *tie_note(subject)),
        cautions=(*_left_out(selection), MARGIN_CAUTION),
    )


def subject_of_assembly(assembly: Assembly, key: str | None = None) -> Subject:
    """Return the body that the sheet of an assembly, or of one of its lines, is about."""
    from core.assembly.selection import selected

    selection, axis = selected(assembly, key), assembly.drive_axis
    total = assembly.total if key is None else selection.table.moments.total()
    known = len(selection.without_mass) < len(selection.parts) and float(total.mass) != 0
    line = AxisLine(f"the drive axis {axis.name}", axis.point, axis.direction)
    body = total if known else None
    return Subject(body, body, "document", line, joint_basis(selection.bases), "" if known else NOTHING_WEIGHS)


def sheet_of_mesh(reading: MeshReading, choice: SheetChoice, unit_set: UnitSet) -> Sheet:
    """Return the sheet of one mesh file: values in the file's frame, J about the reading's axis if any."""
    subject = reading.subject
    make = LineMaker(MASS_AND_CENTRE, unit_set, subject.basis, subject.reason)
    geometry = (
        make.of(Kind.VOLUME, "V", reading.volume_label, reading.volume),
        make.of(Kind.AREA, "A", "Surface area, as faceted", reading.area),
    )
    lines = lines_of(subject, choice, unit_set)
    above = {FOR_THE_DRIVE, MASS_AND_CENTRE}
    first = next((i for i, entry in enumerate(lines) if entry.section not in above), 0)
    return Sheet(
        title=reading.name,
        entries=(*lines[:first], *geometry, *lines[first:]),
        choice=choice,
        basis=subject.basis,
        sources=tuple(Source(basis, text) for basis, text in reading.sources),
        checks=failed_first(list(reading.checks)),
        notes=(*reading.notes, *tie_note(subject)),
        cautions=(*reading.cautions, MARGIN_CAUTION),
    )


def _remarks(checks: list[Check]) -> tuple[str, ...]:
    """Return what is right but has to be said: a cut that is not all inside, a mesh that was mended."""
    return tuple(check.text for check in checks if check.ok and check.name in REMARKS)


def failed_first(checks: list[Check]) -> tuple[Check, ...]:
    """Return the checks with the failed ones in front, otherwise in their order."""
    return tuple(sorted(checks, key=lambda check: check.ok))


def _variant_note(assembly: Assembly) -> tuple[str, ...]:
    """Return which of the variants the values are of; nothing where there are none."""
    if not assembly.variants:
        return ()
    if assembly.variant:
        return (f'Values of the variant "{assembly.variant}": lines that are not in it are left out.',)
    return ("All lines count, whichever variants they belong to.",)


def _left_out(selection: Selection) -> tuple[str, ...]:
    out = selection.without_mass
    if not out:
        return ()
    verb = "part is" if len(out) == 1 else "parts are"
    return (f"{len(out)} {verb} left out of every value because no mass is set: {_names(out)}.",)


def _sources(selection: Selection) -> tuple[Source, ...]:
    by_basis: dict[tuple[str, str], list[Part]] = {}
    for part in selection.parts:
        source = getattr(part.body, "source", "")
        by_basis.setdefault((selection.basis_of[part.key], source or part.driver.label), []).append(part)
    return tuple(
        Source(basis, f"{source}: {_names(tuple(parts))}" if source else _names(tuple(parts)))
        for (basis, source), parts in by_basis.items()
        if basis != "not set"
    )


def _names(parts: tuple[Part, ...]) -> str:
    named = ", ".join(part.name for part in parts[:_MOST_NAMES])
    more = len(parts) - _MOST_NAMES
    return f"{named} and {more} more" if more > 0 else named
