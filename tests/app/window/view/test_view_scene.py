"""The scene of an assembly: what is in it, where, and how it is packed."""

from __future__ import annotations

import gc
from dataclasses import replace

import numpy as np
import pytest

from app.window.view.batch import LARGE, Emphasis, face_colours, line_ranks, packed
from app.window.view.camera import Camera
from app.window.view.palette import BLUE, DARK, LIGHT, contrast
from app.window.view.scene import SurfaceStore, scene_of
from core.assembly import Assembly
from core.facets import Facets
from core.placement import Pose

THEMES = {"light": LIGHT, "dark": DARK}


def full(bodies):
    return bodies.surface


def test_every_part_is_there_with_all_its_copies(dial):
    scene = scene_of(dial, SurfaceStore())
    assert {bodies.key: len(bodies.shift) for bodies in scene.bodies} == {
        "plate": 1, "hub": 1, "fixture": 6, "bolt": 12, "shaft": 1, "rotor": 1,
    }


def test_an_empty_assembly_has_nothing_to_draw_but_something_to_look_at():
    scene = scene_of(Assembly(), SurfaceStore())
    assert (scene.bodies, scene.axis, scene.mass_centre, scene.principal) == ((), None, None, ())
    assert scene.radius > 0


def test_the_bounds_are_those_of_the_assembly(dial):
    np.testing.assert_allclose(scene_of(dial, SurfaceStore()).bounds, dial.bounds, rtol=1e-12)


def test_the_axis_passes_beyond_everything_that_turns_about_it(make_dial):
    assembly = make_dial((3.0, 1.0, -2.0), (0.3, 0.5, 0.1))
    scene = scene_of(assembly, SurfaceStore())
    axis = assembly.drive_axis
    along = (scene.fit_points - np.array(axis.point)) @ axis.unit
    ends = [(end - np.array(axis.point)) @ axis.unit for end in (scene.axis.start, scene.axis.end)]
    assert ends[0] <= along.min() + 1e-12
    assert ends[1] >= along.max() - 1e-12
    assert np.linalg.norm(np.cross(scene.axis.start - np.array(axis.point), axis.unit)) < 1e-12


def test_the_arrows_are_as_long_as_the_radii_of_gyration(dial):
    scene, total = scene_of(dial, SurfaceStore()), dial.total
    lengths = [np.linalg.norm(arrow.end - arrow.start) for arrow in scene.principal]
    np.testing.assert_allclose(lengths, np.sqrt(total.principal.moments / total.mass), rtol=1e-12)
    np.testing.assert_allclose(scene.principal[0].start, total.centre)


def test_arrows_of_equal_moments_say_so(dial):
    assert [arrow.name for arrow in scene_of(dial, SurfaceStore()).principal] == ["1=2", "1=2", "3"]


def test_arrows_of_a_box_are_numbered(make_solid):
    box = make_solid("box", "box", 1000.0, length_x=0.1, length_y=0.2, length_z=0.3)
    names = [arrow.name for arrow in scene_of(Assembly("one", (box,)), SurfaceStore()).principal]
    assert names == ["1", "2", "3"]


def test_a_surface_is_made_ready_once(dial):
    store = SurfaceStore()
    first, second = scene_of(dial, store), scene_of(dial, store)
    assert all(one.surface is two.surface for one, two in zip(first.bodies, second.bodies, strict=True))


def test_a_surface_is_forgotten_with_the_facets_that_it_was_made_from():
    store = SurfaceStore()
    facets = Facets(np.eye(3), [[0, 1, 2]])
    store.of(facets)
    assert len(store._kept) == 1
    del facets
    gc.collect()
    assert len(store._kept) == 0


def test_an_edit_leaves_the_bodies_of_all_other_parts_as_they_are(dial):
    store = SurfaceStore()
    first = scene_of(dial, store)
    (group,) = dial.members
    members = list(group.members)
    members[4] = replace(members[4], pose=Pose((0.0, 0.0, -0.13)))
    edited = replace(dial, members=(replace(group, members=tuple(members)),))
    second = scene_of(edited, store, before=first)
    assert [one is two for one, two in zip(first.bodies, second.bodies, strict=True)] == [
        key != "shaft" for key in ("plate", "hub", "fixture", "bolt", "shaft", "rotor")
    ]
    again = scene_of(edited, SurfaceStore())
    np.testing.assert_array_equal(second.bounds, again.bounds)
    one, two = packed(second, full).batches[0], packed(again, full).batches[0]
    np.testing.assert_array_equal(one.vertices, two.vertices)
    np.testing.assert_array_equal(one.faces, two.faces)


