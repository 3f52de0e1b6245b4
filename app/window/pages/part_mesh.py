"""The fields of a mesh part: its file and verdict, its length unit, and which of its two sets of values counts."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QGridLayout, QWidget

from app.window.fields import ChoiceField, Form
from app.window.numbers import shown
from app.window.pages.mesh_findings import UNASKED, MeshFindings
from app.window.pages.section import Section
from app.window.style import GRID, Words
from app.window.tasks import Task
from core.assembly import MeshBody, Part, compare_mesh
from core.mesh import MeshAsset, can_restore
from core.mesh.survey import SOUND
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.assembly.fields import AnyLine
    from core.assembly.mesh_part import Comparison
    from core.mesh.curvature import Restored

MESH_UNITS = ("mm", "cm", "m", "in", "ft")
COUNTS: list[tuple[str, object]] = [
    ("the facets as they are", "faceted"),
    ("the curvature restored behind them", "restored"),
]
HEADINGS = ("one piece", "as faceted", "restored", "difference", "may be off by")
FEW_DIGITS = 2
# Above this many triangles, restoring takes long enough to be felt, and is done off the window's thread.
AT_ONCE = 15_000


class MeshSection(Section):
    """A mesh: the file it came from, what a look at it told, its length unit, and what counts."""

    def __init__(self, session: Session, form: Form, part: Part) -> None:
        super().__init__(session, form, part.key)
        form.heading("Mesh")
        self._file = form.say("", "text")
        self._verdict = form.say("")
        self._unit = ChoiceField("Length unit of the mesh", [(symbol, UNITS[symbol].factor) for symbol in MESH_UNITS])
        form.add("length unit", self._unit, "A mesh file does not say what its numbers mean. J changes with length⁵.")
        self._size = form.say("")
        self._counts = ChoiceField("What counts", COUNTS)
        form.add(
            "values count", self._counts,
            "A mesh of a round part is inscribed: 24 facets round a bar are 1.1 % light and 2.3 % low in J.",
        )
        self._curved = CurvatureTable(session)
        form.add_row(self._curved)
        self._findings = MeshFindings(session, self._put_in_place)
        form.add_row(self._findings)
        self._unit.chosen.connect(self._choose_unit)
        self._counts.chosen.connect(self._choose_counts)
        self._task: Task[Restored | None] | None = None

    def show(self, node: AnyLine) -> None:
        """Show the mesh's file, verdict, size and both sets of values."""
        if not (isinstance(node, Part) and isinstance(node.body, MeshBody)):
            return
        asset = node.body.asset
        mended = f" Mended: {', '.join(asset.mends)}." if asset.mends else ""
        lighter = " The view draws a lighter mesh of it; all values count every facet." if asset.drawn_lighter else ""
        self._file.setText(f"{asset.name}, {asset.survey.triangles} facets, {asset.survey.format}.{mended}{lighter}")
        self._verdict.setText(f"Verdict: {asset.survey.verdict}. " + " ".join(asset.survey.notes))
        self._verdict.set_role("text" if asset.survey.verdict in SOUND else "failed")
        self._unit.set_value(node.body.metres_per_unit)
        unit = self.session.units[Kind.LENGTH]
        low, high = node.body.bounds
        size = " × ".join(shown(self.session, float(extent), unit) for extent in high - low)
        self._size.setText(f"Size {size} {unit.symbol}")
        self._findings.show_part(node, node.body)
        self._counts.set_value(node.body.counts)
        self._counts.setEnabled(can_restore(asset.survey))
        self._show_curvature(node, asset)

    def _show_curvature(self, part: Part, asset: MeshAsset) -> None:
        if not can_restore(asset.survey):
            self._curved.say(f"The curvature behind the facets cannot be restored: the mesh is {asset.survey.verdict}.")
        elif asset.restored_already or asset.survey.triangles <= AT_ONCE:
            self._curved.show_part(part)
        elif asset.survey.triangles > UNASKED:
            self._curved.say(
                "The curvature behind so many facets changes next to nothing; let it count to have it restored."
            )
        elif self._task is None:
            self._restore(asset, self._show_again)

    def _restore(self, asset: MeshAsset, then: Callable[[], None]) -> None:
        self._curved.say("Restoring the curvature behind the facets …")
        self._task = Task(
            self._curved, asset.restored, lambda _body: then(), self._curved.say,
            lambda fraction: self._curved.say(f"Restoring the curvature behind the facets … {fraction:.0%}"),
        )

    def _show_again(self) -> None:
        if self.key in self.session.assembly:
            self.show(self.session.assembly.node(self.key))

    def _put_in_place(self, asset: MeshAsset, words: str) -> None:
        """Put a mended mesh in the place of the one it was made from."""

        def change(node: AnyLine) -> AnyLine:
            if isinstance(node, Part) and isinstance(node.body, MeshBody):
                return replace(node, body=replace(node.body, asset=asset))
            return node

        self.edit(f"{words} {self.session.assembly.node(self.key).name}", change)

    def _choose_unit(self, factor: object) -> None:
        def change(node: AnyLine) -> AnyLine:
            if isinstance(node, Part) and isinstance(node.body, MeshBody) and isinstance(factor, float):
                return replace(node, body=replace(node.body, metres_per_unit=factor))
            return node

        self.edit(f"Unit of {self.session.assembly.node(self.key).name}: {self._unit.currentText()}", change)

    def _choose_counts(self, counts: object) -> None:
        """Let the chosen values count, once they are there."""
        part = self.session.assembly.node(self.key)
        asset = part.body.asset if isinstance(part, Part) and isinstance(part.body, MeshBody) else None
        slow = asset is not None and asset.survey.triangles > AT_ONCE and not asset.restored_already
        if asset is not None and counts == "restored" and slow:
            self._restore(asset, lambda: self._count(counts))
        else:
            self._count(counts)

    def _count(self, counts: object) -> None:
        def change(node: AnyLine) -> AnyLine:
            if isinstance(node, Part) and isinstance(node.body, MeshBody):
                return replace(node, body=replace(node.body, counts="restored" if counts == "restored" else "faceted"))
            return node

        name = self.session.assembly.node(self.key).name
        self.edit(f"{name} counts {'restored' if counts == 'restored' else 'as faceted'}", change)


