"""masswright weigh: mass properties of meshes and documents, as text, JSON, TSV or CSV."""

from __future__ import annotations

import os
import signal
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final, Literal

from app.progress_bar import progress_shown
from app.terminal import complain, show
from core.errors import FileRefused, MasswrightError, ValueRefused
from core.handover import csv_of_sheet, sheet_of_mesh, tsv_of_sheet
from core.handover.mesh_reading import OTHER_FORMATS, MeshRequest, read_mesh
from core.progress import Progress

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.assembly import Assembly
    from core.handover import Sheet, SheetChoice
    from core.quantity import UnitSet

SOUND, CHECK_FAILED, WRONG_USAGE, UNREADABLE = 0, 1, 2, 3
Format = Literal["text", "json", "tsv", "csv"]

# How a ZIP file begins, as every document is one; an STL file may begin with any two of these.
DOCUMENT_SUFFIX: Final = ".masswright"
_ARCHIVE_START: Final = b"PK\x03\x04"
_LOST: Final = "{}: the process that read it ended before it was done. Try it again with --jobs 1."


@dataclass(frozen=True)
class Task:
    """What to do with every path.

    Attributes:
        request: for mesh files.
        choice: which tensor the text and the tables show.
        units: in which they show it.
        format: of what is written.
        decimal_mark: "." or ",".
        mesh_only: the options that were given and make sense for a mesh file only.

    """

    request: MeshRequest
    choice: SheetChoice
    units: UnitSet
    format: Format = "text"
    decimal_mark: str = "."
    mesh_only: tuple[str, ...] = ()


@dataclass(frozen=True)
class Outcome:
    """What came of one path.

    Attributes:
        status: of the program, as if this path were the only one.
        text: for standard output, unless the format is JSON.
        answer: for standard output as JSON.
        complaints: lines for standard error.

    """

    status: int
    text: str = ""
    answer: dict[str, Any] = field(default_factory=dict)
    complaints: tuple[str, ...] = ()


def weigh(paths: list[str], task: Task, jobs: int = 1) -> int:
    """Write the answers on all paths, in their order, and return the highest status."""
    outcomes: list[Outcome] = []
    for outcome in _outcomes(paths, task, min(jobs, len(paths))):
        if outcome.text:
            show("\n" + outcome.text if any(before.text for before in outcomes) else outcome.text)
        for line in outcome.complaints:
            complain(line)
        outcomes.append(outcome)
    if task.format == "json":
        from core.handover.answer import json_text

        answers = [outcome.answer for outcome in outcomes]
        show(json_text(answers[0] if len(answers) == 1 else answers) + "\n")
    return max(outcome.status for outcome in outcomes)


def outcome_of(path: str, task: Task, progress: Progress | None = None) -> Outcome:
    """Return what comes of one path; whatever is wrong with its file is told, not raised."""
    try:
        return _document(path, task) if is_document(path) else _mesh(path, task, progress)
    except (FileRefused, ValueRefused, OSError) as fault:
        status = WRONG_USAGE if isinstance(fault, ValueRefused) else UNREADABLE
        said = str(fault) if isinstance(fault, MasswrightError) else f"{path}: {fault.strerror or fault}"
        return _refusal(path, task, said, status)


def _refusal(path: str, task: Task, said: str, status: int) -> Outcome:
    from core.handover.answer import answer_of_refusal

    answer = answer_of_refusal(path, said) if task.format == "json" else {}
    return Outcome(status, answer=answer, complaints=(said,))


def is_document(path: str) -> bool:
    """Return whether a file is a document: by its ending, otherwise an archive whose ending names no mesh format."""
    suffix = Path(path).suffix.lower()
    if suffix == DOCUMENT_SUFFIX:
        return True
    if suffix.removeprefix(".") in OTHER_FORMATS or not Path(path).is_file():
        return False
    with Path(path).open("rb") as file:
        return file.read(len(_ARCHIVE_START)) == _ARCHIVE_START


