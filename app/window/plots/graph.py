"""What a plot shows: columns of numbers, which of them are drawn over which, and marked points. No Qt in here."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.arrays import ROUND_OFF

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.quantity import Unit

# A line of more points than this is drawn by the lowest and highest of stretches of it, two to a pixel about.
MOST_POINTS = 2000


@dataclass(frozen=True, eq=False)
class Column:
    """Numbers of one kind, one for each point of the graph.

    Attributes:
        name: what they are.
        values: (m,) in SI.
        unit: in which they are shown and copied.
    """

    name: str
    values: FloatArray
    unit: Unit

    @property
    def title(self) -> str:
        """The name with its unit, as a heading has it."""
        return f"{self.name} {self.unit.symbol}".rstrip()

    @property
    def shown(self) -> FloatArray:
        """The values in the unit shown."""
        return self.values / self.unit.factor


@dataclass(frozen=True, eq=False)
class Trace:
    """A line to draw.

    Attributes:
        name: as in the legend.
        look: name of a look of `app.window.plots.looks`.
        x, y: (m,) in SI.
        joined: whether the points are joined by a line, or stand alone.
    """

    name: str
    look: str
    x: FloatArray
    y: FloatArray
    joined: bool = True


@dataclass(frozen=True)
class Spot:
    """A marked point: its name, its place in SI, and the sign that marks it."""

    name: str
    x: float
    y: float
    sign: str


@dataclass(frozen=True, eq=False)
class Graph:
    """Everything that a plot shows.

    Attributes:
        title: what is drawn, at which shaft.
        x, y: the axes: their names, and the units that all traces and spots are shown in.
        traces: the lines.
        columns: what the readout says and what is copied of each point, in order.
        across: (m,) where on the x axis each point of the columns stands, SI.
        height: (m,) and on the y axis.
        spots: marked points.
    """

    title: str
    x: tuple[str, Unit]
    y: tuple[str, Unit]
    traces: tuple[Trace, ...]
    columns: tuple[Column, ...]
    across: FloatArray
    height: FloatArray
    spots: tuple[Spot, ...] = ()

    def rows(self) -> list[list[str | float]]:
        """Return headings and numbers, a row for each point, in the units shown."""
        columns = [column.shown.tolist() for column in self.columns]
        headings: list[str | float] = [column.title for column in self.columns]
        return [headings, *(list(row) for row in zip(*columns, strict=True))]


def within(x: FloatArray, low: float, high: float) -> slice:
    """Return which points of a line whose x never falls are needed to draw it between two x, one beyond each end.

    Of a line whose x falls by more than round-off anywhere that is all of them.
    """
    slack = ROUND_OFF * float(np.abs(x).max(initial=0.0))
    if (x[1:] < x[:-1] - slack).any():
        return slice(None)
    first, last = np.searchsorted(x, [low, high], side="left")
    return slice(max(int(first) - 1, 0), int(last) + 1)


def thinned(x: FloatArray, y: FloatArray, most: int = MOST_POINTS) -> tuple[FloatArray, FloatArray]:
    """Return a line of about so many points that looks the same: its ends, and of each stretch its lowest and highest.

    Jumps and peaks stay, whatever the number of points.
    """
    count = len(x)
    if count <= most:
        return x, y
    stretch = -(-2 * count // most)
    padded = np.concatenate([y, np.full(-count % stretch, y[-1])]).reshape(-1, stretch)
    picks = np.sort(np.stack([padded.argmin(axis=1), padded.argmax(axis=1)], axis=1), axis=1)
    picks = (picks + np.arange(len(padded))[:, None] * stretch).ravel()
    kept = np.concatenate([[0], np.minimum(picks, count - 1), [count - 1]])
    return x[kept], y[kept]


def nearest(
    across: FloatArray, height: FloatArray, at: tuple[float, float], scale: tuple[float, float]
) -> int:
    """Return the point nearest to a place, lengths along the two axes counted per scale."""
    return int(np.argmin(((across - at[0]) / scale[0]) ** 2 + ((height - at[1]) / scale[1]) ** 2))
