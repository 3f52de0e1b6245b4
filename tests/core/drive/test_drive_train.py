"""Axes, what turns with which shaft, and inertia seen from any shaft."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
import strategies
from drive_cases import plain
from hypothesis import given
from hypothesis import strategies as st

from core.assembly import Assembly, DriveAxis, Group, Part, ShapeBody
from core.drive import (
    FIXED,
    Belt,
    Brake,
    Coupling,
    Gear,
    LeadScrew,
    Motor,
    RackOrDrum,
    ShaftInertia,
    Train,
    TurningBody,
    TurnsWith,
    about_axis,
    across,
    bodies_of,
    inertia_ratio,
    reflected,
)
from core.errors import EditRefused, ValueRefused
from core.material import Weighed
from core.moments import Moments
from core.placement import Pose, Ring, Several
from core.shapes import Cylinder

POSITIVE = st.floats(1e-3, 50.0)
EFFICIENCIES = st.floats(0.1, 1.0)


@st.composite
def trains(draw: st.DrawFn) -> Train:
    stages = []
    for number in range(draw(st.integers(0, 4))):
        name = f"stage {number}"
        stages.append(draw(st.one_of(
            st.builds(
                Gear, st.just(name), st.one_of(POSITIVE, POSITIVE.map(lambda ratio: -ratio)), EFFICIENCIES, POSITIVE,
                st.sampled_from(["motor side", "load side"]),
            ),
            st.builds(Belt, st.just(name), POSITIVE, POSITIVE, EFFICIENCIES, POSITIVE, POSITIVE, POSITIVE),
            st.builds(Coupling, st.just(name), POSITIVE),
            st.builds(Brake, st.just(name), POSITIVE, POSITIVE),
        )))
    shafts = st.sampled_from(["motor", "load", *(stage.name for stage in stages)])
    linear = draw(st.lists(st.one_of(
        st.builds(RackOrDrum, st.just("slide"), POSITIVE, POSITIVE, shaft=shafts, inertia=POSITIVE),
        st.builds(LeadScrew, st.just("table"), POSITIVE, POSITIVE, shaft=shafts, inertia=POSITIVE),
    ), max_size=2))
    inertias = draw(st.lists(st.builds(ShaftInertia, st.just("hub"), POSITIVE, shafts), min_size=1, max_size=3))
    return Train(Motor(draw(POSITIVE)), tuple(stages), tuple(linear), tuple(inertias))


@given(trains(), st.data())
def test_the_energy_of_a_train_is_the_same_from_whichever_shaft_it_is_seen(train, data):
    one, other = (data.draw(st.sampled_from([*train.shafts, "load"])) for _ in range(2))
    speeds = {shaft: float(train.speeds[train.index(shaft)]) for shaft in (one, other)}
    ratio = speeds[one] / speeds[other]
    here, there = reflected(train, (), one).inertia, reflected(train, (), other).inertia
    assert here * ratio**2 == pytest.approx(there, rel=1e-12)


@given(trains())
def test_the_rows_of_a_reflected_inertia_add_up_and_each_is_its_own_square(train):
    seen = reflected(train, ())
    assert sum(row.reflected for row in seen.rows) == pytest.approx(seen.inertia, rel=1e-12)
    for row in seen.rows:
        assert row.reflected == pytest.approx(row.inertia * row.speed_ratio**2, rel=1e-14)
        if row.mass is not None:
            assert row.inertia == pytest.approx(row.mass * row.travel**2, rel=1e-14)


def test_an_inertia_quoted_at_the_load_side_counts_by_the_square_of_the_ratio_less():
    near, far = (
        reflected(Train(stages=(Gear("gearbox", -10.0, 1.0, 0.02, side),)), ()).inertia
        for side in ("motor side", "load side")
    )
    assert near == pytest.approx(0.02, rel=1e-15)
    assert far == pytest.approx(0.02 / 100, rel=1e-15)


def test_the_shafts_are_named_for_the_stages_before_them():
    train = Train(stages=(Coupling("coupling"), Gear("gearbox", 5.0), Belt("belt", 0.1, 0.2)))
    assert train.shafts == ("motor", "coupling", "gearbox", "belt")
    assert train.index("load") == 3
    assert train.speeds.tolist() == [10.0, 10.0, 2.0, 1.0]
    assert train.ratio == 10.0


@pytest.mark.parametrize(("limit", "within"), [(None, None), (49.0, False), (51.0, True)])
def test_the_inertia_ratio_is_judged_by_the_users_own_limit_only(limit, within):
    train = replace(plain(10.0, 0.002, (Gear("gear", 10.0),)), motor=Motor(0.002, limit))
    found = inertia_ratio(train, ())
    assert found.ratio == pytest.approx(50.0, rel=1e-12)
    assert found.within is within
    assert inertia_ratio(replace(train, motor=Motor()), ()).ratio is None


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda: Gear("gearbox", 0.0), "gearbox: a ratio of 0 turns nothing; read 0. Give the turns"),
        (lambda: Gear("gearbox", 3.0, 1.2), "gearbox: an efficiency lies above 0 and at most at 1; read 1.2."),
        (lambda: Gear("gearbox", 3.0, 0.0), "an efficiency lies above 0 and at most at 1; read 0"),
        (lambda: Gear("gearbox", 3.0, 0.9, braking_efficiency=-0.1), "in braking lies between 0 and 1; read -0.1"),
        (lambda: Gear("gearbox", math.nan), "the ratio has to be a finite number; read nan"),
        (lambda: Gear("gearbox", 3.0, inertia=-1.0), "the inertia cannot be less than 0; read -1"),
        (lambda: Gear("gearbox", 3.0, quoted_at="middle"), "quoted at the motor side or the load side; read middle"),
        (lambda: Belt("belt", 0.0, 0.2), "belt: the radius of the wheel on the motor side has to be more than 0"),
        (lambda: Coupling("coupling", -1.0), "coupling: the inertia cannot be less than 0"),
        (lambda: Brake("brake", 0.0, -3.0), "brake: the braking torque cannot be less than 0; read -3"),
        (lambda: LeadScrew("screw", 0.0, 10.0), "screw: the lead has to be more than 0"),
        (lambda: RackOrDrum("rack", 0.1, 10.0, slope=2.0), "rack: a slope lies between −90° and 90°; read 114.592°"),
        (lambda: Motor(ratio_limit=0.0), "motor: the limit of the inertia ratio has to be more than 0"),
        (lambda: Train(stages=(Coupling("a"), Coupling("a"))), "each stage needs a name of its own"),
        (lambda: Train(stages=(Coupling("load"),)), "other than motor, load and fixed; read 'load'"),
        (
            lambda: Train(stages=(Coupling("a"),), inertias=(ShaftInertia("hub", 1.0, "b"),)),
            "hub: the train has no such shaft; read 'b'. Choose one of motor, a, load.",
        ),
        (lambda: DriveAxis("Hinge", (1.0, 2.0, 3.0), second=(1.0, 2.0, 3.0)), "an axis needs two points that differ"),
        (lambda: DriveAxis("Hinge", (0.0, 0.0, 0.0), (0.0, 0.0, 0.0)), "a direction needs a length"),
    ],
)
def test_a_train_or_axis_that_cannot_be_is_refused(make, sentence):
    with pytest.raises(ValueRefused) as refused:
        make()
    assert sentence in str(refused.value)


# --- axes ----------------------------------------------------------------------------------------------------------


@given(strategies.realisable_moments(), strategies.points, strategies.directions)
def test_the_forms_of_inertia_about_an_axis_belong_together(moments, point, direction):
    forms = about_axis(moments, DriveAxis("a", tuple(point), tuple(direction)))
    assert forms.inertia == pytest.approx(forms.own + forms.transfer, rel=1e-14)
    assert forms.transfer == pytest.approx(forms.mass * forms.offset**2, rel=1e-12)
    assert forms.inertia == pytest.approx(forms.mass * forms.radius_of_gyration**2, rel=1e-12)


@given(strategies.directions)
def test_the_directions_across_an_axis_make_a_right_handed_frame_with_it(direction):
    axis = DriveAxis("a", (0.0, 0.0, 0.0), tuple(direction))
    frame = np.stack([*across(axis), axis.unit])
    np.testing.assert_allclose(frame @ frame.T, np.eye(3), atol=1e-14)
    assert np.linalg.det(frame) == pytest.approx(1.0, rel=1e-14)


def test_the_zero_mark_of_an_upright_axis_is_x_and_of_one_along_x_is_z():
    assert across(DriveAxis())[0].tolist() == [1.0, 0.0, 0.0]
    assert across(DriveAxis("a", (0.0, 0.0, 0.0), (1.0, 0.0, 0.0)))[0].tolist() == [0.0, 0.0, 1.0]


# --- what turns ----------------------------------------------------------------------------------------------------


def disc(key: str, mass: float, x: float = 0.0, copies: object = Several(1)) -> Part:
    return Part(key, key, ShapeBody(Cylinder(0.1, 0.02)), Weighed(mass), Pose((x, 0.0, 0.0)), copies)


DOCUMENT = Assembly(
    "dial",
    (
        Group("dial", "dial", (disc("plate", 4.0), disc("fixture", 0.5, 0.2, Ring(6))), copies=Several(2)),
        disc("pinion", 0.3, 0.5),
        disc("housing", 9.0, 1.0),
    ),
    (DriveAxis("Spindle"), DriveAxis("Pinion axis", (0.5, 0.0, 0.0))),
)


def test_the_whole_document_turns_with_the_load_unless_lines_are_said_to_do_otherwise():
    (everything,) = bodies_of(DOCUMENT, (TurnsWith(),))
    assert everything.inertia == pytest.approx(float(DOCUMENT.total.inertia_about_axis([0, 0, 0], [0, 0, 1])), rel=1e-14)
    whole, pinion = bodies_of(
        DOCUMENT, (TurnsWith(), TurnsWith("pinion", "motor", "Pinion axis"), TurnsWith("housing", FIXED))
    )
    assert float(whole.moments.mass) == pytest.approx(2 * (4.0 + 6 * 0.5), rel=1e-14)
    assert float(pinion.moments.mass) == pytest.approx(0.3, rel=1e-14)
    # The disc turns about its own middle there.
    assert pinion.inertia == pytest.approx(0.3 * 0.05**2 / 2, rel=1e-12)


def test_a_line_inside_a_group_can_turn_with_another_shaft_than_its_group():
    group, fixture = bodies_of(DOCUMENT, (TurnsWith("dial"), TurnsWith("fixture", "motor")))
    assert float(group.moments.mass) == pytest.approx(8.0, rel=1e-14)
    assert float(fixture.moments.mass) == pytest.approx(6.0, rel=1e-14)


def test_bodies_on_two_shafts_reflect_by_the_square_of_their_speed():
    train = Train(stages=(Gear("gear", -4.0),))
    bodies = bodies_of(DOCUMENT, (TurnsWith("dial"), TurnsWith("pinion", "motor", "Pinion axis")))
    dial, pinion = (body.inertia for body in bodies)
    assert reflected(train, bodies).inertia == pytest.approx(dial / 16 + pinion, rel=1e-14)


@pytest.mark.parametrize(
    ("turning", "refusal", "sentence"),
    [
        ((TurnsWith(), TurnsWith()), ValueRefused, "a line turns with one shaft only"),
        ((TurnsWith("", "load", "No axis"),), EditRefused, "the document has no such axis; read 'No axis'"),
        ((TurnsWith("nobody"),), EditRefused, "the assembly has no such line; read nobody"),
    ],
)
def test_entries_that_name_what_is_not_there_are_refused(turning, refusal, sentence):
    with pytest.raises(refusal) as refused:
        bodies_of(DOCUMENT, turning)
    assert sentence in str(refused.value)


def test_nothing_that_turns_has_no_radius_of_gyration():
    assert math.isnan(about_axis(Moments.nothing(), DriveAxis()).radius_of_gyration)
    assert TurningBody("nothing", Moments.nothing(), DriveAxis()).inertia == 0.0