def _mesh(path: str, task: Task, progress: Progress | None) -> Outcome:
    reading = read_mesh(path, task.request, progress)
    complaints = tuple(f"check failed: {check.name}: {check.text}" for check in reading.checks if not check.ok)
    status = CHECK_FAILED if complaints else SOUND
    if task.format == "json":
        from core.handover.answer import answer_of_mesh

        return Outcome(status, answer=answer_of_mesh(reading), complaints=complaints)
    return Outcome(status, sheet_text(sheet_of_mesh(reading, task.choice, task.units), task), complaints=complaints)


def _document(path: str, task: Task) -> Outcome:
    if task.mesh_only:
        raise ValueRefused(
            f"{', '.join(task.mesh_only)} is for mesh files; a document says this for every part",
            where=path,
            remedy="Leave the option out, or set it in the document",
        )
    from core.assembly import ledger_of
    from core.assembly.overlap_findings import overlaps_looked_for
    from core.document import look_at_links, read_document
    from core.handover.machine_sheet import sheet_of_machine

    machine = read_document(path)
    machine = machine.with_assembly(_about_asked_axis(machine.assembly, task))
    assembly = machine.assembly
    look_at_links(assembly)
    overlaps = overlaps_looked_for(assembly)
    complaints = tuple(
        f"check failed: {finding.check.name}: {path}: {finding.check.text}"
        for finding in (*machine.findings(), *overlaps)
        if not finding.check.ok
    )
    status = CHECK_FAILED if complaints else SOUND
    if task.format == "json":
        from core.handover.answer import answer_of_machine

        return Outcome(status, answer=answer_of_machine(machine, path, overlaps), complaints=complaints)
    text = sheet_text(sheet_of_machine(machine, task.choice, task.units), task)
    if task.format == "text":
        from core.handover.text import text_of_ledger

        text += "\n" + text_of_ledger(ledger_of(assembly), task.units, task.decimal_mark)
    return Outcome(status, text, complaints=complaints)


def sheet_text(sheet: Sheet, task: Task) -> str:
    """Return a sheet in the format that was asked for, JSON aside."""
    if task.format == "tsv":
        return tsv_of_sheet(sheet, task.decimal_mark)
    if task.format == "csv":
        return csv_of_sheet(sheet, task.decimal_mark)
    from core.handover.text import text_of_sheet

    return text_of_sheet(sheet, task.decimal_mark)


def _about_asked_axis(assembly: Assembly, task: Task) -> Assembly:
    """Return the assembly with the axis that was asked about as its drive axis."""
    asked = task.request.axis
    if asked is None:
        return assembly
    from core.assembly import DriveAxis

    axis = DriveAxis(asked.name.removeprefix("the axis "), asked.point, asked.direction)
    others = tuple(other for other in assembly.axes if other.name != axis.name)
    return replace(assembly, axes=(*others, axis), drive=axis.name)


def _outcomes(paths: list[str], task: Task, jobs: int) -> Iterator[Outcome]:
    if jobs > 1:
        yield from _side_by_side(paths, task, jobs)
        return
    for path in paths:
        progress = Progress(f"reading {os.path.basename(path)}")  # noqa: PTH119  # any text may be asked for
        with progress_shown(progress):
            outcome = outcome_of(path, task, progress)
        yield outcome


def _side_by_side(paths: list[str], task: Task, jobs: int) -> Iterator[Outcome]:
    from concurrent.futures import BrokenExecutor, ProcessPoolExecutor
    from multiprocessing import active_children

    pool, left = ProcessPoolExecutor(jobs, initializer=_end_quietly), len(paths)
    try:
        futures = [pool.submit(outcome_of, path, task) for path in paths]
        for path, future in zip(paths, futures, strict=True):
            try:
                outcome = future.result()
            except BrokenExecutor:
                outcome = _refusal(path, task, _LOST.format(path), UNREADABLE)
            left -= 1
            yield outcome
    finally:
        # Stopped half-way, the workers have nothing left to work for.
        for worker in active_children() if left else ():
            worker.terminate()
        pool.shutdown(cancel_futures=True)


def _end_quietly() -> None:
    """Let Ctrl-C end a worker without a word; the main process tells the user."""
    signal.signal(signal.SIGINT, signal.SIG_DFL)
