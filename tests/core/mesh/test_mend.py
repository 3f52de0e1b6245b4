"""Mends: each does its one thing, in closed-form numbers, and refuses where there is nothing to do."""

from hashlib import sha256

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mesh_files import ascii_stl, binary_stl, box, quartered
from oracles import assert_same_body
from strategies import placements

from core.errors import Cancelled, EditRefused
from core.mesh import MeshAsset, survey_triangles
from core.mesh.census import census
from core.mesh.mend import MENDS, close_flat, drop_duplicates, rewind, turn, unite, weld
from core.progress import Progress

BOX = box(40, 30, 20)
DIAGONAL = np.sqrt(2900)
VOID_OUTWARD = np.concatenate([BOX, box(10, 20, 15, at=(5, 5, 2))])
OVERLAPPING = np.concatenate([BOX, box(40, 30, 20, at=(20, 0, 0))])


def cracked(width: float, seed: int = 1) -> np.ndarray:
    rng = np.random.default_rng(seed)
    return quartered(BOX, 2) + rng.uniform(-1, 1, (192, 3, 3)) * width * DIAGONAL


def volume(triangles: np.ndarray) -> float:
    return float(survey_triangles(triangles).solid.mass)


def test_turning_twice_is_turning_not_at_all():
    np.testing.assert_array_equal(turn(turn(BOX)), BOX)
    some = np.array([1, 5])
    np.testing.assert_array_equal(np.flatnonzero((turn(BOX, some) != BOX).any(axis=(1, 2))), some)


def test_a_mend_leaves_what_it_was_given_alone():
    before = VOID_OUTWARD.copy()
    before.flags.writeable = False
    turn(before, np.arange(12, 24))
    unite(before)
    np.testing.assert_array_equal(before, VOID_OUTWARD)


def test_a_void_wound_outward_is_turned_or_filled_as_its_reader_says():
    finding = census(VOID_OUTWARD).findings[0]
    assert volume(turn(VOID_OUTWARD, finding.facets)) == pytest.approx(21_000)
    assert volume(unite(VOID_OUTWARD)) == pytest.approx(24_000)


def test_united_boxes_count_their_common_room_once():
    united = unite(OVERLAPPING)
    assert_same_body(survey_triangles(united).solid, survey_triangles(box(60, 30, 20)).solid, rel=1e-12)
    assert census(united).findings == ()


def test_uniting_keeps_the_voids_of_each_body_except_where_another_fills_them():
    hollow = np.concatenate([box(30, 30, 30), box(10, 10, 10, at=(10, 10, 10))[:, ::-1]])
    # The rod runs from outside through the wall into the void: 20·4·4 long, of which 10 lie in the wall.
    rod = box(20, 4, 4, at=(-5, 13, 13))
    assert volume(unite(np.concatenate([hollow, rod]))) == pytest.approx(27_000 - 1_000 + 5 * 16 + 5 * 16)


def test_shells_in_voids_of_shells_stay_through_uniting():
    nested = np.concatenate([box(30, 30, 30), box(20, 20, 20, at=(5, 5, 5))[:, ::-1], box(10, 10, 10, at=(10, 10, 10))])
    assert volume(unite(nested)) == pytest.approx(27_000 - 8_000 + 1_000)


@pytest.mark.parametrize("width", [1e-7, 1e-5, 1e-4])
def test_a_weld_closes_cracks_up_to_a_thousandth_of_the_part(width):
    triangles = cracked(width)
    mended = MENDS["weld"].function(triangles, None, None)
    survey = survey_triangles(mended)
    assert survey.verdict == "closed"
    assert abs(float(survey.solid.mass) - 24_000) <= census(triangles).findings[0].bound


def test_a_weld_within_a_named_distance_closes_or_is_refused():
    assert survey_triangles(weld(cracked(1e-5), 1e-4 * DIAGONAL)).verdict == "closed"
    with pytest.raises(EditRefused, match="a weld within this distance leaves edges open"):
        weld(cracked(1e-5), 1e-7 * DIAGONAL)


