"""Verdict and numbers of one look at a mesh."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mesh_files import ascii_stl, binary_stl, box, hull, quartered
from oracles import assert_same_body
from strategies import placements

from core.errors import MeshFileError, ValueRefused
from core.mesh import survey_file, survey_triangles
from core.moments import Moments

SIDES = np.array([40.0, 30.0, 20.0])
BOX = box(*SIDES)
MIDDLE = SIDES / 2
VOLUME, AREA, DIAGONAL = 24_000.0, 5_200.0, np.sqrt(2900)


def exact_box(sides=SIDES, middle=MIDDLE, density=1.0) -> Moments:
    mass = density * np.prod(sides)
    return Moments(mass, middle, mass * np.diag(np.square(sides)) / 12)


def test_a_closed_box_is_computed_and_exact(tmp_path):
    path = tmp_path / "box.stl"
    path.write_bytes(binary_stl(BOX))
    survey = survey_file(path)
    assert (survey.verdict, survey.closed, survey.open_edges, survey.basis) == ("closed", True, 0, "computed")
    assert (survey.triangles, survey.format, survey.degenerate, survey.notes) == (12, "binary STL", 0, ())
    assert survey.area == pytest.approx(AREA, rel=1e-15)
    np.testing.assert_array_equal(survey.bounds, [[0, 0, 0], SIDES])
    assert survey.diagonal == pytest.approx(DIAGONAL, rel=1e-15)
    assert_same_body(survey.solid, exact_box(), rel=1e-15)


def test_text_and_binary_files_of_one_mesh_tell_the_same(tmp_path):
    (tmp_path / "a.stl").write_bytes(binary_stl(quartered(BOX, 3)))
    (tmp_path / "b.stl").write_text(ascii_stl(quartered(BOX, 3)))
    binary, text = survey_file(tmp_path / "a.stl"), survey_file(tmp_path / "b.stl")
    assert (text.format, text.verdict, text.triangles) == ("ASCII STL", "closed", binary.triangles)
    assert_same_body(text.solid, binary.solid, rel=1e-14)


@given(placements(), st.floats(0.1, 20.0))
def test_a_turned_shifted_box_of_any_density_has_the_box_moments(placement, density):
    survey = survey_triangles(placement.apply(BOX))
    expected = placement.place(exact_box(density=density))
    assert_same_body(survey.solid.times(density), expected, rel=1e-13)


@pytest.mark.parametrize("offset", [1e3, 1e5, 1e6])
def test_a_box_far_from_the_origin_keeps_its_own_inertia(offset):
    # Doubles hold whole numbers of this size exactly, so nothing but the kernel could lose digits.
    far = np.array([offset, -2 * offset, 3 * offset])
    survey = survey_triangles(quartered(BOX) + far)
    assert_same_body(survey.solid.mapped(np.eye(3), -far), exact_box(), rel=1e-12, size=SIDES.max())


def test_cutting_facets_finer_changes_nothing():
    assert_same_body(survey_triangles(quartered(BOX, 6)).solid, exact_box(), rel=1e-13)


@given(st.integers(0, 2**32 - 1))
def test_the_order_of_facets_and_corners_changes_nothing(seed):
    rng = np.random.default_rng(seed)
    triangles = hull(rng.normal(size=(40, 3)))
    mixed = rng.permutation(triangles)
    mixed[::2] = np.roll(mixed[::2], 1, axis=1)
    assert_same_body(survey_triangles(mixed).solid, survey_triangles(triangles).solid, rel=1e-13)


@given(st.integers(0, 2**32 - 1))
def test_a_hull_cut_into_pyramids_adds_up_to_the_whole(seed):
    rng = np.random.default_rng(seed)
    points = rng.normal(size=(12, 3))
    triangles = hull(points)
    apex = triangles.reshape(-1, 3).mean(axis=0)
    whole = survey_triangles(triangles).solid
    cones = [survey_triangles(_cone(triangle, apex)).solid for triangle in triangles]
    total = Moments(
        np.stack([cone.mass for cone in cones]), np.stack([cone.centre for cone in cones]),
        np.stack([cone.spread for cone in cones]),
    ).total()
    assert_same_body(total, whole, rel=1e-12)


def _cone(triangle, apex):
    a, b, c = triangle
    return np.array([[a, b, c], [b, a, apex], [c, b, apex], [a, c, apex]])


@given(st.integers(0, 2**32 - 1))
def test_an_inside_out_mesh_is_turned_and_says_so(seed):
    triangles = hull(np.random.default_rng(seed).normal(size=(20, 3)))
    survey = survey_triangles(triangles[:, ::-1])
    assert (survey.verdict, survey.closed, survey.basis) == ("inside out", True, "computed")
    assert survey.notes == ("The facets faced inwards; they were turned to face outwards.",)
    assert_same_body(survey.solid, survey_triangles(triangles).solid, rel=1e-13)


def test_a_void_with_inward_facets_is_taken_away():
    hollow = np.concatenate([BOX, box(10, 10, 10, at=(5, 5, 5))[:, ::-1]])
    expected = exact_box() - exact_box(np.full(3, 10.0), np.full(3, 10.0))
    assert survey_triangles(hollow).verdict == "closed"
    assert_same_body(survey_triangles(hollow).solid, expected, rel=1e-14)


def test_facets_without_area_are_counted_and_change_nothing():
    needles = np.array([[[0, 0, 0], [40, 0, 0], [0, 0, 0]], [[7, 7, 7]] * 3], dtype=float)
    survey = survey_triangles(np.concatenate([BOX, needles]))
    assert (survey.triangles, survey.degenerate, survey.verdict) == (14, 2, "closed")
    assert_same_body(survey.solid, exact_box(), rel=1e-15)


def test_facets_with_coinciding_corners_count_as_without_area_wherever_they_coincide():
    a, b = np.array([0.1, 0.7, 0.3]), np.array([1 / 3, -2 / 7, 5 / 11])
    for needle in ([a, a, b], [a, b, a], [b, a, a]):
        assert survey_triangles(np.concatenate([BOX, [needle]])).degenerate == 1


@pytest.mark.parametrize("shift", [0.0, 100.0, 1e5])
def test_a_missing_flat_piece_is_closed_flat_wherever_the_part_stands(shift):
    # Both facets of the top are gone: a raw sum shifted by 100 gives −48000 in place of 24000.
    triangles = BOX[~(BOX[..., 2] == 20).all(axis=1)] + shift
    survey = survey_triangles(triangles)
    assert (survey.verdict, survey.closed, survey.open_edges) == ("open", False, 4)
    assert survey.basis == "estimated: holes closed flat"
    assert survey.area == pytest.approx(AREA - 1200, rel=1e-14)
    assert_same_body(survey.solid.mapped(np.eye(3), np.full(3, -shift)), exact_box(), rel=1e-11, size=40)


def test_several_holes_that_touch_are_closed_flat():
    triangles = quartered(BOX, 3)
    top = np.flatnonzero((triangles[..., 2] == 20).all(axis=1))
    survey = survey_triangles(np.delete(triangles, top[::3], axis=0))
    assert survey.verdict == "open"
    assert_same_body(survey.solid, exact_box(), rel=1e-13)


def test_an_open_mesh_that_faces_inwards_is_turned_and_says_so():
    survey = survey_triangles(BOX[1:, ::-1])
    assert (survey.verdict, len(survey.notes)) == ("open", 1)
    assert_same_body(survey.solid, exact_box(), rel=1e-14)


def test_mixed_winding_gives_no_number():
    triangles = quartered(BOX)
    triangles[7] = triangles[7, ::-1]
    survey = survey_triangles(triangles)
    assert (survey.verdict, survey.closed, survey.open_edges, survey.solid) == ("mixed winding", False, 6, None)
    assert survey.basis == "no volume: facets wind both ways"
    assert survey.area == pytest.approx(AREA, rel=1e-14)


def test_edges_on_which_several_facets_end_give_no_number():
    fins = np.array([[[0, 0, 20], [40, 0, 20], [20, -9, 30]], [[0, 0, 20], [40, 0, 20], [20, -9, 40]]], dtype=float)
    survey = survey_triangles(np.concatenate([BOX, fins]))
    assert (survey.verdict, survey.solid) == ("open", None)
    assert survey.basis == "no volume: open edges on which several facets end"


def test_a_flat_plate_seen_from_both_sides_is_closed_and_has_no_volume():
    plate = BOX[(BOX[..., 2] == 20).all(axis=1)]
    survey = survey_triangles(np.concatenate([plate, plate[:, ::-1]]))
    assert (survey.verdict, survey.closed, survey.solid) == ("closed", True, None)
    assert survey.basis == "no volume: the facets enclose none"
    assert survey.area == pytest.approx(2400, rel=1e-15)


def test_a_single_facet_closed_flat_encloses_nothing():
    survey = survey_triangles(BOX[:1])
    assert (survey.verdict, survey.open_edges, survey.solid) == ("open", 3, None)
    assert survey.basis == "no volume: the facets enclose none"


@pytest.mark.parametrize("seed", range(5))
def test_hairline_cracks_are_answered_within_their_bounds(seed):
    # Every facet's corners are rounded on their own, as an exporter of single facets may do.
    rng = np.random.default_rng(seed)
    triangles = quartered(BOX, 2)
    rounded = triangles + rng.uniform(-1, 1, triangles.shape) * 1e-7 * DIAGONAL
    survey = survey_triangles(rounded)
    assert (survey.verdict, survey.closed, survey.basis) == ("hairline cracks", False, "computed")
    assert survey.open_edges > 0
    exact = exact_box()
    assert abs(survey.solid.mass - exact.mass) <= survey.crack_volume
    assert np.linalg.norm(survey.solid.centre - exact.centre) <= survey.crack_centre
    worst = np.abs(np.linalg.eigvalsh(survey.solid.inertia_about_centre - exact.inertia_about_centre)).max()
    assert worst <= survey.crack_inertia
    # The bounds say something: they are a few millionths of the values.
    assert survey.crack_volume < 1e-5 * VOLUME
    assert survey.crack_centre < 1e-5 * DIAGONAL
    assert survey.crack_inertia < 1e-5 * VOLUME * DIAGONAL**2


def test_sewn_cracks_give_the_same_numbers_wherever_the_part_stands():
    rng = np.random.default_rng(1)
    rounded = quartered(BOX, 2) + rng.uniform(-1, 1, (192, 3, 3)) * 1e-7 * DIAGONAL
    here, there = survey_triangles(rounded), survey_triangles(rounded[::-1] + 1000.0)
    assert_same_body(there.solid.mapped(np.eye(3), np.full(3, -1000.0)), here.solid, rel=1e-12, size=40)


def test_a_closed_mesh_has_no_crack_bounds():
    survey = survey_triangles(BOX)
    assert (survey.crack_volume, survey.crack_centre, survey.crack_inertia) == (0.0, 0.0, 0.0)


def test_a_part_far_from_the_origin_gets_a_note():
    assert survey_triangles(BOX + 900 * DIAGONAL).notes == ()
    (note,) = survey_triangles(BOX - SIDES + 2000 * DIAGONAL).notes
    assert note == (
        "The part lies 2000 times its own size away from the origin: coordinates of about 7 digits round its shape."
        " Export it nearer to the origin."
    )


def test_the_numbers_do_not_depend_on_the_unit_of_length():
    for factor in (1e-9, 1e-3, 1e6):
        survey = survey_triangles(BOX * factor)
        assert_same_body(survey.solid.enlarged(1 / factor), exact_box(), rel=1e-14)


def test_bounds_are_read_only():
    with pytest.raises(ValueError, match="read-only"):
        survey_triangles(BOX).bounds[0, 0] = 1.0


@pytest.mark.parametrize("shape", [(0, 3, 3), (3, 3), (4, 9), (2, 4, 3)])
def test_arrays_that_hold_no_triangles_are_refused(shape):
    with pytest.raises(ValueRefused) as refused:
        survey_triangles(np.zeros(shape), name="bracket")
    assert str(refused.value) == (
        f"bracket: a mesh needs triangles of three points; read an array of shape {shape}."
        " Give an array of shape (n, 3, 3) with n of at least 1."
    )


def test_a_triangle_that_is_not_finite_is_refused():
    broken = BOX.copy()
    broken[3, 0, 1] = np.nan
    with pytest.raises(MeshFileError, match=r"bracket, facet 4: a coordinate is not a finite number; read y of corner 1 = nan"):
        survey_triangles(broken, name="bracket")


def test_what_flat_caps_may_leave_out_grows_with_the_hole():
    # 2/3·A·√(A/π): a hemisphere on a round hole of the same area.
    triangles = quartered(BOX, 3)
    top = (triangles[..., 2] == 20).all(axis=1)
    hole = top & (triangles[..., 0] <= 20).all(axis=1) & (triangles[..., 1] <= 15).all(axis=1)
    for missing, area in ((hole, 300.0), (top, 1200.0)):
        survey = survey_triangles(triangles[~missing])
        bulge = 2 / 3 * area * np.sqrt(area / np.pi)
        assert survey.basis == "estimated: holes closed flat"
        assert survey.open_volume == pytest.approx(bulge, rel=1e-12)
        assert survey.open_centre == pytest.approx(bulge * DIAGONAL / VOLUME, rel=1e-12)
        assert survey.open_inertia == pytest.approx(bulge * DIAGONAL**2, rel=1e-12)
    assert survey_triangles(BOX).open_volume == 0


def test_a_missing_half_of_a_ball_is_within_what_the_flat_cap_may_leave_out():
    # Circles of latitude, the equator among them, so that the edge of the hole is a circle.
    latitude, longitude = np.meshgrid(np.linspace(-np.pi / 2, np.pi / 2, 41), np.linspace(0, 2 * np.pi, 120, endpoint=False))
    around = np.stack([np.cos(latitude) * np.cos(longitude), np.cos(latitude) * np.sin(longitude), np.sin(latitude)], axis=-1)
    ball = hull(np.unique(around.reshape(-1, 3).round(9), axis=0))
    open_ball = ball[~(ball[..., 2] >= 0).all(axis=1)]
    survey = survey_triangles(open_ball)
    left_out = float(survey_triangles(ball).solid.mass) - float(survey.solid.mass)
    assert survey.verdict == "open"
    assert survey.open_volume == pytest.approx(2 / 3 * np.pi, rel=2e-3)
    assert left_out == pytest.approx(survey.open_volume, rel=5e-3)


@pytest.mark.parametrize("width", [1e-5, 1e-4])
def test_cracks_wider_than_a_hairline_are_sewn_and_bounded(width):
    # Every facet's corners are moved on their own: caps over each facet's own edge would enclose nothing.
    rng = np.random.default_rng(8)
    survey = survey_triangles(quartered(BOX, 2) + rng.uniform(-1, 1, (192, 3, 3)) * width * DIAGONAL)
    assert (survey.verdict, survey.basis, survey.closed) == ("open", "estimated: cracks closed", False)
    assert abs(float(survey.solid.mass) - VOLUME) <= survey.crack_volume < 100 * width * VOLUME
    worst = np.abs(np.linalg.eigvalsh(survey.solid.inertia_about_centre - exact_box().inertia_about_centre)).max()
    assert worst <= survey.crack_inertia
    assert survey.open_volume == 0