def test_parts_of_one_material_share_a_tint(dial):
    tints = [bodies.tint for bodies in scene_of(dial, SurfaceStore()).bodies]
    assert tints == list(range(6))


def test_a_packed_scene_holds_every_triangle_where_it_stands(make_dial):
    scene = scene_of(make_dial((50.0, -20.0, 10.0), (0.4, 0.0, 1.0)), SurfaceStore())
    pack = packed(scene, full)
    assert pack.count == scene.count
    vertices = np.concatenate([batch.vertices for batch in pack.batches]).astype(float) + scene.centre
    np.testing.assert_allclose(
        [vertices.min(axis=0), vertices.max(axis=0)],
        [scene.fit_points[:-8].min(axis=0), scene.fit_points[:-8].max(axis=0)], atol=1e-6,
    )


def test_a_mirror_image_is_packed_with_its_outside_out(mirrored_pair):
    scene = scene_of(mirrored_pair, SurfaceStore())
    (batch,) = packed(scene, full).batches
    a, b, c = (batch.vertices[batch.faces[:, i]].astype(float) for i in range(3))
    volume = np.einsum("ij,ij->i", a, np.cross(b, c)).sum() / 6
    expected = sum(part.volume * part.copies.count for part in mirrored_pair.table.parts)
    assert volume == pytest.approx(expected, rel=0.01)


def test_a_large_surface_is_kept_once_for_all_its_copies(make_solid):
    from core.placement import Row

    part = make_solid("ball", "sphere", 1000.0, copies=Row(4, (0.2, 0, 0)), diameter=0.1)
    fine = part.body.shape.facets(steps=320)
    object.__setattr__(part.body, "surface", fine)  # the cached surface, made finer
    scene = scene_of(Assembly("balls", (part,)), SurfaceStore())
    (batch,) = packed(scene, full).batches
    assert scene.bodies[0].surface.count > LARGE
    assert len(batch.placements) == 4
    assert packed(scene, full).count == scene.count


def test_rims_are_the_edges_where_a_cylinder_turns_away(make_solid):
    part = make_solid("bar", "cylinder", 1000.0, diameter=0.1, length=0.3)
    scene = scene_of(Assembly("bar", (part,)), SurfaceStore())
    lines = packed(scene, full).lines
    for parallel in (True, False):
        camera = Camera(scene.centre, 2.0, azimuth=0.37, elevation=0.2, parallel=parallel)
        seen = lines.rims[lines.rims_seen(camera, scene.centre)]
        assert len(seen) == 2
        # Seen from far away, a rim's radius is square to the direction of view.
        radii = seen[:, 0, :2] + scene.centre[:2]
        across = radii / np.linalg.norm(radii, axis=1)[:, None]
        assert np.abs(across @ camera.axes[2, :2]).max() < 0.15


def test_what_is_selected_differs_in_colour_and_in_line(dial):
    scene = scene_of(dial, SurfaceStore())
    plain, chosen = Emphasis(), Emphasis(frozenset({"fixture"}), "hub")
    changed = (face_colours(scene, plain, LIGHT) != face_colours(scene, chosen, LIGHT)).any(axis=1)
    assert [bodies.key for bodies, differs in zip(scene.bodies, changed, strict=True) if differs] == ["hub", "fixture"]
    assert line_ranks(scene, chosen).tolist() == [0, 1, 2, 0, 0, 0]


@pytest.mark.parametrize("name", THEMES)
def test_text_and_marks_stand_out_from_their_ground(name):
    theme = THEMES[name]
    for colour in (theme.text, theme.drive, theme.principal, theme.selected_edge, theme.vector):
        assert contrast(colour, theme.ground) >= 4.5
    for colour in (*theme.parts, theme.selected):
        assert contrast(colour, theme.edge) >= 3.0


def test_the_contrast_of_black_and_white_is_twenty_one():
    assert contrast((0, 0, 0), (255, 255, 255)) == pytest.approx(21)
    assert contrast(BLUE, (255, 255, 255)) == pytest.approx(5.19, abs=0.02)
