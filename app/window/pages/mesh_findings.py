"""What the census found on a mesh: each finding with its mends beside it, its facets lit up in the view on request."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QVBoxLayout, QWidget

from app.window.numbers import shown
from app.window.style import GRID, Words
from app.window.tasks import Task
from core.assembly import MeshBody
from core.assembly.mesh_findings import CENSUS_AT_ONCE, facet_edges, surplus_of
from core.mesh.mend import MENDS
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.arrays import IntArray
    from core.assembly import Part
    from core.mesh import MeshAsset
    from core.mesh.census import Census, MeshFinding

# More facets than this light up nothing but a blot.
MOST_LIT = 20_000
# Above this many facets, looking closely takes gigabytes and most of a minute: it is done when asked.
UNASKED = 3_000_000


class MeshFindings(QWidget):
    """Takes the census of a mesh, off the window's thread where that takes long, and lists what it found."""

    def __init__(self, session: Session, mend: Callable[[MeshAsset, str], None]) -> None:
        super().__init__()
        self._session = session
        self._mend = mend
        self._part: Part | None = None
        self._task: Task[Census] | Task[MeshAsset] | None = None
        self._shown: Census | None = None
        self.said = Words("", "quiet")
        self.said.setWordWrap(True)
        self.cancel = QPushButton("Stop looking")
        self.cancel.clicked.connect(self._stop)
        self.cancel.hide()
        self.look = QPushButton("Look closely")
        self.look.setToolTip("Finds shells, voids and what is counted twice; needs about 250 bytes a facet.")
        self.look.clicked.connect(self._asked)
        self.look.hide()
        self._rows = QVBoxLayout()
        self._rows.setSpacing(GRID // 2)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.said)
        layout.addWidget(self.cancel)
        layout.addWidget(self.look)
        layout.addLayout(self._rows)

    def show_part(self, part: Part, body: MeshBody) -> None:
        """Show the findings on a part's mesh, or take its census first."""
        self._part = part
        asset = body.asset
        if asset.census_at_hand is None and asset.survey.triangles > CENSUS_AT_ONCE:
            if asset.survey.triangles > UNASKED:
                self.said.setText("So large a mesh is looked at closely only when asked.")
                self.look.setVisible(self._task is None)
            elif self._task is None:
                self._take(asset)
            return
        self._list(asset.census())

    def _asked(self) -> None:
        asset = self._asset()
        self.look.hide()
        if asset is not None and self._task is None:
            self._take(asset)

    def _take(self, asset: MeshAsset) -> None:
        self.said.setText("Looking for what the mesh consists of …")
        self.cancel.show()
        self._task = Task(
            self, asset.census, lambda _census: self._taken(), self._give_up,
            lambda fraction: self.said.setText(f"Looking for what the mesh consists of … {fraction:.0%}"),
        )

    def _taken(self) -> None:
        self._task = None
        # The checks of the document now know more than they did.
        self._session.look_again()

    def _stop(self) -> None:
        if self._task is not None:
            self._task.cancel()
        self._give_up("Nobody has looked at what this mesh consists of.")

    def _give_up(self, sentence: str) -> None:
        self.cancel.hide()
        self.said.setText(sentence)

    def _list(self, census: Census) -> None:
        if census is self._shown:
            return
        self._shown = census
        self.cancel.hide()
        while (item := self._rows.takeAt(0)) is not None:
            row = item.widget()
            if row is not None:
                row.deleteLater()
        count = len(census.shells.area)
        shells = "1 shell" if count == 1 else f"{count} shells"
        self.said.setText(f"{shells}; nothing was found wrong." if not census.findings else f"{shells}; found:")
        for finding in census.findings:
            self._rows.addWidget(self._row(finding))

    def _row(self, finding: MeshFinding) -> QWidget:
        row = QWidget()
        words = Words(f"{finding.text}{self._surplus(finding)}", "text" if finding.harmless else "failed")
        words.setWordWrap(True)
        buttons = QHBoxLayout()
        buttons.setSpacing(GRID)
        show = QPushButton("Show in the view")
        show.setAccessibleName(f"Show in the view: {finding.name}")
        show.clicked.connect(lambda: self._light_up(finding.facets))
        buttons.addWidget(show)
        for mend in finding.mends:
            button = QPushButton(MENDS[mend].words)
            button.setAccessibleName(f"{MENDS[mend].words}: {finding.name}")
            button.clicked.connect(lambda _checked=False, mend=mend: self._begin_mend(mend, finding))
            buttons.addWidget(button)
        buttons.addStretch(1)
        layout = QVBoxLayout(row)
        layout.setContentsMargins(0, 0, 0, GRID // 2)
        layout.addWidget(words)
        layout.addLayout(buttons)
        return row

    def _surplus(self, finding: MeshFinding) -> str:
        """Return volume, mass and share of J that are counted too much, as a sentence."""
        extra = None if self._part is None else surplus_of(self._session.assembly, self._part, finding)
        if extra is None:
            return ""
        space, weight = self._session.units[Kind.VOLUME], self._session.units[Kind.MASS]
        mass = "" if extra.mass is None else f", {shown(self._session, extra.mass, weight)} {weight.symbol}"
        share = shown(self._session, extra.share, UNITS["%"], 3)
        return f" Too much: {shown(self._session, extra.volume, space)} {space.symbol}{mass}, {share} % of own J."

    def _light_up(self, facets: IntArray) -> None:
        if self._part is not None:
            edges = facet_edges(self._session.assembly, self._part.key, facets[:MOST_LIT])
            self._session.found.emit(edges)

    def _begin_mend(self, mend: str, finding: MeshFinding) -> None:
        asset = self._asset()
        if asset is None:
            return
        facets = finding.facets if mend == "turn" else None
        self.said.setText(f"{MENDS[mend].words} …")
        self._task = Task(
            self, lambda progress: asset.mended(mend, facets, progress), lambda made: self._mended(made, mend),
            self._refused,
        )

    def _asset(self) -> MeshAsset | None:
        return self._part.body.asset if self._part is not None and isinstance(self._part.body, MeshBody) else None

    def _mended(self, asset: MeshAsset, mend: str) -> None:
        self._task = None
        self._session.found.emit(np.zeros((0, 2, 3)))
        self._mend(asset, MENDS[mend].words)

    def _refused(self, sentence: str) -> None:
        self._task = None
        self.said.setText(sentence)
        self.said.set_role("failed")
