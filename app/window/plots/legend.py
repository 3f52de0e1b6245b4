"""The legend of a plot: a sample of each line or sign beside its name, in rows that fold at the width."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPaintEvent, QPen, QResizeEvent
from PySide6.QtWidgets import QSizePolicy, QWidget

from app.window.plots.looks import LOOKS
from app.window.plots.signs import drawn
from app.window.style import GRID, colours

if TYPE_CHECKING:
    from app.window.plots.graph import Graph

SAMPLE, BETWEEN = 34, 2 * GRID


class Legend(QWidget):
    """The title of a graph, and the names of what it draws."""

    def __init__(self) -> None:
        super().__init__()
        self._graph: Graph | None = None
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setAccessibleName("Legend")
        self._fold()

    def show_graph(self, graph: Graph | None) -> None:
        """Name the lines and signs of a graph."""
        self._graph = graph
        self.setAccessibleDescription(", ".join(name for _, name in self._entries()))
        self._fold()
        self.update()

    def _entries(self) -> list[tuple[object, str]]:
        if self._graph is None:
            return []
        lines: list[tuple[object, str]] = [(trace, trace.name) for trace in self._graph.traces]
        named: dict[str, object] = {}
        for spot in self._graph.spots:
            named.setdefault(spot.name, spot)
        return lines + [(spot, name) for name, spot in named.items()]

    @property
    def _title(self) -> str:
        return "" if self._graph is None else self._graph.title

    @property
    def _title_font(self) -> QFont:
        font = self.font()
        font.setBold(True)
        return font

    def _places(self) -> list[tuple[object, str, QRectF]]:
        metrics = QFontMetricsF(self.font())
        height, y, places = metrics.height() + 4, 0.0, []
        x = QFontMetricsF(self._title_font).horizontalAdvance(self._title) + BETWEEN
        for entry, name in self._entries():
            width = SAMPLE + GRID / 2 + metrics.horizontalAdvance(name)
            if x and x + width > self.width():
                x, y = 0.0, y + height
            places.append((entry, name, QRectF(x, y, width, height)))
            x += width + BETWEEN
        return places

    def _fold(self) -> None:
        places = self._places()
        self.setFixedHeight(int(places[-1][2].bottom()) + 1 if places else 0)

    def sizeHint(self) -> QSize:
        """Return no width of its own."""
        return QSize(0, self.height())

    def minimumSizeHint(self) -> QSize:
        """Return no width of its own."""
        return QSize(0, self.height())

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Fold the rows anew."""
        super().resizeEvent(event)
        self._fold()

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of font."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange:
            self._fold()

    def paintEvent(self, _event: QPaintEvent) -> None:
        """Draw samples and names."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setFont(self._title_font)
        painter.setPen(QColor(colours().text))
        height = QFontMetricsF(self.font()).height() + 4
        painter.drawText(QRectF(0, 0, self.width(), height), Qt.AlignmentFlag.AlignVCenter, self._title)
        painter.setFont(self.font())
        for entry, name, place in self._places():
            middle = place.center().y()
            look = getattr(entry, "look", None)
            if look is None:
                drawn(painter, entry.sign, QPointF(place.left() + SAMPLE / 2, middle))  # type: ignore[attr-defined]  # a Spot
            elif entry.joined:  # type: ignore[attr-defined]  # a Trace
                painter.setPen(LOOKS[look].pen)
                painter.drawLine(QPointF(place.left(), middle), QPointF(place.left() + SAMPLE, middle))
            else:
                painter.setPen(QPen(LOOKS[look].colour, 4, c=Qt.PenCapStyle.RoundCap))
                for x in (0.2, 0.5, 0.8):
                    painter.drawPoint(QPointF(place.left() + SAMPLE * x, middle))
            painter.setPen(QColor(colours().text))
            painter.drawText(place.adjusted(SAMPLE + GRID / 2, 0, 1, 0), Qt.AlignmentFlag.AlignVCenter, name)
