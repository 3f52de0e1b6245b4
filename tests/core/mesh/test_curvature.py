"""Restored curvature, against closed forms: it gains a great deal on rounds and leaves flats, prisms and bevels alone."""

from __future__ import annotations

from math import factorial
from typing import TYPE_CHECKING

import numpy as np
import pytest
from round_bodies import (
    RoundBody,
    cylinder,
    flat_bodies,
    half_sizes_of_error,
    polygon,
    polyhedra,
    prism,
    random_turn,
    round_bodies,
    shouldered_shaft,
    sphere,
    torus,
    turned,
)

from core.errors import Cancelled, ValueRefused
from core.mesh.curvature import Restored, restore, restore_triangles
from core.mesh.curvature.bent import FINE_RULE, GENTLE_RULE
from core.mesh.weld import weld_exactly
from core.progress import Progress

if TYPE_CHECKING:
    from core.moments import Moments

ROUND_OFF = 1e-11


def errors(found: Moments, exact: Moments) -> tuple[float, float]:
    """Return the relative errors of the volume and of the inertia tensor about the centre."""
    tensor = exact.inertia_about_centre
    off = np.abs(found.inertia_about_centre - tensor).max() / np.abs(tensor).max()
    return abs(float(found.mass / exact.mass) - 1), float(off)


@pytest.fixture(scope="module")
def measured() -> list[tuple[RoundBody, Restored]]:
    bodies = [body.placed(seed) for seed, body in enumerate(round_bodies())]
    return [(body, restore_triangles(body.triangles)) for body in bodies]


def test_the_exact_values_are_the_limit_of_finer_and_finer_meshes():
    # An inscribed mesh's error falls fourfold when its steps are halved; a wrong exact value would not let it.
    for name, coarse, fine in half_sizes_of_error(lambda body: errors(restore_triangles(body.triangles).faceted,
                                                                      body.exact)):
        assert coarse / fine == pytest.approx(4, rel=0.02), name


def test_the_median_error_falls_a_hundredfold(measured):
    gains = [np.divide(errors(r.faceted, body.exact), errors(r.moments, body.exact)) for body, r in measured]
    assert (np.median(gains, axis=0) > 100).all()


def test_no_round_body_is_worse_and_nine_in_ten_gain_twentyfold(measured):
    gains = {body.name: np.divide(errors(r.faceted, body.exact), errors(r.moments, body.exact)) for body, r in measured}
    assert {name for name, gain in gains.items() if (gain < 2).any()} == set()
    assert np.mean([(gain > 20).all() for gain in gains.values()]) > 0.9


def test_the_centre_is_nowhere_worse(measured):
    for body, found in measured:
        size = np.ptp(body.triangles.reshape(-1, 3), axis=0).max()
        off, before = (np.linalg.norm(m.centre - body.exact.centre) for m in (found.moments, found.faceted))
        assert off <= before + 1e-4 * size, body.name


def test_what_is_left_is_never_more_than_the_estimate_of_it_where_no_edge_was_kept_sharp(measured):
    sure = [(body, found) for body, found in measured if found.kept_sharp == 0]
    assert len(sure) > 80
    for body, found in sure:
        volume, inertia = errors(found.moments, body.exact)
        assert volume <= found.left.volume, body.name
        assert inertia <= found.left.inertia, body.name


def test_the_estimate_of_what_is_left_stays_well_below_the_correction_of_fine_meshes():
    found = restore_triangles(cylinder(48).triangles)
    assert found.left.volume < 0.05 * float(found.moments.mass / found.faceted.mass - 1)


def test_a_cylinder_in_twelve_facets_may_be_a_prism_and_the_estimate_says_so():
    found = restore_triangles(cylinder(12).triangles)
    assert found.left.volume > 0.95 * float(1 - found.faceted.mass / found.moments.mass)


