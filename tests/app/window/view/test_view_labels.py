"""Labels: inside the frame, apart from each other, beside what they name."""

from __future__ import annotations

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from app.window.view.labels import Wish, places

FRAME = (640.0, 480.0)
wishes = st.lists(
    st.builds(
        Wish,
        anchor=st.tuples(st.floats(-50, 700), st.floats(-50, 520)),
        size=st.tuples(st.floats(5, 120), st.floats(8, 20)),
        toward=st.tuples(st.floats(-1, 1), st.floats(-1, 1)),
    ),
    max_size=8,
)


def overlap(one, two):
    return min(one[0] + one[2], two[0] + two[2]) > max(one[0], two[0]) and min(one[1] + one[3], two[1] + two[3]) > max(one[1], two[1])


@given(wishes)
def test_labels_neither_overlap_nor_leave_the_frame(some):
    boxes = [box for box in places(some, FRAME, [(300, 200, 20, 20)]) if box is not None]
    for index, box in enumerate(boxes):
        assert min(box[0], box[1]) >= 0
        assert box[0] + box[2] <= FRAME[0]
        assert box[1] + box[3] <= FRAME[1]
        assert not any(overlap(box, other) for other in [*boxes[:index], (300, 200, 20, 20)])


def test_a_label_with_room_stands_off_its_point_as_it_wishes():
    (box,) = places([Wish((320, 240), (60, 16), (0, -1))], FRAME)
    np.testing.assert_allclose(box, (290, 240 - 4 - 16, 60, 16))


def test_labels_of_one_point_all_find_a_place():
    boxes = places([Wish((320, 240), (60, 16), (1, 0))] * 6, FRAME)
    assert None not in boxes


def test_a_label_at_the_edge_of_the_frame_moves_to_the_inside():
    (box,) = places([Wish((638, 240), (60, 16), (1, 0))], FRAME)
    assert box[0] + box[2] <= 640
    assert abs(box[1] + 8 - 240) < 60


def test_a_label_that_fits_nowhere_is_left_out():
    assert places([Wish((5, 5), (60, 16), (1, 0))], (30.0, 10.0)) == [None]
