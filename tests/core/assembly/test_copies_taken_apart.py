"""A copy that becomes a part of its own stands where it stood, and nothing that is weighed changes."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.assembly import Assembly, Cut, Group, Part, ShapeBody
from core.assembly.assembly import MeantOverlap
from core.assembly.copies import taken_apart
from core.errors import EditRefused
from core.material import ByDensity
from core.placement import Mirrored, Pose, Ring, Row, Several
from core.shapes import Box, Cylinder, Wedge

STEEL = ByDensity(7850.0)
POSE = Pose((0.12, 0.03, 0.01), (0.2, -0.3, 0.5))

patterns = st.one_of(
    st.builds(
        Ring, st.integers(2, 7), st.just((0.01, 0.02, 0.0)), st.just((0.1, 0.2, 1.0)), st.floats(-3, 3),
        st.sampled_from([2 * np.pi, -2 * np.pi, 1.0, 4.5]), st.booleans(),
    ),
    st.builds(Row, st.integers(2, 7), st.just((0.05, 0.02, -0.01))),
    st.builds(Several, st.integers(2, 7)),
)


def ring_of(copies, shape=None, cuts=()):
    part = Part("p", "pin", ShapeBody(shape or Box(0.02, 0.03, 0.05)), STEEL, POSE, copies, cuts=cuts)
    return Assembly("test", (Group("g", "group", (part,), Pose((0.1, 0, 0), (0, 0.4, 0))),))


def poses(assembly):
    table = assembly.table
    return sorted(np.round(np.column_stack([table.standing.shift, table.standing.turn.reshape(-1, 9)]), 9).tolist())


@given(copies=patterns, pick=st.integers(0, 6))
def test_all_copies_stand_where_they_stood_and_one_is_a_part_of_its_own(copies, pick):
    index = pick % copies.count
    before = ring_of(copies)
    after = taken_apart(before, "p", index)
    np.testing.assert_allclose(poses(after), poses(before), atol=2e-9)
    assert after.total.mass == pytest.approx(float(before.total.mass), rel=1e-12)
    np.testing.assert_allclose(after.total.inertia_about_centre, before.total.inertia_about_centre, rtol=1e-9, atol=1e-12)
    alone = after.node("g").members[-1]
    assert alone.copies == Several(1)
    np.testing.assert_allclose(alone.standing.shift[0], before.node("p").standing.shift[index], atol=1e-12)
    assert len(after.node("g").members) <= 3


def test_a_full_ring_stays_one_line():
    after = taken_apart(ring_of(Ring(6)), "p", 2)
    assert [(node.name, node.copies.count) for node in after.node("g").members] == [("pin", 5), ("pin 2", 1)]


def test_cuts_and_marks_go_with_the_copy():
    before = ring_of(Ring(6), cuts=(Cut("c", "bore", Cylinder(0.01, 0.05)),)).with_meant(MeantOverlap("p", "p"))
    after = taken_apart(before, "p", 0)
    key = after.node("g").members[-1].key
    assert after.node(key).cuts[0].name == "bore"
    assert after.total.mass == pytest.approx(float(before.total.mass), rel=1e-12)
    assert after.meant_overlap("p", key) is not None


def test_the_mirror_image_of_a_round_body_can_be_taken_apart_and_of_a_wedge_not():
    for index in (0, 1):
        before = ring_of(Mirrored(), Cylinder(0.02, 0.05))
        after = taken_apart(before, "p", index)
        np.testing.assert_allclose(after.total.inertia_about_centre, before.total.inertia_about_centre, rtol=1e-9)
        np.testing.assert_allclose(after.total.centre, before.total.centre, atol=1e-12)
    with pytest.raises(EditRefused, match="pin: the mirror image of this body cannot stand as a part of its own"):
        taken_apart(ring_of(Mirrored(), Wedge.of({})), "p", 1)


def test_groups_single_parts_and_copies_that_are_not_there_are_refused():
    with pytest.raises(EditRefused, match="only a part that is there several times"):
        taken_apart(ring_of(Several(1)), "p", 0)
    with pytest.raises(EditRefused, match="only a part that is there several times"):
        taken_apart(ring_of(Ring(6)), "g", 0)
    with pytest.raises(EditRefused, match=r"there is no such copy; read 7\. Choose one from 1 to 6"):
        taken_apart(ring_of(Ring(6)), "p", 6)