class CurvatureTable(QWidget):
    """Volume and own J as faceted and with curvature restored, or the reason why there is nothing to compare."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self._session = session
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(2 * GRID)
        self._grid.setVerticalSpacing(GRID // 2)
        self._grid.setColumnStretch(len(HEADINGS), 1)
        self._sentence = Words("", "quiet")
        self._sentence.setWordWrap(True)
        self._grid.addWidget(self._sentence, 0, 0, 1, len(HEADINGS) + 1)
        self._cells = [[Words("", "quiet" if row == 0 else "text") for _ in HEADINGS] for row in range(3)]
        for row, cells in enumerate(self._cells):
            for column, cell in enumerate(cells):
                self._grid.addWidget(cell, row + 1, column)

    def say(self, sentence: str) -> None:
        """Show a sentence in place of the values."""
        self._sentence.setText(sentence)
        self._sentence.show()
        for cell in (cell for cells in self._cells for cell in cells):
            cell.hide()

    def show_part(self, part: Part) -> None:
        """Show both sets of values of one piece."""
        axis = self._session.assembly.drive_axis
        values = compare_mesh(part, axis.unit)
        if values is None:
            self.say("There is nothing to compare.")
            return
        self._sentence.hide()
        self._fill(0, HEADINGS)
        self._fill(1, self._row("volume", values.volume, Kind.VOLUME))
        self._fill(2, self._row(f"own J, parallel to {axis.name}", values.inertia, Kind.INERTIA))

    def _row(self, name: str, compared: Comparison, kind: Kind) -> tuple[str, ...]:
        unit, percent = self._session.units[kind], UNITS["%"]
        faceted, restored = (shown(self._session, value, unit, 6) for value in (compared.faceted, compared.restored))
        difference = shown(self._session, compared.difference, percent, FEW_DIGITS)
        left = shown(self._session, compared.left, percent, 1)
        return (name, f"{faceted} {unit.symbol}", f"{restored} {unit.symbol}", f"{difference} %", f"{left} %")

    def _fill(self, row: int, texts: tuple[str, ...]) -> None:
        for cell, text in zip(self._cells[row], texts, strict=True):
            cell.setText(text)
            cell.show()