@pytest.mark.parametrize("body", flat_bodies(), ids=lambda body: body.name)
def test_flat_faced_bodies_stay_exactly_as_they_are(body):
    for seed in range(3):
        found = restore_triangles(body.placed(seed).triangles)
        assert found.moments is found.faceted
        assert found.left.volume == found.left.inertia == 0
        assert found.smooth_edges == 0


@pytest.mark.parametrize(("name", "triangles"), polyhedra(), ids=lambda value: value if isinstance(value, str) else "")
def test_polyhedra_of_blunt_edges_stay_exactly_as_they_are(name, triangles):
    found = restore_triangles(triangles)
    assert found.moments is found.faceted, name


def test_a_turned_body_of_three_straight_tapers_keeps_its_two_ridges():
    # Each ridge turns by 20°, as a coarse arc would; but three facets between two creases make no arc.
    body = turned("barrel", polygon((0, 0), (10, 0), (13.6, 10), (13.6, 20), (10, 30), (0, 30)), 24)
    volume, inertia = errors(restore_triangles(body.triangles).moments, body.exact)
    assert volume < 1e-4
    assert inertia < 1e-4


def test_corners_of_a_hexagon_are_counted_as_kept_sharp():
    assert restore_triangles(prism(6).triangles).kept_sharp == 6


def test_lead_in_chamfers_and_cones_keep_their_creases():
    # The shaft's own rounds are restored; were its 30° chamfers rounded off, the volume would be off by 2e-3.
    body = shouldered_shaft(72, 12)
    volume, inertia = errors(restore_triangles(body.triangles).moments, body.exact)
    assert volume < 1e-6
    assert inertia < 1e-6


def test_a_box_stays_as_it_is_among_rounds():
    ball, box = sphere(24), flat_bodies()[0]
    away = box.triangles + np.array([100.0, 0, 0])
    together = restore_triangles(np.concatenate([ball.triangles, away]))
    apart = restore_triangles(ball.triangles).moments + restore_triangles(away).moments
    assert errors(together.moments, apart) == pytest.approx((0, 0), abs=ROUND_OFF)


def test_turning_and_shifting_the_mesh_turns_and_shifts_the_answer():
    body = torus(24)
    turn, shift = random_turn(np.random.default_rng(3)), np.array([40.0, -70.0, 900.0])
    moved = restore_triangles(body.triangles @ turn.T + shift).moments
    expected = restore_triangles(body.triangles).moments.mapped(turn, shift)
    assert errors(moved, expected) == pytest.approx((0, 0), abs=1e-9)
    assert moved.centre == pytest.approx(expected.centre, abs=1e-8)


def test_a_mesh_in_metres_gives_the_answer_in_metres():
    triangles = shouldered_shaft(24, 4).triangles
    small = restore_triangles(triangles / 1000).moments
    assert errors(small, restore_triangles(triangles).moments.enlarged(1e-3)) == pytest.approx((0, 0), abs=ROUND_OFF)


def test_the_order_of_facets_and_of_their_corners_does_not_matter():
    rng = np.random.default_rng(5)
    triangles = shouldered_shaft(24, 4).triangles
    mixed = triangles[rng.permutation(len(triangles))]
    for k in range(3):
        mixed[k::3] = np.roll(mixed[k::3], k, axis=1)
    found, expected = restore_triangles(mixed), restore_triangles(triangles)
    assert errors(found.moments, expected.moments) == pytest.approx((0, 0), abs=1e-9)
    assert found.left.volume == pytest.approx(expected.left.volume, rel=1e-6)


def test_a_mesh_inside_out_gives_the_negative_of_the_same_body():
    triangles = torus(24).triangles
    outside, inside = restore_triangles(triangles).moments, restore_triangles(triangles[:, ::-1]).moments
    assert float(inside.mass) == pytest.approx(-float(outside.mass), rel=1e-9)
    assert inside.spread == pytest.approx(-outside.spread, rel=1e-9, abs=1e-6)