def test_facets_that_a_weld_draws_together_are_dropped():
    triangles = quartered(BOX, 2)
    sliver = np.array([[5, 5, 20], [5.00001, 5, 20], [5, 5.00001, 20]])
    assert len(weld(np.array([*triangles, sliver]), 1e-4)) == len(triangles)


def test_holes_closed_flat_give_a_closed_mesh_with_the_same_values():
    rng = np.random.default_rng(2)
    for _ in range(5):
        triangles = rng.permutation(quartered(BOX, 2))[7:]
        closed = close_flat(triangles)
        survey = survey_triangles(closed)
        assert survey.verdict == "closed"
        assert_same_body(survey.solid, survey_triangles(triangles).solid, rel=1e-12)
        np.testing.assert_array_equal(closed[: len(triangles)], triangles)


def test_duplicates_and_pairs_back_to_back_are_dropped():
    fin = np.array([[[0, 0, 20], [40, 0, 20], [20, -9, 30]]], dtype=float)
    triangles = np.concatenate((BOX, BOX[::-1], fin, fin[:, ::-1]))
    np.testing.assert_array_equal(drop_duplicates(triangles), BOX)


@given(st.integers(0, 2**32 - 1))
def test_rewinding_makes_any_facets_agree(seed):
    rng = np.random.default_rng(seed)
    triangles = quartered(BOX, 1)
    turned = rng.random(len(triangles)) < rng.uniform(0.02, 0.4)
    turned[0] = True
    mixed = triangles.copy()
    mixed[turned] = mixed[turned][:, ::-1]
    survey = survey_triangles(rewind(mixed))
    assert survey.closed
    assert float(survey.solid.mass) == pytest.approx(24_000)


def test_rewinding_goes_by_each_shell_on_its_own():
    mixed = np.concatenate([quartered(BOX), quartered(box(10, 10, 10, at=(50, 0, 0)))])
    mixed[[3, 50]] = mixed[[3, 50]][:, ::-1]
    assert volume(rewind(mixed)) == pytest.approx(25_000)


@given(placements(), st.sampled_from(["unite", "turn"]))
def test_mends_do_the_same_wherever_a_part_stands(placement, mend):
    there = placement.apply(VOID_OUTWARD)
    facets = census(there).findings[0].facets
    expected = {"unite": 24_000, "turn": 21_000}[mend]
    assert volume(MENDS[mend].function(there, facets, None)) == pytest.approx(expected, rel=1e-9)


@given(st.lists(st.tuples(*[st.integers(0, 6)] * 3, *[st.integers(1, 4)] * 3), min_size=1, max_size=6))
def test_united_boxes_fill_the_cells_that_counting_finds(boxes):
    cells = np.zeros((11, 11, 11), dtype=bool)
    for x, y, z, width, depth, height in boxes:
        cells[x : x + width, y : y + depth, z : z + height] = True
    triangles = np.concatenate([box(*sides, at=(x, y, z)) for x, y, z, *sides in boxes])
    assert volume(unite(triangles)) == pytest.approx(int(cells.sum()), rel=1e-9)


