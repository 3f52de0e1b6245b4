"""A scene in which parts are dragged: it shows what the edited scene shows, and what stays is packed once."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from PySide6.QtGui import QImage

from app.window.view.batch import packed
from app.window.view.carried import carried
from app.window.view.opengl import VIEW_VARIABLE, prepare_opengl
from app.window.view.pane import ViewPane
from app.window.view.scene import SurfaceStore, scene_of
from core.assembly import Assembly
from core.assembly.placing import moved, standing_rows
from core.placement import Mirrored, Placement

CANVASES = [pytest.param("software", marks=pytest.mark.gui), pytest.param("opengl", marks=pytest.mark.opengl)]
FAR = (2000.0, -700.0, 300.0)


def full(bodies):
    return bodies.surface


def corners(pack, centre) -> np.ndarray:
    """Return all triangles (m, 9) of a packed scene in the document frame, in an order of their own."""
    found = []
    for batch in pack.batches:
        for placement in batch.placements:
            points = batch.vertices @ placement[:3, :3].T + placement[:3, 3] + centre
            found.append(points[batch.faces].reshape(-1, 9))
    triangles = np.concatenate(found)
    return triangles[np.lexsort(np.round(triangles, 4).T)]


MOTION = Placement.about([0.1, 0.2, 0.0], [1, 2, 3], 0.7)


@pytest.mark.parametrize("key", ["fixture", "plate", "dial"])
def test_what_is_dragged_stands_where_the_edit_will_put_it(make_dial, key):
    before = make_dial()
    after = moved(before, [key], MOTION)
    store = SurfaceStore()
    scene = scene_of(before, store)
    shown = carried(scene, standing_rows(after, key))
    expected = scene_of(after, store)
    assert shown.count == expected.count
    np.testing.assert_array_equal(shown.centre, scene.centre)
    one, other = corners(packed(shown, full), shown.centre), corners(packed(expected, full), expected.centre)
    np.testing.assert_allclose(np.sort(one, axis=0), np.sort(other, axis=0), rtol=0, atol=2e-6)
    lines, plain = packed(shown, full).lines, packed(expected, full).lines
    assert (len(lines.sharp), len(lines.rims)) == (len(plain.sharp), len(plain.rims))
    owners = [shown.everybody[at].key for at in lines.sharp_owner]
    assert sorted(owners) == sorted(expected.everybody[at].key for at in plain.sharp_owner)


def test_what_stays_is_packed_once_through_a_drag(dial):
    scene = scene_of(dial, SurfaceStore())
    packs = [
        packed(carried(scene, standing_rows(moved(dial, ["hub"], Placement(np.eye(3), [step, 0, 0])), "hub")), full)
        for step in (0.1, 0.2)
    ]
    assert packs[0].batches[0] is packs[1].batches[0]
    assert packs[0].batches[1] is not packs[1].batches[1]


def test_the_ball_around_the_scene_grows_with_what_is_dragged_away(dial):
    scene = scene_of(dial, SurfaceStore())
    away = carried(scene, standing_rows(moved(dial, ["hub"], Placement(np.eye(3), [7.0, 0, 0])), "hub"))
    assert away.radius > 6.5
    near = carried(scene, standing_rows(dial, "hub"))
    assert near.radius == scene.radius


def test_a_part_that_is_not_shown_carries_nothing(dial):
    scene = scene_of(dial, SurfaceStore())
    assert carried(scene, {"gone": Placement.identity()}) is scene


@pytest.fixture(params=CANVASES)
def pane(request, qtbot, monkeypatch):
    monkeypatch.setenv(VIEW_VARIABLE, request.param)
    prepare_opengl()
    made = ViewPane()
    made.resize(480, 360)
    qtbot.addWidget(made)
    made.show()
    qtbot.waitExposed(made)
    return made


def shot(pane, qtbot) -> np.ndarray:
    pane._overlay.setVisible(False)
    pane._redraw(moving=False)
    qtbot.wait(20)
    image = pane.grab().toImage().convertToFormat(QImage.Format.Format_RGB888)
    data = np.frombuffer(image.constBits(), dtype=np.uint8).reshape(image.height(), image.bytesPerLine())
    return data[:, : 3 * image.width()].reshape(image.height(), image.width(), 3).astype(int)


@pytest.mark.parametrize("at", [(0.0, 0.0, 0.0), FAR])
@pytest.mark.parametrize("key", ["fixture", "shaft"])
def test_the_picture_of_a_drag_is_that_of_the_edit(pane, qtbot, make_dial, key, at):
    before = make_dial(at)
    after = moved(before, [key], Placement.about(np.add(at, [0.05, 0, 0]), [1, 0, 1], 0.4))
    pane.show_assembly(before, frozenset({key}))
    pane.fit()
    pane._stays_fitted = False
    plain = shot(pane, qtbot)
    for share in (0.3, 1.0):
        step = Placement.about(np.add(at, [0.05, 0, 0]), [1, 0, 1], 0.4 * share)
        pane.show_carried(standing_rows(moved(before, [key], step), key))
        during = shot(pane, qtbot)
    pane.show_carried({})
    np.testing.assert_array_equal(shot(pane, qtbot), plain)
    pane.show_assembly(after, frozenset({key}))
    done = shot(pane, qtbot)
    assert (np.abs(during - plain).max(axis=-1) > 20).sum() > 100
    # Round-off of single precision about another middle turns some pixels along edges.
    assert (np.abs(during - done).max(axis=-1) > 20).mean() < 0.002


def test_a_mirror_image_is_dragged_with_its_outside_out(pane, qtbot, make_solid):
    cone = replace(make_solid("cone", "cone", 7000.0, (0.2, 0, 0), base_diameter=0.1, height=0.12), copies=Mirrored())
    before = Assembly("d", (cone,))
    after = moved(before, ["cone"], Placement(np.eye(3), [0.05, 0.0, 0.02]))
    pane.show_assembly(before)
    pane._stays_fitted = False
    pane.show_carried(standing_rows(after, "cone"))
    during = shot(pane, qtbot)
    pane.show_assembly(after)
    assert (np.abs(during - shot(pane, qtbot)).max(axis=-1) > 20).mean() < 0.002


@pytest.mark.opengl
def test_a_large_surface_keeps_its_buffers_through_a_drag(qtbot, make_solid, monkeypatch):
    from app.window.view import batch

    monkeypatch.setenv(VIEW_VARIABLE, "opengl")
    monkeypatch.setattr(batch, "LARGE", 10)
    prepare_opengl()
    pane = ViewPane()
    qtbot.addWidget(pane)
    pane.show()
    qtbot.waitExposed(pane)
    assembly = Assembly("d", (
        make_solid("a", "cylinder", 7000.0, diameter=0.1, length=0.1),
        make_solid("b", "cone", 7000.0, (0.3, 0, 0), base_diameter=0.1, height=0.12),
    ))
    pane.show_assembly(assembly)
    qtbot.wait(20)
    items = list(pane.canvas._items)
    for step in (0.1, 0.2):
        pane.show_carried(standing_rows(moved(assembly, ["a"], Placement(np.eye(3), [0, step, 0])), "a"))
        qtbot.wait(20)
        assert set(pane.canvas._items) == set(items)