def test_a_mirrored_mesh_gives_the_mirrored_body():
    triangles = shouldered_shaft(24, 4).triangles
    mirror = np.diag([1.0, 1.0, -1.0])
    found = restore_triangles(triangles[:, ::-1] @ mirror).moments
    expected = restore_triangles(triangles).moments.mapped(mirror, np.zeros(3))
    assert errors(found, expected) == pytest.approx((0, 0), abs=1e-9)


def test_corners_rounded_to_single_precision_gain_as_much():
    for body in (cylinder(120), torus(48), shouldered_shaft(48, 8)):
        stored = body.placed(1).as_stored()
        found = restore_triangles(stored.triangles)
        gain = np.divide(errors(found.faceted, stored.exact), errors(found.moments, stored.exact))
        assert (gain > 50).all(), body.name


def test_welding_joins_equal_points_and_no_others_and_takes_minus_zero_for_zero():
    rng = np.random.default_rng(4)
    distinct = rng.integers(-3, 4, (134, 3, 3)) * 0.5
    points, index = weld_exactly(np.where((distinct == 0) & (rng.random(distinct.shape) < 0.5), -0.0, distinct))
    assert (points[index] == distinct).all()
    assert len(points) == len(np.unique(distinct.reshape(-1, 3), axis=0))


def test_an_unmatched_edge_counts_as_a_crease_and_nothing_moves_there():
    open_mesh = cylinder(24).triangles[:-1]
    assert np.isfinite(restore_triangles(open_mesh).moments.spread).all()


def test_triangles_without_area_do_no_harm():
    body = cylinder(24)
    a, b = body.triangles[0, 0], body.triangles[0, 1]
    sliver = np.array([[a, b, b], [b, a, a]])
    found = restore_triangles(np.concatenate([body.triangles, sliver]))
    assert errors(found.moments, restore_triangles(body.triangles).moments) == pytest.approx((0, 0), abs=1e-3)


@pytest.mark.parametrize(("rule", "degree"), [(FINE_RULE, 6), (GENTLE_RULE, 4)], ids=["fine", "gentle"])
def test_the_quadrature_rules_are_exact_for_every_monomial_up_to_their_degree(rule, degree):
    nodes, weights = np.array([node for node, _ in rule]), np.array([weight for _, weight in rule])
    for i in range(degree + 1):
        for j in range(degree + 1 - i):
            exact = factorial(i) * factorial(j) / factorial(i + j + 2)
            assert weights @ (nodes[:, 1] ** i * nodes[:, 2] ** j) == pytest.approx(exact, abs=1e-14)


def test_a_mesh_of_another_shape_is_refused():
    with pytest.raises(ValueRefused, match="a mesh needs triangles of three points; read an array of shape"):
        restore_triangles(np.zeros((4, 3)))
    with pytest.raises(ValueRefused, match=r"a mesh needs points \(n, 3\) and corners \(m, 3\); read shapes"):
        restore(np.zeros((4, 2)), np.zeros((1, 3)))


def test_a_mesh_without_triangles_or_volume_or_numbers_is_refused():
    with pytest.raises(ValueRefused, match="the mesh is empty"):
        restore(np.zeros((4, 3)), np.zeros((0, 3)))
    with pytest.raises(ValueRefused, match="a triangle names a point that is not there; read index 7"):
        restore(np.zeros((4, 3)), [[0, 1, 7]])
    with pytest.raises(ValueRefused, match="a coordinate is not a finite number"):
        restore([[0, 0, 0], [1, 0, np.nan], [0, 1, 0]], [[0, 1, 2]])
    with pytest.raises(ValueRefused, match="the mesh encloses no volume"):
        restore([[0, 0, 0], [1, 0, 0], [0, 1, 0]], [[0, 1, 2], [0, 2, 1]])


def test_progress_counts_to_its_end_and_a_cancelled_one_stops_the_work():
    progress = Progress("restoring")
    restore_triangles(torus(24).triangles, progress)
    assert progress.fraction == 1
    progress.cancel()
    with pytest.raises(Cancelled, match="restoring was stopped"):
        restore_triangles(torus(24).triangles, progress)