REFUSED = {
    "weld": (BOX, "there are no cracks to weld"),
    "close flat": (BOX, "there is no hole to close"),
    "drop duplicates": (BOX, "no facet occurs twice"),
    "rewind": (BOX, "all facets wind alike"),
    "unite": (BOX[1:], "shell 1 of 1 is open"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_a_mend_with_nothing_to_do_is_refused(name):
    triangles, words = REFUSED[name]
    with pytest.raises(EditRefused, match=words):
        MENDS[name].function(triangles, None, None)


def test_holes_are_no_cracks_and_mixed_winding_is_no_hole():
    with pytest.raises(EditRefused, match="the open edges are no cracks but holes"):
        MENDS["weld"].function(BOX[1:], None, None)
    mixed = quartered(BOX)
    mixed[5] = mixed[5, ::-1]
    with pytest.raises(EditRefused, match=r"do not form loops|no hole"):
        close_flat(mixed)
    plate = BOX[:2]
    with pytest.raises(EditRefused, match="all facets lie back to back"):
        drop_duplicates(np.concatenate((plate, plate[:, ::-1])))


def test_uniting_turns_nothing_unasked():
    with pytest.raises(EditRefused, match=r"shell 2 of 2 faces inwards\. Close or turn it first"):
        unite(np.concatenate([BOX, box(10, 10, 10, at=(50, 0, 0))[:, ::-1]]))


def test_every_mend_that_a_finding_names_is_there_and_removes_the_finding():
    mixed = quartered(BOX, 2)
    mixed[[5, 17]] = mixed[[5, 17]][:, ::-1]
    cases = [OVERLAPPING, VOID_OUTWARD, np.concatenate([BOX, BOX]), BOX[1:], BOX[:, ::-1], mixed, cracked(1e-7), cracked(1e-5)]
    for triangles in cases:
        asset = MeshAsset.of_bytes(binary_stl(triangles), "part.stl")
        for finding in asset.census().findings:
            for mend, change in zip(finding.mends, finding.changes, strict=True):
                mended = asset.mended(mend, finding.facets)
                assert mended.census().findings == ()
                if change is not None:
                    expected = float(asset.survey.solid.mass) + float(change.mass)
                    assert float(mended.survey.solid.mass) == pytest.approx(expected, rel=1e-6)


def test_a_mended_asset_says_what_was_done_and_of_which_file_it_was_made():
    asset = MeshAsset.of_bytes(binary_stl(OVERLAPPING), "bracket.stl")
    once = asset.mended("unite")
    assert (once.name, once.source, once.mends) == ("bracket.stl", asset.sha256, ("shells united (24 facets became 28)",))
    twice = once.mended("turn", np.array([0, 1, 2]))
    assert (twice.source, twice.mends) == (asset.sha256, (*once.mends, "turned (3 of 28 facets)"))
    assert sha256(twice.data).hexdigest() == twice.sha256 != once.sha256
    assert (asset.mends, asset.source) == ((), "")
    assert asset != once


def test_a_text_file_in_double_precision_stays_closed_when_it_is_rounded():
    # Thirds are not exact in either precision; what was one point must stay one.
    overlapping = np.concatenate([quartered(half, 2) for half in np.split(OVERLAPPING, 2)]) / 3 + 1 / 7
    asset = MeshAsset.of_bytes(ascii_stl(overlapping).encode(), "bracket.stl")
    mended = asset.mended("unite")
    assert mended.survey.verdict == "closed"
    assert float(mended.survey.solid.mass) == pytest.approx(36_000 / 27, rel=1e-6)


def test_points_that_rounding_draws_together_leave_no_crack():
    # In double precision a facet 1e-9 high; as float32 its corners are one point.
    triangles = quartered(BOX, 1) + 10.0
    a, b, c = triangles[0]
    q = a + 1e-9 * (b - a) / np.linalg.norm(b - a)
    split = np.concatenate([triangles[1:], [[a, q, c], [q, b, c]]])
    (row,) = np.flatnonzero((split == b).all(axis=2).any(axis=1) & (split == a).all(axis=2).any(axis=1))
    other = split[row]
    third = other[~((other == a).all(axis=1) | (other == b).all(axis=1))][0]
    split = np.concatenate([np.delete(split, row, axis=0), [[b, q, third], [q, a, third]]])
    asset = MeshAsset.of_bytes(ascii_stl(split[:, ::-1]).encode(), "box.stl")
    assert asset.survey.verdict == "inside out"
    mended = asset.mended("turn")
    assert (mended.survey.verdict, mended.survey.triangles) == ("closed", len(triangles))


def test_a_cancelled_mend_stops():
    progress = Progress("uniting")
    progress.cancel()
    with pytest.raises(Cancelled):
        MeshAsset.of_bytes(binary_stl(OVERLAPPING), "a.stl").mended("unite", progress=progress)


def test_mends_are_listed_under_their_names():
    assert {name: mend.words for name, mend in MENDS.items()} == {
        "turn": "Turn", "weld": "Weld", "close flat": "Close flat", "drop duplicates": "Drop duplicates",
        "rewind": "Rewind", "unite": "Unite",
    }
    assert all(mend.name == name for name, mend in MENDS.items())
