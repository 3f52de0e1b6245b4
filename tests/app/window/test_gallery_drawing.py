"""The pictures of the gallery as lines: what is seen, what is hidden, and where the dimensions stand."""

from __future__ import annotations

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from app.window.gallery.dimensioning import laid_out
from app.window.gallery.drawing import RIGHT, UP, drawing_of, flat, shortened
from core.shapes import SHAPES, Box, Cylinder, ISection, ThinRod

every_key = pytest.mark.parametrize("key", sorted(SHAPES))
HEIGHT = 11.0


def width_of(text: str) -> float:
    return 0.6 * HEIGHT * len(text)


def symbols(key: str) -> dict[str, str]:
    return {one.name: one.symbol for one in SHAPES[key].dimensions}


def layout(key: str, side: float = 128.0):
    return laid_out(drawing_of(SHAPES[key].of({})), symbols(key), (side, side), HEIGHT, width_of)


def total(pieces) -> float:
    return float(np.linalg.norm(pieces[:, 1] - pieces[:, 0], axis=1).sum())


def test_of_a_box_nine_edges_are_seen_and_three_are_hidden():
    drawing = drawing_of(Box(0.1, 0.06, 0.04))
    assert len(drawing.seen) == 9
    assert len(drawing.hidden) == 3


def test_of_a_cylinder_half_the_lower_rim_is_hidden():
    # Isometric: a circle lying flat is an ellipse as wide as its diameter and 1/√3 as high.
    drawing = drawing_of(Cylinder(0.08, 0.1))
    ellipse = total(drawing.seen) - 2 * 0.1 * (2 / 3) ** 0.5
    assert total(drawing.hidden) / ellipse == pytest.approx(1 / 3, abs=0.02)


@pytest.mark.parametrize("key", ["sphere", "ellipsoid", "spherical shell"])
def test_a_round_body_shows_its_outline_and_a_belt(key):
    drawing = drawing_of(SHAPES[key].of({}))
    assert len(drawing.seen) >= 48
    assert len(drawing.soft) >= 8


def test_the_outline_of_a_sphere_is_a_circle_of_its_diameter():
    drawing = drawing_of(SHAPES["sphere"].of({"diameter": 0.06}))
    radius = np.linalg.norm(drawing.seen.reshape(-1, 2), axis=1)
    np.testing.assert_allclose(radius, 0.03, rtol=0.01)


@every_key
def test_every_picture_has_lines_and_a_place_for_each_dimension(key):
    drawing = drawing_of(SHAPES[key].of({}))
    assert len(drawing.seen)
    assert {mark.name for mark in drawing.marks} == set(symbols(key))
    for pieces in (drawing.seen, drawing.hidden, drawing.soft, drawing.faces):
        assert np.isfinite(pieces).all()


@every_key
@pytest.mark.parametrize("side", [112.0, 192.0])
def test_lines_and_symbols_stay_within_the_picture_and_symbols_clear_of_each_other(key, side):
    placed = layout(key, side)
    room = side / 2 + 1.5
    assert {one.name for one in placed.placed} == set(symbols(key))
    drawing = drawing_of(SHAPES[key].of({}))
    body = drawing.spots * placed.scale + placed.shift
    assert np.abs(body).max() <= room
    boxes = []
    for one in placed.placed:
        half = np.array([width_of(one.text), HEIGHT]) / 2
        centre = one.centre + placed.shift
        assert np.all(np.abs(centre) + half <= room), one.name
        assert np.all(np.abs(one.lines + placed.shift) <= room), one.name
        boxes.append((centre, half))
    for at, (centre, half) in enumerate(boxes):
        for other, more in boxes[:at]:
            assert np.any(np.abs(centre - other) >= 0.8 * (half + more)), key


def test_arrows_stand_at_the_ends_of_what_they_measure():
    placed = {one.name: one for one in layout("box").placed}
    scale = layout("box").scale
    for name, length in (("length_x", 0.1), ("length_y", 0.06), ("length_z", 0.04)):
        tips = placed[name].arrows[:, 0]
        direction = {"length_x": [1, 0, 0], "length_y": [0, 1, 0], "length_z": [0, 0, 1]}[name]
        drawn = np.linalg.norm(flat(length * np.array(direction, float))) * scale
        assert np.linalg.norm(tips[1] - tips[0]) == pytest.approx(drawn, rel=1e-9)


def test_the_plane_of_the_picture_is_isometric():
    axes = flat(np.eye(3))
    np.testing.assert_allclose(np.linalg.norm(axes, axis=1), (2 / 3) ** 0.5)
    assert float(RIGHT @ UP) == pytest.approx(0, abs=1e-15)


def test_a_long_bar_is_drawn_shorter_and_a_thin_rod_is_not():
    bar = ISection.of({"length": 6.0})
    drawn = shortened(bar)
    assert drawn.values()["length"] == pytest.approx(1.5 * 0.1)
    assert {**drawn.values(), "length": 6.0} == bar.values()
    assert shortened(ThinRod(3.0)) == ThinRod(3.0)


def test_the_same_shape_is_drawn_once():
    assert drawing_of(Box(0.1, 0.06, 0.04)) is drawing_of(Box(0.1, 0.06, 0.04))
