"""Equal keys side by side, things that hang together, boxes that meet."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.mesh import grouping
from core.mesh.boxes import BoxTree
from core.mesh.grouping import group_equal, hang_together

KEYS = st.lists(st.one_of(st.integers(0, 9), st.integers(0, 2**64 - 1)), min_size=1, max_size=60)
PAIRS = st.lists(st.tuples(st.integers(0, 29), st.integers(0, 29)), max_size=40)


def assert_grouped(keys: np.ndarray) -> None:
    groups = group_equal(keys)
    assert sorted(groups.order.tolist()) == list(range(len(keys)))
    members = np.split(groups.order, groups.starts[1:])
    assert len(members) == len(set(keys.tolist()))
    for member in members:
        assert len(set(keys[member].tolist())) == 1
        assert member.tolist() == sorted(member.tolist())
    assert groups.sizes.tolist() == [len(member) for member in members]
    assert groups.ranks.tolist() == [rank for member in members for rank in range(len(member))]
    assert (groups.of_elements()[groups.order] == groups.numbers).all()


@given(KEYS)
def test_equal_keys_stand_side_by_side_in_their_own_order(keys):
    assert_grouped(np.array(keys, np.uint64))


@pytest.mark.parametrize("seed", range(3))
def test_keys_that_agree_once_mixed_are_told_apart(monkeypatch, seed):
    # A key that loses its high bits when mixed: half of the keys then agree with others.
    monkeypatch.setattr(grouping, "_MIX", np.uint64(1 << 60))
    assert_grouped(np.random.default_rng(seed).integers(0, 50, 400).astype(np.uint64))


@given(PAIRS)
def test_what_hangs_together_is_what_a_walk_reaches(pairs):
    groups = [{thing} for thing in range(30)]
    for one, other in pairs:
        joined = next(group for group in groups if one in group) | next(group for group in groups if other in group)
        groups = [group for group in groups if not group & joined] + [joined]
    some, others = (np.array([pair[side] for pair in pairs], np.int64) for side in (0, 1))
    labels = hang_together(30, some, others)
    assert labels.max() + 1 == len(groups)
    assert all(len({int(labels[thing]) for thing in group}) == 1 for group in groups)
    # Numbered by their first members.
    assert np.unique(labels, return_index=True)[1].tolist() == sorted(min(group) for group in groups)


def test_a_long_chain_hangs_together_in_few_rounds():
    count = 200_000
    order = np.random.default_rng(0).permutation(count)
    assert hang_together(count, order[:-1], order[1:]).max() == 0


@given(st.integers(0, 2**32 - 1), st.integers(1, 200), st.floats(0, 0.5))
def test_boxes_that_meet_are_those_that_a_look_at_every_pair_finds(seed, count, size):
    rng = np.random.default_rng(seed)
    low = rng.random((count, 3)).round(2)
    high = low + size * rng.random((count, 3)).round(2)
    askers, boxes = (np.concatenate(part) for part in zip(*BoxTree(low, high).meeting(low, high), strict=True))
    meets = ((low[:, None] <= high[None]) & (low[None] <= high[:, None])).all(axis=2)
    assert sorted(zip(askers.tolist(), boxes.tolist(), strict=True)) == list(map(tuple, np.argwhere(meets).tolist()))


def test_many_boxes_in_one_place_are_walked_in_small_blocks(monkeypatch):
    monkeypatch.setattr("core.mesh.boxes._MOST_IN_BLOCK", 2_000)
    low, high = np.zeros((300, 3)), np.ones((300, 3))
    found = list(BoxTree(low, high).meeting(low, high))
    assert sum(len(askers) for askers, _ in found) == 300 * 300
    assert max(len(askers) for askers, _ in found) <= 2_000
