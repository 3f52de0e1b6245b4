"""The drawing area of a plot, on pyqtgraph, which takes long to import: only loaded once something is to be drawn."""

from __future__ import annotations

import html
import math
from typing import TYPE_CHECKING

import pyqtgraph as pg
from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtGui import QColor, QFocusEvent, QKeyEvent, QMouseEvent, QPen
from PySide6.QtWidgets import QGraphicsGridLayout

from app.window.plots.graph import MOST_POINTS, nearest, thinned, within
from app.window.plots.looks import LOOKS
from app.window.plots.signs import SIZE, ink, path_of
from app.window.style import colours
from core.quantity import compact

if TYPE_CHECKING:
    from app.window.plots.graph import Graph, Trace
    from core.arrays import FloatArray

STEPS = {
    Qt.Key.Key_Left: -1, Qt.Key.Key_Right: 1, Qt.Key.Key_PageUp: -20, Qt.Key.Key_PageDown: 20,
    Qt.Key.Key_Home: -(10**9), Qt.Key.Key_End: 10**9,
}
DOT, ZOOM_REST_MS = 4, 60
# Steps of an axis in degrees, and the px that a number beside it takes.
DEGREES, ROOM = (360, 180, 90, 45, 30), 48


class MarkedAxis(pg.AxisItem):  # type: ignore[misc]  # pyqtgraph has no types
    """An axis whose numbers have the decimal mark and the minus of the window."""

    decimal_mark = "."
    in_degrees = False

    def tickStrings(self, values: list[float], scale: float, spacing: float) -> list[str]:
        """Return the numbers beside the ticks."""
        # What lies a whole tick's round-off from 0 is 0.
        settled = [0.0 if abs(value) < 1e-9 * spacing else value for value in values]
        return [compact(value * scale, 9, decimal_mark=self.decimal_mark) for value in settled]

    def tickSpacing(self, low: float, high: float, size: float) -> list[tuple[float, float]]:
        """Return the steps of marks; of a large angle in degrees they are parts of a turn."""
        if self.in_degrees and high - low > DEGREES[-1] * 2:
            most = max(size / ROOM, 2)
            step = next((each for each in reversed(DEGREES) if (high - low) / each <= most), None)
            if step is not None:
                return [(step, 0.0)]
        steps: list[tuple[float, float]] = super().tickSpacing(low, high, size)
        return steps


