"""Where dimension lines, arrows and symbols stand beside a drawing, at a given size. No Qt in here.

Everything is in logical pixels, x to the right and y upwards, from the middle of the drawn body.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from app.window.gallery.drawing import Drawing, FlatMark
    from core.arrays import FloatArray

# All in heights of a symbol: the gap to the body, what extension lines reach beyond, arrow heads; tails outside.
GAP, BEYOND, ARROW = 0.7, 0.3, 0.55
TAILS, TAILS_BESIDE = (1.2, 1.8, 2.6, 3.5, 4.5), (0.0, 0.5, 1.0)
_STEP, _MOST_STEPS = 0.4, 24
# A span must be so long for its arrows to stand between its ends.
_ROOMY = 2.2
# How often a smaller scale, then a larger one is tried; the first one, and how slowly and how fast it becomes smaller.
_ROUNDS, _GROWING = 12, 2
_FIRST, _SLOWEST, _FASTEST = 0.85, 0.95, 0.85
# A body within this part of its size of the largest one that fits is large enough.
_LOOSE = 0.06
_ALMOST = 1e-9


@dataclass(frozen=True, eq=False)
class Placed:
    """One dimension as it is drawn.

    Attributes:
        name, text: of the dimension, and its symbol.
        lines: (n, 2, 2) thin lines.
        arrows: (k, 2, 2) tip and direction of arrow heads.
        dot: (2,) the end of a leader; None where there is none.
        centre: (2,) middle of the text.
    """

    name: str
    text: str
    lines: FloatArray
    arrows: FloatArray
    dot: FloatArray | None
    centre: FloatArray


@dataclass(frozen=True, eq=False)
class Layout:
    """A drawing fitted into a rectangle: pixels per m, the place (2,) px of its origin, and its dimensions."""

    scale: float
    shift: FloatArray
    placed: tuple[Placed, ...]


def laid_out(
    drawing: Drawing, symbols: Mapping[str, str], room: tuple[float, float], height: float,
    width_of: Callable[[str], float],
) -> Layout:
    """Return a drawing with its dimensions, as large as the room allows.

    Args:
        drawing: of the body and its marks.
        room: width and height, px.
        symbols: the text of each dimension by its name; one without a text is left out.
        height: of a text, px.
        width_of: how wide a text is, px.
    """
    body = np.concatenate([drawing.spots, drawing.faces.reshape(-1, 2)])
    extent = np.maximum(np.ptp(body, axis=0), _ALMOST)
    most = float(np.min(np.array(room) / extent))

    def at(scale: float) -> tuple[Layout, FloatArray]:
        placed = _Placing(drawing, scale, height, width_of).all_of(symbols)
        low, high = _bounds(placed, body * scale, height, width_of)
        return Layout(scale, -(low + high) / 2, placed), np.array(room) - (high - low)

    best, too_large = None, most
    scale = _FIRST * most
    for _ in range(_ROUNDS):
        found, spare = at(scale)
        if spare.min() >= 0:
            best = found
            break
        too_large = scale
        # Where things stand changes by leaps with the scale, so what it seems to allow is taken with care.
        scale = max(min(scale + float(np.min(spare / extent)), _SLOWEST * scale), _FASTEST * scale)
    if best is None:
        return found
    return _grown(best, too_large, at)


def _grown(
    best: Layout, too_large: float, at: Callable[[float], tuple[Layout, FloatArray]]
) -> Layout:
    """Return a layout that fits, larger than one that does where there is one below a scale that does not."""
    for _ in range(_GROWING):
        if too_large - best.scale < _LOOSE * too_large:
            break
        scale = 0.5 * (best.scale + too_large)
        found, spare = at(scale)
        if spare.min() >= 0:
            best = found
        else:
            too_large = scale
    return best


def _bounds(
    placed: tuple[Placed, ...], body: FloatArray, height: float, width_of: Callable[[str], float]
) -> tuple[FloatArray, FloatArray]:
    spots = [body]
    for one in placed:
        half = np.array([width_of(one.text), height]) / 2
        spots += [one.lines.reshape(-1, 2), one.centre[None] - half, one.centre[None] + half]
    every = np.concatenate(spots)
    return every.min(axis=0), every.max(axis=0)


class _Placing:
    """Puts one dimension after the other where the body and those before leave room."""

    def __init__(self, drawing: Drawing, scale: float, height: float, width_of: Callable[[str], float]) -> None:
        self._drawing = drawing
        self._scale = scale
        self._h = height
        self._width_of = width_of
        self._taken: FloatArray = drawing.spots * scale
        self._boxes: list[tuple[FloatArray, FloatArray]] = []

    def all_of(self, symbols: Mapping[str, str]) -> tuple[Placed, ...]:
        """Return every dimension that has a text: short spans first, so that long ones stand around them."""
        marks = [mark for mark in self._drawing.marks if symbols.get(mark.name)]
        order = {"radius": 0, "span": 1, "leader": 2}
        beside = {id(mark): bool(np.linalg.norm(mark.away) > _ALMOST) for mark in marks}
        marks.sort(key=lambda m: (order[m.style], beside[id(m)], float(np.linalg.norm(m.end - m.start))))
        placed = []
        for mark in marks:
            if mark.style == "leader":
                one = self._leader(mark, symbols[mark.name])
            elif mark.style == "span" and beside[id(mark)]:
                one = self._span(mark, symbols[mark.name])
            else:
                one = self._on_body(mark, symbols[mark.name])
            self._take(one)
            placed.append(one)
        return tuple(placed)

    def _take(self, one: Placed) -> None:
        along = [one.lines[:, 0] + share * (one.lines[:, 1] - one.lines[:, 0]) for share in np.linspace(0, 1, 9)]
        self._taken = np.concatenate([self._taken, *along])
        self._boxes.append((one.centre, self._half(one.text)))

    def _half(self, text: str) -> FloatArray:
        return np.array([self._width_of(text) / 2 + 1, self._h / 2])

    def _crowd(self, centre: FloatArray, text: str) -> int:
        """Return how much is in the way of a text at a place: points of lines, and other texts."""
        half = self._half(text)
        lines = int((np.abs(self._taken - centre) < half).all(axis=1).sum())
        texts = sum(bool((np.abs(other - centre) < half + more).all()) for other, more in self._boxes)
        return lines + 20 * texts

    def _span(self, mark: FlatMark, text: str) -> Placed:
        start, end = mark.start * self._scale, mark.end * self._scale
        away = _unit(mark.away)
        along = _unit(end - start, fallback=np.array([away[1], -away[0]]))
        square = np.array([-along[1], along[0]])
        square = square if square @ away > 0 else -square
        offset = self._clearance(start, end, away, along, square) + GAP * self._h
        half = self._half(text)
        for _ in range(_MOST_STEPS):
            line = np.stack([start + offset * away, end + offset * away])
            # As far beside the line as the text's own half extent in that direction.
            centre = line.mean(axis=0) + square * (np.abs(square) @ half + 0.15 * self._h)
            if not self._crowd(centre, text) and not self._crosses(line):
                break
            offset += _STEP * self._h
        reach = (offset + BEYOND * self._h) * away
        within = [min(way * self._scale, offset) * away for way in mark.within]
        lines = [(start + within[0], start + reach), (end + within[1], end + reach)]
        arrows = [(line[0], along), (line[1], -along)]
        if np.linalg.norm(end - start) < _ROOMY * ARROW * self._h:
            # From outside, where there is no room between the ends.
            arrows = [(line[0], -along), (line[1], along)]
            lines.append((line[0] - along * self._h, line[1] + along * self._h))
            centre = self._beside(lines[-1], along, text)
        else:
            lines.append((line[0], line[1]))
        return Placed(mark.name, text, np.array(lines), np.array(arrows), None, centre)

    def _beside(self, line: tuple[FloatArray, FloatArray], along: FloatArray, text: str) -> FloatArray:
        """Return the middle of a text at that end of a line where there is more room."""
        half = np.abs(along) @ self._half(text) + 0.2 * self._h
        choices = [
            end + way * (half + more * self._h)
            for more in TAILS_BESIDE for end, way in ((line[1], along), (line[0], -along))
        ]
        return choices[int(np.argmin([self._crowd(centre, text) for centre in choices]))]

    def _crosses(self, line: FloatArray) -> bool:
        """Tell whether a text lies on a dimension line."""
        along = line[0] + np.linspace(0, 1, 25)[:, None] * (line[1] - line[0])
        return any(bool((np.abs(along - centre) < half).all(axis=1).any()) for centre, half in self._boxes)

    def _clearance(
        self, start: FloatArray, end: FloatArray, away: FloatArray, along: FloatArray, square: FloatArray
    ) -> float:
        """Return how far along `away` the line has to go to be clear of everything between its ends."""
        from_start = self._taken - start
        place = from_start @ along
        # What stands obliquely: the ends move along the line as it goes away.
        lean = (away @ along) / (away @ square)
        place = place - lean * (from_start @ square)
        between = (place >= -0.3 * self._h) & (place <= np.linalg.norm(end - start) + 0.3 * self._h)
        highest = float((from_start[between] @ square).max(initial=0.0))
        return highest / float(away @ square)

    def _on_body(self, mark: FlatMark, text: str) -> Placed:
        """Place a radius, or a span on the body: an arrow from outside, the text at its tail."""
        start, end = mark.start * self._scale, mark.end * self._scale
        along = _unit(end - start, fallback=_unit(end, fallback=np.array([1.0, 0.0])))
        half = np.abs(along) @ self._half(text) + 0.1 * self._h
        choices = [
            (origin + way * tail * self._h, way) for tail in TAILS for origin, way in ((end, along), (start, -along))
        ]
        crowds = [self._crowd(tail + way * half, text) for tail, way in choices]
        tail, way = choices[int(np.argmin(crowds))]
        if mark.style == "radius":
            lines, arrows = [(tail, end)], [(end, along if way is along else -along)]
        else:
            other = (start if way is along else end) - way * self._h
            lines, arrows = [(tail, other)], [(start, -along), (end, along)]
        return Placed(mark.name, text, np.array(lines), np.array(arrows), None, tail + way * half)

    def _leader(self, mark: FlatMark, text: str) -> Placed:
        spot, away = mark.start * self._scale, _unit(mark.away, fallback=np.array([0.0, 1.0]))
        half = np.abs(away) @ self._half(text)
        for step in range(_MOST_STEPS):
            tail = spot + away * (1.0 + step * _STEP) * self._h
            centre = tail + away * (half + 0.1 * self._h)
            if not self._crowd(centre, text):
                break
        return Placed(mark.name, text, np.array([(spot, tail)]), np.zeros((0, 2, 2)), spot, centre)


def _unit(vector: FloatArray, fallback: FloatArray | None = None) -> FloatArray:
    length = float(np.linalg.norm(vector))
    if length <= _ALMOST:
        return fallback if fallback is not None else vector
    return np.asarray(vector / length)
