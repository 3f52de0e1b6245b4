"""masswright handover: a document's sheet, written to a file."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Final

from app.terminal import complain
from core.errors import FileRefused, ValueRefused
from core.handover import csv_of_sheet, tsv_of_sheet

if TYPE_CHECKING:
    from core.assembly import Finding
    from core.handover import SheetChoice
    from core.machine import Machine
    from core.quantity import UnitSet

# Spreadsheets take a CSV file for UTF-8 only if it begins with this mark.
_MARKED: Final = "utf-8-sig"
FORMS: Final = (".csv", ".tsv", ".json")


def hand_over(document: str, target: str, choice: SheetChoice, units: UnitSet, decimal_mark: str) -> int:
    """Write the sheet of a document to a file, in the form its ending names, and return the exit status.

    Raises:
        ValueRefused: there is no such form.
        FileRefused: the document cannot be read, or the file cannot be written; nothing of it is.

    """
    form = Path(target).suffix.lower()
    if form not in FORMS:
        raise ValueRefused(
            "this form of hand-over is not there",
            where=target,
            read=form or "no ending",
            remedy=f"Choose one of {', '.join(FORMS)}",
        )
    from core.assembly.overlap_findings import overlaps_looked_for
    from core.document import look_at_links, read_document
    from core.handover.machine_sheet import sheet_of_machine

    machine = read_document(document)
    look_at_links(machine.assembly)
    sheet, overlaps = sheet_of_machine(machine, choice, units), overlaps_looked_for(machine.assembly)
    if form == ".json":
        _write(target, _json_text(machine, document, overlaps), "utf-8")
    elif form == ".csv":
        _write(target, csv_of_sheet(sheet, decimal_mark), _MARKED)
    else:
        _write(target, tsv_of_sheet(sheet, decimal_mark), "utf-8")
    failed = [*sheet.failed, *(finding.check for finding in overlaps if not finding.check.ok)]
    for check in failed:
        complain(f"check failed: {check.name}: {check.text}")
    return 1 if failed else 0


def _json_text(machine: Machine, document: str, overlaps: tuple[Finding, ...]) -> str:
    from core.handover.answer import answer_of_machine, json_text

    return json_text(answer_of_machine(machine, document, overlaps)) + "\n"


def _write(target: str, text: str, encoding: str) -> None:
    """Write a file beside target and put it in its place, so that a fault leaves the old one as it was."""
    draft = Path(f"{target}.part")
    try:
        draft.write_text(text, encoding=encoding, newline="\n")
        draft.replace(target)
    except OSError as fault:
        draft.unlink(missing_ok=True)
        raise FileRefused(
            "the file cannot be written",
            where=target,
            read=fault.strerror or str(fault),
            remedy="Check the folder and whether another program holds the file",
        ) from fault
