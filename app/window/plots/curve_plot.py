"""A plot with its title, legend and readout; what it draws can be copied as columns of numbers."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QSizePolicy, QVBoxLayout, QWidget

from app.window.numbers import preview, shown
from app.window.plots.legend import Legend
from app.window.style import GRID, Words
from app.window.tasks import Task
from core.handover import tsv_of_block

if TYPE_CHECKING:
    from app.window.plots.canvas import Canvas
    from app.window.plots.graph import Graph
    from app.window.session import Session
    from core.progress import Progress

HINT = "Point at the curve, or go along it with the arrow keys, to read its values."
# Numbers that are written within 0.2 s; more are written off the window's thread.
MOST_AT_ONCE = 50_000


class CurvePlot(QWidget):
    """Draws a graph and reads it off."""

    def __init__(self, session: Session, label: str) -> None:
        super().__init__()
        self._session = session
        self._label = label
        self._graph: Graph | None = None
        self._task: Task[str] | None = None
        self.canvas: Canvas | None = None
        self.legend = Legend()
        self.readout = Words("", "quiet")
        self.readout.setWordWrap(True)
        self.readout.setAccessibleName(f"{label}: values at the marked point")
        self.readout.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(GRID // 2)
        self._column.addWidget(self.legend)
        self._column.addWidget(self.readout)

    @property
    def graph(self) -> Graph | None:
        """What is drawn."""
        return self._graph

    def show_graph(self, graph: Graph) -> None:
        """Draw another graph, or the same with other numbers."""
        self._graph = graph
        canvas = self._canvas()
        canvas.setAccessibleName(f"{self._label}: {graph.title}")
        canvas.show_graph(graph, self._session.decimal_mark)
        self.legend.show_graph(graph)
        self.readout.setText(HINT)

    def _canvas(self) -> Canvas:
        if self.canvas is None:
            from app.window.plots.canvas import Canvas

            self.canvas = Canvas()
            self.canvas.setMinimumHeight(120)
            self.canvas.setAccessibleDescription(HINT)
            self.canvas.pointed.connect(self._read)
            self._column.insertWidget(1, self.canvas, 1)
        return self.canvas

    def _read(self, at: int) -> None:
        if self._graph is None:
            return
        said = (
            f"{column.name} {shown(self._session, float(column.values[at]), column.unit)} {column.unit.symbol}".rstrip()
            for column in self._graph.columns
        )
        # A value stays in one line with its name and its unit.
        self.readout.setText("   ".join(words.replace(" ", "\N{NO-BREAK SPACE}") for words in said))

    def copy_graph(self) -> None:
        """Put all points on the clipboard as columns under their headings, tab-separated, full precision."""
        graph, mark = self._graph, self._session.decimal_mark
        if graph is None:
            return
        if len(graph.across) * len(graph.columns) <= MOST_AT_ONCE:
            self._copied(tsv_of_block(graph.rows(), mark))
            return

        def write(_progress: Progress) -> str:
            return tsv_of_block(graph.rows(), mark)

        self._session.said.emit("Writing the curve…")
        self._task = Task(self, write, self._copied, self._session.refused.emit)

    def _copied(self, text: str) -> None:
        QGuiApplication.clipboard().setText(text)
        title = "" if self._graph is None else self._graph.title
        self._session.said.emit(f"Copied {title}: {preview(text)}")

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and self.canvas is not None:
            self.canvas.dress()
