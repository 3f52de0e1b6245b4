"""How long the view takes: a frame with each canvas, making a surface ready, picking, and what an edit costs.

Run with --benchmark-only. The OpenGL figures need a display (Xvfb with software Mesa will do).
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from app.window.view.batch import packed
from app.window.view.camera import Camera
from app.window.view.carried import carried
from app.window.view.opengl import VIEW_VARIABLE, prepare_opengl
from app.window.view.picking import pick
from app.window.view.scene import SurfaceStore, scene_of
from app.window.view.surface import lighter, surface_of
from core.assembly import Assembly, Part, ShapeBody
from core.assembly.placing import moved, standing_rows
from core.facets import Facets
from core.material import ByDensity
from core.placement import Placement, Pose, Row
from core.shapes import SHAPES

COUNTS = [10_000, 100_000, 500_000]


def lumpy(count: int) -> Facets:
    """Return a closed, wavy ball of about so many triangles."""
    steps = round(np.sqrt(count / 2) * 2 / 4) * 4
    ball = SHAPES["sphere"].of({"diameter": 0.2}).facets(steps)
    waves = 1 + 0.05 * np.sin(60 * ball.points).sum(axis=1, keepdims=True)
    return Facets(ball.points * waves, ball.corners)


def one_part(facets: Facets) -> Assembly:
    body = ShapeBody(SHAPES["sphere"].of({"diameter": 0.2}))
    object.__setattr__(body, "surface", facets)
    return Assembly("ball", (Part("ball", "ball", body, ByDensity(1000.0)),))


def many_parts(count: int) -> Assembly:
    """Return an assembly of so many parts, each a bar of its own dimensions."""
    members = tuple(
        Part(
            f"p{i}", f"p{i}", ShapeBody(SHAPES["cylinder"].of({"diameter": 0.01 + 1e-5 * i, "length": 0.03})),
            ByDensity(7850.0), Pose((0.05 * (i % 32), 0.05 * (i // 32), 0.0)),
        )
        for i in range(count)
    )
    return Assembly("many", members)


@pytest.fixture(params=["software", "opengl"])
def pane(request, qtbot, monkeypatch):
    from app.window.view.pane import ViewPane
    from app.window.view.soft_view import SoftView

    monkeypatch.setenv(VIEW_VARIABLE, request.param)
    prepare_opengl()
    made = ViewPane()
    if (request.param == "software") != isinstance(made.canvas, SoftView):
        qtbot.addWidget(made)
        pytest.skip("no OpenGL here")
    made.resize(640, 480)
    qtbot.addWidget(made)
    made.show()
    qtbot.waitExposed(made)
    return made


def draw_a_frame(pane, *, moving: bool) -> None:
    """Turn the camera a little and draw to the end."""
    pane._move_to(pane.camera.orbited(0.03, 0.0), moving=moving)
    pane._rest.stop()
    if not hasattr(pane.canvas, "makeCurrent"):
        pane.canvas.repaint()
        return
    from OpenGL import GL

    pane.canvas.makeCurrent()
    pane.canvas.paintGL()
    GL.glFinish()
    pane.canvas.doneCurrent()


@pytest.mark.parametrize("moving", [False, True], ids=["at rest", "moving"])
@pytest.mark.parametrize("count", COUNTS)
def test_a_frame(pane, qtbot, benchmark, count, moving):
    pane.show_assembly(one_part(lumpy(count)))
    qtbot.wait(50)

    def frame():
        draw_a_frame(pane, moving=moving)

    frame()
    benchmark.pedantic(frame, rounds=5, warmup_rounds=1)


@pytest.mark.parametrize("count", [1000])
def test_a_frame_of_many_parts(pane, qtbot, benchmark, count):
    pane.show_assembly(many_parts(count))
    qtbot.wait(50)

    def frame():
        draw_a_frame(pane, moving=True)

    benchmark.pedantic(frame, rounds=5, warmup_rounds=1)


@pytest.mark.parametrize("count", COUNTS)
def test_making_a_surface_ready(benchmark, count):
    facets = lumpy(count)
    benchmark.pedantic(lambda: surface_of(facets), rounds=2)


@pytest.mark.parametrize("count", [300_000])
def test_making_a_lighter_surface(benchmark, count):
    surface = surface_of(lumpy(count))
    benchmark.pedantic(lambda: lighter(surface), rounds=3)


@pytest.mark.parametrize("count", [300_000])
def test_picking(benchmark, count):
    scene = scene_of(one_part(lumpy(count)), SurfaceStore())
    camera = Camera(np.zeros(3)).fitted(scene.fit_points, (640.0, 480.0), 20)
    hit = benchmark.pedantic(lambda: pick(scene, *camera.ray((330, 250), (640.0, 480.0))), rounds=10, warmup_rounds=1)
    assert hit.key == "ball"


def test_an_edit_in_an_assembly_of_a_thousand_parts(benchmark):
    """One part of a thousand moves; everything is packed anew."""
    assembly, store = many_parts(1000), SurfaceStore()
    scenes = [scene_of(assembly, store)]
    packed(scenes[0], lambda bodies: bodies.surface)

    def edited():
        members = list(assembly.members)
        members[500] = replace(members[500], pose=Pose((0.0, 0.0, 0.01 * len(scenes))))
        changed = Assembly("many", tuple(members))
        assert changed.total.mass > 0  # worked out beforehand: it is the ledger's time, not the view's
        return (changed,), {}

    def shown_again(changed):
        scenes.append(scene_of(changed, store, before=scenes[-1]))
        return packed(scenes[-1], lambda bodies: bodies.surface)

    benchmark.pedantic(shown_again, setup=edited, rounds=5)


@pytest.mark.parametrize("count", [10, 100, 1000, 10_000])
def test_a_step_of_a_drag_among_many_parts(benchmark, count):
    """One part of many follows the pointer: moved in the document, and shown; what stays was packed by the first step."""
    assembly = many_parts(count)
    scene = scene_of(assembly, SurfaceStore())
    steps = iter(range(1, 1000))

    def step():
        after = moved(assembly, ["p5"], Placement(np.eye(3), [0.0, 0.0, 0.001 * next(steps)]))
        return packed(carried(scene, standing_rows(after, "p5")), own_surface)

    assert benchmark.pedantic(step, rounds=10, warmup_rounds=1).count == scene.count


def own_surface(bodies):
    return bodies.surface


def test_picking_among_a_thousand_copies(benchmark):
    part = Part(
        "bolt", "bolt", ShapeBody(SHAPES["cylinder"].of({"diameter": 0.01, "length": 0.03})), ByDensity(7850.0),
        copies=Row(1000, (0.02, 0.0, 0.0)),
    )
    scene = scene_of(Assembly("row", (part,)), SurfaceStore())
    camera = Camera(np.zeros(3)).fitted(scene.fit_points, (640.0, 480.0), 20)
    spot = camera.project([10.0, 0.0, 0.03], (640.0, 480.0))
    hit = benchmark.pedantic(lambda: pick(scene, *camera.ray((spot[0], spot[1]), (640.0, 480.0))), rounds=10)
    assert (hit.key, hit.copy) == ("bolt", 500)
