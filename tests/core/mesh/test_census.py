"""The census of a mesh: its shells, what each is for, and what is wrong with it, in closed-form numbers."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mesh_files import binary_stl, box, quartered, ring_grid
from oracles import assert_same_body
from strategies import placements

from core.errors import Cancelled, MeshFileError, ValueRefused
from core.mesh import MeshAsset, survey_triangles
from core.mesh.census import FINDINGS, census
from core.moments import Moments
from core.progress import Progress

BOX = box(40, 30, 20)


def inward(triangles: np.ndarray) -> np.ndarray:
    return triangles[:, ::-1]


def exact_box(width, depth, height, at=(0, 0, 0)) -> Moments:
    sides, volume = np.array([width, depth, height], dtype=float), float(width * depth * height)
    return Moments(volume, sides / 2 + at, volume * np.diag(sides**2) / 12)


def names(triangles: np.ndarray) -> list[str]:
    return [finding.name for finding in census(triangles).findings]


def test_a_sound_box_is_one_solid_shell_without_findings():
    found = census(quartered(BOX, 2))
    assert (found.triangles, len(found.shells), found.shells.role, found.findings, found.loops) == (192, 1, ("solid",), (), ())
    assert found.sound
    assert not found.turned
    assert found.shells.volume.tolist() == pytest.approx([24_000])
    assert found.shells.area.tolist() == pytest.approx([5_200])
    np.testing.assert_array_equal(found.shells.bounds, [[[0, 0, 0], [40, 30, 20]]])
    assert_same_body(found.shells.body(0), exact_box(40, 30, 20), rel=1e-14)


@pytest.mark.parametrize("lift", [0.0, 1.0])
def test_two_half_overlapping_boxes_count_their_common_room_twice(lift):
    # With lift 0 four faces of both lie in the same planes; the sum is 48000 for a true 36000.
    pair = np.concatenate([BOX, box(40, 30, 20, at=(20, 0, lift))])
    (finding,) = census(pair).findings
    assert (finding.name, finding.mends) == ("counted twice", ("unite",))
    assert_same_body(finding.extra, exact_box(20, 30, 20 - lift, at=(20, 0, lift)), rel=1e-12)
    assert finding.volume_change == pytest.approx(-600 * (20 - lift), rel=1e-12)
    assert set(finding.facets.tolist()) <= set(range(24))
    if lift == 0:
        assert finding.text == (
            "Shells 1 and 2 of 2 overlap: 0.25 of the volume is counted twice. Unite them."
        )


def test_a_void_that_is_wound_outward_is_asked_about():
    # 27000 for a true 21000 if it is a void, for a true 24000 if it is full.
    (finding,) = census(np.concatenate([BOX, box(10, 20, 15, at=(5, 5, 2))])).findings
    assert (finding.name, finding.mends) == ("void wound outward", ("turn", "unite"))
    assert [float(change.mass) for change in finding.changes] == pytest.approx([-6_000, -3_000])
    assert_same_body(finding.extra, exact_box(10, 20, 15, at=(5, 5, 2)).times(2.0), rel=1e-13)
    assert finding.facets.tolist() == list(range(12, 24))
    assert finding.text == (
        "Shell 2 of 2, inside shell 1, faces outwards like a solid: 0.111 of the volume is counted twice."
        " If it is a void, turn it; if there is material in it, unite the shells."
    )


def test_a_true_void_and_what_floats_in_it_are_sound():
    nested = np.concatenate([box(30, 30, 30), inward(box(20, 20, 20, at=(5, 5, 5))), box(10, 10, 10, at=(10, 10, 10))])
    found = census(nested)
    assert found.shells.role == ("solid", "void", "solid")
    assert (found.shells.inside.tolist(), found.shells.depth.tolist()) == ([-1, 0, 1], [0, 1, 2])
    assert found.findings == ()


def test_a_mesh_that_is_inside_out_as_a_whole_is_told_once_and_its_void_stays_one():
    found = census(inward(np.concatenate([BOX, inward(box(10, 20, 15, at=(5, 5, 2)))])))
    assert found.turned
    assert found.shells.role == ("solid", "void")
    assert [finding.name for finding in found.findings] == ["inside out"]
    assert found.findings[0].volume_change == 0
    assert found.sound


def test_one_of_several_bodies_inside_out_takes_its_volume_away():
    (finding,) = census(np.concatenate([BOX, inward(box(10, 10, 10, at=(50, 0, 0)))])).findings
    assert (finding.name, finding.mends, finding.volume_change) == ("shell inside out", ("turn",), pytest.approx(2_000))
    assert finding.facets.tolist() == list(range(12, 24))


@pytest.mark.parametrize("order", ["one after the other", "shuffled", "facet by facet"])
def test_every_facet_twice_is_two_shells_of_which_one_is_dropped(order):
    one = quartered(BOX, 2)
    both = {"one after the other": np.concatenate([one, one]), "facet by facet": np.repeat(one, 2, axis=0)}
    twice = both.get(order, np.random.default_rng(3).permutation(np.concatenate([one, one])))
    found = census(twice)
    assert len(found.shells) == 2
    (finding,) = found.findings
    assert (finding.name, finding.mends) == ("counted twice", ("drop duplicates",))
    assert_same_body(finding.extra, exact_box(40, 30, 20), rel=1e-13)


def test_nearly_every_facet_twice_is_seen_as_counted_twice():
    # The second copy cuts one square along the other diagonal: no shell equals the other, facet by facet.
    one, other = quartered(BOX, 2), quartered(BOX, 2)
    square = np.array([[0, 0, 20], [10, 0, 20], [10, 7.5, 20], [0, 7.5, 20]], dtype=float)
    inside = ((other >= square.min(axis=0)) & (other <= square.max(axis=0))).all(axis=(1, 2))
    assert inside.sum() == 2
    here = [[0, 1, 3], [1, 2, 3]] if (other[inside] == square[2]).all(axis=2).any(axis=1).all() else [[0, 1, 2], [0, 2, 3]]
    other[inside] = square[np.array(here)]
    found = {finding.name: finding for finding in census(np.concatenate([one, other])).findings}
    assert found["counted twice"].volume_change == pytest.approx(-24_000, rel=1e-9)
    assert found["duplicate facets"].mends == ()
    assert len(found["duplicate facets"].facets) == 190


def test_bodies_that_touch_in_a_face_an_edge_or_a_corner_are_shells_of_their_own_and_sound():
    for at in ((1, 0, 0), (1, 1, 0), (1, 1, 1)):
        found = census(np.concatenate([box(), box(at=at)]))
        assert len(found.shells) == 2
        assert found.sound
    (finding,) = census(np.concatenate([box(), box(at=(1, 0, 0))])).findings
    assert (finding.name, len(finding.facets), finding.harmless) == ("back to back facets", 4, True)


def test_bodies_that_share_an_edge_are_told_apart_in_any_order_of_facets():
    both = np.concatenate([quartered(BOX, 2), quartered(box(40, 30, 20, at=(40, 30, 0)), 2)])
    found = census(np.random.default_rng(6).permutation(both))
    assert found.shells.volume.tolist() == pytest.approx([24_000, 24_000])
    assert found.findings == ()


def test_overlapping_bodies_with_facets_in_common_and_mixed_order_are_not_called_sound():
    # The facets in common can belong to either body, so that the two may come out as one shell.
    both = np.concatenate([quartered(BOX, 2), quartered(box(40, 30, 20, at=(20, 15, 0)), 2)])
    assert "duplicate facets" in names(np.random.default_rng(6).permutation(both))


def test_an_open_top_is_a_loop_with_its_length_and_the_facets_beside_it():
    found = census(BOX[~(BOX[..., 2] == 20).all(axis=1)])
    (loop,) = found.loops
    assert (loop.length, loop.area, len(loop.points), loop.shell) == (pytest.approx(140), pytest.approx(1_200), 4, 0)
    assert len(loop.facets) == 4
    # A hemisphere on a round hole of the same area.
    radius = np.sqrt(1_200 / np.pi)
    assert loop.bulge == pytest.approx(2 / 3 * np.pi * radius**3)
    (finding,) = found.findings
    assert (finding.name, finding.mends, finding.bound) == ("open edges", ("close flat",), loop.bulge)
    assert found.shells.role == ("open",)
    assert found.shells.volume.tolist() == pytest.approx([24_000])


def test_many_holes_are_told_singly_up_to_a_number_and_then_together():
    open_boxes = np.concatenate([box(1 + step, 1, 1, at=(100 * step, 0, 0))[1:] for step in range(30)])
    found = census(open_boxes)
    assert len(found.loops) == 30
    assert [finding.name for finding in found.findings] == ["open edges"] * 21
    assert found.findings[-1].bound == pytest.approx(sum(sorted(loop.bulge for loop in found.loops)[:10]))


def test_facets_against_their_neighbours_are_named():
    triangles = quartered(BOX, 2)
    turned = [5, 17, 100]
    triangles[turned] = triangles[turned][:, ::-1]
    (finding,) = census(triangles).findings
    assert (finding.name, finding.mends, finding.facets.tolist()) == ("reversed facets", ("rewind",), turned)


def test_a_twisted_band_has_one_side_only():
    angle = np.linspace(0, 2 * np.pi, 12, endpoint=False)
    across = np.stack([np.cos(angle) * np.cos(angle / 2), np.sin(angle) * np.cos(angle / 2), np.sin(angle / 2)], axis=1)
    middle = 5 * np.stack([np.cos(angle), np.sin(angle), 0 * angle], axis=1)
    left, right = middle - across, middle + across
    # Once round, left has become right.
    left, right = np.concatenate([left, right[:1]]), np.concatenate([right, left[:1]])
    band = [[left[i], right[i], left[i + 1]] for i in range(12)] + [[right[i], right[i + 1], left[i + 1]] for i in range(12)]
    assert "one-sided" in names(np.array(band))


@pytest.mark.parametrize(("width", "name"), [(1e-7, "hairline cracks"), (1e-5, "wide cracks"), (1e-4, "wide cracks")])
def test_cracks_are_told_from_holes_by_their_width_and_bounded(width, name):
    rng = np.random.default_rng(1)
    noise = rng.uniform(-1, 1, (192, 3, 3)) * width * np.sqrt(2900)
    found = census(quartered(BOX, 2) + noise)
    (finding,) = found.findings
    assert (finding.name, finding.mends) == (name, ("weld",))
    assert abs(float(found.shells.volume[0]) - 24_000) <= finding.bound < 100 * width * 24_000


def test_a_small_missing_facet_is_a_hole_and_no_crack():
    # The hole is a few ten-thousandths of the diagonal across: a wide weld would swallow it.
    triangles = quartered(BOX, 2)
    corners = triangles[0]
    hole = corners.mean(axis=0) + 0.003 * (corners - corners.mean(axis=0))
    ring = [[corners[i], corners[i - 2], hole[i - 2]] for i in range(3)] + [[corners[i], hole[i - 2], hole[i]] for i in range(3)]
    found = census(np.concatenate([triangles[1:], np.array(ring)]))
    assert [finding.name for finding in found.findings] == ["open edges"]
    whole = 0.5 * np.linalg.norm(np.cross(corners[1] - corners[0], corners[2] - corners[0]))
    assert found.loops[0].area == pytest.approx(0.003**2 * whole, rel=1e-9)


def test_facets_with_coinciding_corners_are_harmless():
    needles = np.array([[[0, 0, 0], [40, 0, 0], [0, 0, 0]], [[1, 1, 1], [40, 0, 0], [1, 1, 1]], [[7, 7, 7]] * 3], dtype=float)
    found = census(np.concatenate([BOX, needles[:1]]))
    assert (len(found.shells), len(census(np.concatenate([needles[1:2], BOX])).shells)) == (1, 1)
    assert census(np.concatenate([BOX, needles[2:]])).sound
    assert set(census(needles).shells.role) == {"flat"}
    assert [(finding.name, finding.facets.tolist()) for finding in found.findings] == [("facets without area", [12])]
    assert found.sound


def test_a_flat_plate_encloses_nothing():
    plate = BOX[(BOX[..., 2] == 20).all(axis=1)]
    found = census(np.concatenate([plate, inward(plate)]))
    assert set(found.shells.role) == {"flat"}


def test_minus_zero_is_zero():
    triangles = BOX.copy()
    triangles[:6][triangles[:6] == 0] = -0.0
    assert census(triangles).findings == ()


@given(placements(), st.floats(1e-3, 1e3), st.integers(0, 2**32 - 1))
def test_turning_moving_and_scaling_change_no_finding(placement, size, seed):
    rng = np.random.default_rng(seed)
    triangles = rng.permutation(np.concatenate([
        quartered(box(40, 30, 20)), quartered(box(10, 20, 15, at=(5, 5, 2))), quartered(box(9, 9, 9, at=(60, 0, 0)))[:, ::-1],
    ]))
    found = census(size * placement.apply(triangles))
    assert sorted(found.shells.role) == ["inside out", "solid", "void wound outward"]
    change = {finding.name: finding.volume_change for finding in found.findings}
    assert change["void wound outward"] == pytest.approx(-6_000 * size**3, rel=1e-9)
    assert change["shell inside out"] == pytest.approx(2 * 729 * size**3, rel=1e-9)


@given(st.lists(st.tuples(*[st.integers(0, 6)] * 3, *[st.integers(1, 4)] * 3), min_size=2, max_size=4, unique=True))
def test_what_two_boxes_have_in_common_is_what_counting_cells_finds(boxes):
    cells = np.zeros((len(boxes), 11, 11, 11), dtype=bool)
    for grid, (x, y, z, width, depth, height) in zip(cells, boxes, strict=True):
        grid[x : x + width, y : y + depth, z : z + height] = True
    # Only pairs that overlap without one lying in the other; those have findings of another kind.
    pairs = [(i, j) for i in range(len(boxes)) for j in range(i)]
    common = {(i, j): int((cells[i] & cells[j]).sum()) for i, j in pairs}
    whole = cells.sum(axis=(1, 2, 3))
    if any(common[i, j] in (whole[i], whole[j]) for i, j in pairs if common[i, j]):
        return
    triangles = np.concatenate([box(*sides, at=(x, y, z)) for x, y, z, *sides in boxes])
    extra = [finding.volume_change for finding in census(triangles).findings if finding.name == "counted twice"]
    assert sorted(-value for value in extra) == pytest.approx(sorted(value for value in common.values() if value))


@given(st.lists(st.floats(0.05, 0.45), min_size=1, max_size=6, unique=True), st.booleans(), st.integers(0, 9))
def test_nested_shells_alternate_between_solid_and_void(insets, sound, seed):
    insets = sorted({round(inset, 2) for inset in insets})
    shells = [box(1 - 2 * inset, 1 - 2 * inset, 1 - 2 * inset, at=(inset, inset, inset)) for inset in insets]
    wound = [shell if number % 2 == 0 or not sound else inward(shell) for number, shell in enumerate(shells)]
    order = np.random.default_rng(seed).permutation(len(wound))
    found = census(np.concatenate([wound[number] for number in order]))
    assert found.shells.depth[np.argsort(order)].tolist() == list(range(len(shells)))
    roles = np.array(found.shells.role)[np.argsort(order)].tolist()
    odd = "void" if sound else "void wound outward"
    assert roles == ["solid" if number % 2 == 0 else odd for number in range(len(shells))]


def test_shell_volumes_add_up_to_the_survey():
    rng = np.random.default_rng(4)
    triangles = np.concatenate([quartered(box(*rng.uniform(1, 3, 3), at=(10 * step, 0, 0)), 1) for step in range(7)])
    assert_same_body(census(triangles).shells.bodies.total(), survey_triangles(triangles).solid, rel=1e-12)


def test_a_small_shell_far_from_a_large_one_keeps_its_digits():
    small = box(1e-3, 1e-3, 1e-3, at=(900, 0, 0))
    found = census(np.concatenate([box(100, 100, 100), small]))
    assert float(found.shells.volume[1]) == pytest.approx(1e-9, rel=1e-8)


@pytest.mark.parametrize("where", ["apart", "in a row of touching ones", "as voids in a block", "one around the other"])
def test_ten_thousand_shells_cost_ten_times_a_thousand(where):
    from time import process_time

    def seconds(count: int) -> float:
        step = np.arange(count)
        side = int(np.ceil(count ** (1 / 3)))
        places = np.stack([step % side, step // side % side, step // side**2], axis=1) * 2.0
        if where == "in a row of touching ones":
            places = np.stack([step, 0 * step, 0 * step], axis=1).astype(float)
        if where == "one around the other":
            triangles = ((box() - 0.5)[None] * (1 + step)[:, None, None, None]).reshape(-1, 3, 3)
        else:
            triangles = (box()[None] + places[:, None, None]).reshape(-1, 3, 3)
        if where == "as voids in a block":
            around = box(2 * side + 2, 2 * side + 2, 2 * side + 2, at=(-1, -1, -1))
            triangles = np.concatenate([around, inward(triangles)])
        start = process_time()
        census(triangles)
        return process_time() - start

    seconds(100)
    # Linear would be 10, quadratic 100; the fixed cost of small ones only helps.
    assert seconds(10_000) < 40 * seconds(1_000) + 0.5


def test_too_many_shells_in_one_room_are_not_guessed(monkeypatch):
    monkeypatch.setattr("core.mesh.census.nesting.MOST_PAIRS", 3)
    nested = np.concatenate([inward(box(9 - s, 9 - s, 9 - s, at=(s / 2, s / 2, s / 2))) if s % 2 else
                             box(9 - s, 9 - s, 9 - s, at=(s / 2, s / 2, s / 2)) for s in range(5)])
    found = census(nested)
    assert [finding.name for finding in found.findings] == ["not looked at"]
    assert found.shells.role == ("solid", "void", "solid", "void", "solid")


def test_a_cancelled_census_stops():
    progress = Progress("the census")
    progress.cancel()
    with pytest.raises(Cancelled):
        census(BOX, progress)


def test_progress_runs_to_its_end():
    progress = Progress("the census")
    census(np.concatenate([BOX, box(40, 30, 20, at=(20, 0, 0))]), progress)
    assert progress.fraction == 1


def test_facets_of_a_shell_are_its_own_whatever_their_order():
    mixed = np.random.default_rng(5).permutation(np.concatenate([quartered(box()), quartered(box(at=(5, 0, 0)))]))
    found = census(mixed)
    right = (mixed[:, :, 0] >= 5).all(axis=1)
    shells = {tuple(found.shells.facets_of(shell)) for shell in range(2)}
    assert shells == {tuple(np.flatnonzero(right)), tuple(np.flatnonzero(~right))}


def test_an_asset_takes_its_own_census():
    asset = MeshAsset.of_bytes(binary_stl(ring_grid(30, 10)), "ring.stl")
    assert asset.census().findings == ()
    assert float(asset.census().shells.volume[0]) == pytest.approx(float(asset.survey.solid.mass), rel=1e-12)


def test_names_of_findings_are_listed():
    assert len(set(FINDINGS)) == len(FINDINGS)
    mixed = quartered(BOX)
    mixed[5] = mixed[5, ::-1]
    for triangles in (BOX[1:], mixed, np.concatenate([BOX, BOX]), inward(BOX)):
        assert set(names(triangles)) <= set(FINDINGS)


def test_what_is_no_mesh_is_refused():
    with pytest.raises(ValueRefused, match="triangles of three points"):
        census(np.zeros((0, 3, 3)))
    broken = BOX.copy()
    broken[3, 0, 1] = np.nan
    with pytest.raises(MeshFileError, match="not a finite number"):
        census(broken)