class Canvas(pg.GraphicsView):  # type: ignore[misc]  # pyqtgraph has no types
    """Draws a graph, and marks one of its points: under the pointer, or chosen by keys.

    Signals:
        pointed: the point that is marked, by its number.
    """

    pointed = Signal(int)

    def __init__(self) -> None:
        super().__init__()
        self._graph: Graph | None = None
        self._at = -1
        self._thinned = False
        self._place: tuple[str, tuple[float, float]] | None = None
        self._lines: list[pg.PlotDataItem] = []
        self._spots: list[pg.ScatterPlotItem] = []
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.box = pg.ViewBox(enableMenu=False)
        self.box.setDefaultPadding(0.04)
        self._axes = {side: MarkedAxis(side) for side in ("left", "bottom")}
        self._lay_out()
        self._zero = pg.InfiniteLine(0, angle=0)
        self._cursor = pg.InfiniteLine(angle=90)
        self._mark = pg.ScatterPlotItem(size=8, pxMode=True, antialias=True)
        for item, depth in ((self._zero, -10), (self._cursor, -5), (self._mark, 20)):
            item.setZValue(depth)
            self.box.addItem(item, ignoreBounds=True)
        self._cursor.hide()
        # Zooming comes in many small steps: the lines follow once it rests.
        self._rest = QTimer(self, singleShot=True, interval=ZOOM_REST_MS)
        self._rest.timeout.connect(self._draw_again)
        self.box.sigXRangeChanged.connect(self._zoomed)
        self.dress()

    def _zoomed(self) -> None:
        if self._thinned:
            self._rest.start()

    def _draw_again(self) -> None:
        if self._graph is not None:
            self._draw_lines(self._graph)

    def _lay_out(self) -> None:
        """Put the axes beside the box; a ready-made plot would bring menus of its own with it."""
        grid = QGraphicsGridLayout()
        grid.setContentsMargins(0, 2, 2, 0)
        grid.setSpacing(0)
        grid.addItem(self._axes["left"], 0, 0)
        grid.addItem(self.box, 0, 1)
        grid.addItem(self._axes["bottom"], 1, 1)
        for axis in self._axes.values():
            axis.linkToView(self.box)
            axis.setZValue(-1000)
            axis.enableAutoSIPrefix(False)
            axis.setStyle(tickLength=-5, hideOverlappingLabels=True, maxTickLevel=0)
        whole = pg.GraphicsWidget()
        whole.setLayout(grid)
        self.setCentralItem(whole)

    def dress(self) -> None:
        """Take the colours of the theme of now."""
        c = colours()
        self.setBackground(QColor(c.ground))
        hairline = QPen(QColor(c.hairline), 1)
        hairline.setCosmetic(True)
        for axis in self._axes.values():
            axis.setPen(QColor(c.quiet))
            axis.setTextPen(QColor(c.text))
            axis.setTickFont(self.font())
            axis.setGrid(40)
        self._zero.setPen(hairline)
        cursor = QPen(QColor(c.quiet), 1, Qt.PenStyle.DashLine)
        cursor.setCosmetic(True)
        self._cursor.setPen(cursor)
        self._mark.setPen(QPen(QColor(c.text), 1.6))
        self._mark.setBrush(QColor(c.ground))
        if self._graph is not None:
            self.show_graph(self._graph, self._axes["left"].decimal_mark)

    def show_graph(self, graph: Graph, decimal_mark: str) -> None:
        """Draw a graph; what is zoomed into stays so while the same thing is drawn in the same units."""
        place = (graph.title.partition(" at ")[0], (graph.x[1].factor, graph.y[1].factor))
        same = place == self._place
        self._graph, self._place = graph, place
        self._at = -1
        for side, (words, unit) in (("bottom", graph.x), ("left", graph.y)):
            axis = self._axes[side]
            axis.decimal_mark, axis.in_degrees = decimal_mark, unit.symbol == "°"
            label = html.escape(f"{words}, {unit.symbol}" if unit.symbol else words)
            axis.setLabel(label, color=colours().text)
            axis.picture = None
        if not same:
            self.show_all()
        self._draw_lines(graph)
        self._draw_spots(graph)
        self._cursor.hide()
        self._mark.clear()


    def show_all(self) -> None:
        """Fit everything that is drawn."""
        self.box.enableAutoRange()

    def _draw_lines(self, graph: Graph) -> None:
        """Draw of every line what the range shown needs."""
        while len(self._lines) < len(graph.traces):
            item = pg.PlotDataItem()
            self.box.addItem(item)
            self._lines.append(item)
        everywhere = self.box.autoRangeEnabled()[0]
        low, high = (-math.inf, math.inf) if everywhere else self.box.viewRange()[0]
        self._thinned = False
        for number, item in enumerate(self._lines):
            if number >= len(graph.traces):
                item.setData([], [])
                continue
            trace = graph.traces[number]
            x, y = trace.x / graph.x[1].factor, trace.y / graph.y[1].factor
            if len(x) > MOST_POINTS:
                self._thinned = True
                shown = within(x, low, high)
                x, y = x[shown], y[shown]
            # The sum, drawn first, lies on top of its terms.
            item.setZValue(10 if trace.look == "sum" else 5)
            self._draw_line(item, trace, x, y)

    @staticmethod
    def _draw_line(item: pg.PlotDataItem, trace: Trace, x: FloatArray, y: FloatArray) -> None:
        look, dense = LOOKS[trace.look], len(x) > MOST_POINTS
        x, y = thinned(x, y)
        if trace.joined:
            item.setData(x, y, pen=look.hairline if dense else look.pen, symbol=None, antialias=not dense)
        else:
            item.setData(x, y, pen=None, symbol="o", symbolBrush=look.colour, symbolPen=None, symbolSize=DOT)

    def _draw_spots(self, graph: Graph) -> None:
        pen, brush = ink()
        while self._spots:
            self.box.removeItem(self._spots.pop())
        for spot in graph.spots:
            item = pg.ScatterPlotItem(
                [spot.x / graph.x[1].factor], [spot.y / graph.y[1].factor], symbol=path_of(spot.sign), size=SIZE,
                pen=pen, brush=brush, pxMode=True, antialias=True,
            )
            item.setZValue(15)
            self.box.addItem(item)
            self._spots.append(item)

    def mark(self, at: int) -> None:
        """Mark one point of the graph and tell of it."""
        if self._graph is None or not len(self._graph.across):
            return
        self._at = min(max(at, 0), len(self._graph.across) - 1)
        x = self._graph.across[self._at] / self._graph.x[1].factor
        y = self._graph.height[self._at] / self._graph.y[1].factor
        self._cursor.setPos(x)
        self._cursor.show()
        self._mark.setData([x], [y])
        self.pointed.emit(self._at)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        """Mark the point under the pointer."""
        super().mouseMoveEvent(event)
        if self._graph is None or event.buttons() != Qt.MouseButton.NoButton or not len(self._graph.across):
            return
        place = self.mapToScene(event.position().toPoint())
        if self.box.sceneBoundingRect().contains(place):
            place = self.box.mapSceneToView(place)
            (left, right), (low, high) = self.box.viewRange()
            fx, fy = self._graph.x[1].factor, self._graph.y[1].factor
            # A place across the plot counts ten times: time is what one points at, unless the curve turns back.
            scale = ((right - left) * fx / 10, (high - low) * fy)
            self.mark(nearest(self._graph.across, self._graph.height, (place.x() * fx, place.y() * fy), scale))

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        """Show all of the graph again."""
        super().mouseDoubleClickEvent(event)
        self.show_all()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Go along the curve by the arrow keys; F shows all of it."""
        key = Qt.Key(event.key())
        if key in STEPS:
            steps = STEPS[key] * (9 if event.modifiers() & Qt.KeyboardModifier.ControlModifier else 1)
            self.mark(self._at + steps if self._at >= 0 else 0)
        elif key == Qt.Key.Key_F:
            self.show_all()
        else:
            super().keyPressEvent(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        """Mark the first point when the keyboard comes, so that the arrows have a start."""
        super().focusInEvent(event)
        if self._at < 0 and event.reason() in {Qt.FocusReason.TabFocusReason, Qt.FocusReason.BacktabFocusReason}:
            self.mark(0)
