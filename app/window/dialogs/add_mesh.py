"""Adding meshes: each file is read off the window's thread, and its unit is chosen by seeing size and mass in each."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QCheckBox, QProgressBar, QWidget

from app.window.dialogs.form import FormDialog
from app.window.dialogs.unit_table import UnitTable
from app.window.fields import ChoiceField, Form, TextField
from app.window.ledger.edits import driver_of
from app.window.materials import material_completer
from app.window.pages.part_mesh import COUNTS
from app.window.style import Words
from app.window.tasks import Task
from core.assembly import Import, imported
from core.errors import MasswrightError
from core.material import NotSet
from core.mesh import AT_ONCE, can_restore
from core.mesh.formats import read_bodies
from core.mesh.survey import SOUND

if TYPE_CHECKING:
    from collections.abc import Sequence
    from pathlib import Path

    from app.window.session import Session
    from core.assembly import Driver, Node
    from core.mesh import MeshAsset
    from core.progress import Progress

STANDING: list[tuple[str, object]] = [
    ("at the file's own origin", "file"),
    ("with its middle on the drive axis", "middle"),
    ("with its centre of mass on the drive axis", "mass"),
]
MOST_FINDINGS = 3
# Above this many facets, making a mesh ready to be drawn takes long enough to be felt.
DRAWN_AT_ONCE = 20_000


class AddMeshDialog(FormDialog):
    """Goes through the files one by one; every one becomes a line, or is left out with the reason."""

    def __init__(self, session: Session, paths: Sequence[Path], parent: QWidget | None = None) -> None:
        super().__init__("Add mesh", "Add part", 680, parent)
        self._session = session
        self._left = list(paths)
        self._bodies: tuple[MeshAsset, ...] = ()
        self._skips = False
        self._alike = False
        self._task: Task[tuple[MeshAsset, ...]] | Task[None] | None = None
        self.file = Words()
        self.verdict = Words("", "quiet")
        self.verdict.setWordWrap(True)
        self.bar = QProgressBar()
        self.bar.setAccessibleName("Reading the mesh")
        self.bar.setRange(0, 100)
        self.material = TextField("Material", "a material, a density (7850 kg/m³) or a weighed mass (1.2 kg)")
        self.material.setCompleter(material_completer(session.own.materials, self.material))
        self.units = UnitTable(session, self._driver)
        self.counts = ChoiceField("What counts", COUNTS)
        self.standing = ChoiceField("Where it stands", STANDING)
        self.all_alike = QCheckBox()
        self._lay_out()
        self.units.chosen.connect(self._allow)
        self.material.textChanged.connect(lambda _text: self.units.refresh())
        self._next()

    @property
    def table(self) -> QWidget:
        """The table in which the length unit is chosen."""
        return self.units.table

    def _lay_out(self) -> None:
        form = Form()
        form.add("made of", self.material, "A material's name, a density, or the mass one piece was weighed at.")
        below = Form()
        below.add("values count", self.counts, "Facets of a round part are inscribed: too light, J too low.")
        below.add("stands", self.standing, "It can be moved afterwards on the Part page.")
        self.stack(self.file, self.bar, self.verdict, form, self.units, below, self.all_alike)

    def _next(self) -> None:
        """Read the next file, or close after the last one."""
        self._bodies, self._skips = (), False
        self.units.show_bodies(())
        if not self._left:
            self.accept()
            return
        path = self._left[0]
        self.file.setText(f"Reading {path.name} …")
        self.verdict.setText("")
        self.refuse("")
        self.bar.setValue(0)
        self.bar.show()
        if not self._alike:
            # A unit is never taken over from the file before without being asked for.
            self.units.clear()
        self._allow()
        self.all_alike.setVisible(len(self._left) > 1)
        others = len(self._left) - 1
        which = "other file" if others == 1 else f"other {others} files"
        self.all_alike.setText(f"Add the {which} with the same unit and material")
        self._task = Task(
            self, lambda progress: _read(path, progress), self._show, self._unreadable,
            lambda fraction: self.bar.setValue(round(100 * fraction)),
        )

    def _show(self, bodies: tuple[MeshAsset, ...]) -> None:
        self._bodies = bodies
        self.bar.hide()
        facets = sum(body.survey.triangles for body in bodies)
        several = "" if len(bodies) == 1 else f" in {len(bodies)} bodies, which become a group"
        self.file.setText(f"{self._left[0].name}: {facets} facets{several}, {bodies[0].survey.format}")
        sound = all(body.survey.verdict in SOUND for body in bodies)
        self.verdict.setText(" ".join(_sentences(bodies)))
        self.verdict.set_role("text" if sound else "failed")
        self.counts.setEnabled(any(can_restore(body.survey) for body in bodies))
        self.units.show_bodies(bodies)
        self._allow()
        if self._alike:
            self.take()

    def _unreadable(self, sentence: str) -> None:
        self.bar.hide()
        name = self._left[0].name
        self.file.setText(f"{name} was not added.")
        self.refuse(sentence)
        self._skips = True
        self.take_button.setText("Next file" if len(self._left) > 1 else "Close")
        self.take_button.setEnabled(True)

    def _allow(self) -> None:
        self.take_button.setText("Add part" if len(self._bodies) < 2 else "Add group")  # noqa: PLR2004  # one or several
        self.take_button.setEnabled(bool(self._bodies) and self.units.factor is not None)

    def _driver(self) -> Driver:
        text = self.material.text()
        own = self._session.own.materials
        return driver_of(text, self._session.units, "made of", own=own) if text.strip() else NotSet()

    def take(self) -> None:
        """Add the file as a line, and go on with the next one; a file that could not be read is passed over."""
        if self._skips:
            self._left.pop(0)
            self._next()
            return
        factor = self.units.factor
        if not self._bodies or factor is None:
            return
        path = self._left[0]
        try:
            how = Import(
                path.stem.removesuffix(".stl"), factor, self._driver(), self.counts.currentData(),
                self.standing.currentData(), str(path.resolve()),
            )
            node = imported(self._session.assembly, self._bodies, how)
        except MasswrightError as error:
            self.refuse(str(error))
            return
        self._prepare(node)

    def _prepare(self, node: Node) -> None:
        """Make a large mesh ready to be drawn before it is shown, off the window's thread."""
        if sum(body.survey.triangles for body in self._bodies) < DRAWN_AT_ONCE:
            self._insert(node)
            return
        self.file.setText(f"Making {node.name} ready …")
        self.take_button.setEnabled(False)
        self._task = Task(
            self, lambda _progress: self._session.prepare(node), lambda _done: self._insert(node), self.refuse
        )

    def _insert(self, node: Node) -> None:
        refusal = self._session.attempt(f"Add {node.name}", lambda before: before.inserted(node), select=node.key)
        if refusal:
            self.refuse(refusal)
            return
        self._alike = self.all_alike.isChecked()
        self._left.pop(0)
        self._next()

    def done(self, result: int) -> None:
        """Stop reading when the dialog closes."""
        if self._task is not None:
            self._task.cancel()
        super().done(result)


def _read(path: Path, progress: Progress) -> tuple[MeshAsset, ...]:
    """Read a file, and find out beforehand what the window will ask about meshes that are not huge."""
    bodies = read_bodies(path, progress)
    for body in bodies:
        if body.survey.triangles <= AT_ONCE:
            body.census(progress)
            if can_restore(body.survey):
                body.restored(progress)
        body.facets_for_view()
    return bodies


def _sentences(bodies: tuple[MeshAsset, ...]) -> list[str]:
    """Return verdict, basis, notes and the first findings of each body."""
    said = []
    for body in bodies:
        who = "" if len(bodies) == 1 else f"{body.name}: "
        estimate = "" if body.survey.basis == "computed" else f" Its values are {body.survey.basis}."
        said += [f"{who}Verdict: {body.survey.verdict}.{estimate}", *body.survey.notes]
        census = body.census_at_hand
        found = [] if census is None else [finding for finding in census.findings if not finding.harmless]
        said += [finding.text for finding in found[:MOST_FINDINGS]]
        if len(found) > MOST_FINDINGS:
            said.append(f"{len(found) - MOST_FINDINGS} more findings are listed on the Part page.")
    return said
