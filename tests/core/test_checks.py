"""The physical checks: what can exist passes, what cannot is named with both numbers and the likely slip."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from strategies import directions, placements, points, realisable_moments, solids

from core.checks import (
    Check,
    check_axis_inertia,
    check_body,
    check_centre,
    check_density,
    check_gyration,
    check_inertia_tensor,
    check_mass,
    check_symmetric,
    surely_sound,
)
from core.moments import Moments
from core.placement import turn_about
from core.shapes import Cylinder

ORIGIN = np.zeros(3)
SOURCE = "Compare it with its source: decimal point, unit, sign, and the point and frame it is about."


def failing(checks: list[Check]) -> list[str]:
    return [check.text for check in checks if not check.ok]


def body(mass: float, diagonal: list[float], centre: np.ndarray = ORIGIN) -> Moments:
    return Moments.from_inertia(mass, centre, np.diag(diagonal))


# ------------------------------------------------------------------ what can exist passes


@given(realisable_moments())
def test_every_body_that_can_exist_passes(moments):
    assert failing(check_body(moments, name="part")) == []


@given(solids, placements(), st.floats(20.5, 22_500.0))
def test_every_solid_passes_with_its_volume_reach_and_bounds(shape, placement, density):
    surface = placement.apply(shape.facets(96).points)
    moments = placement.place(shape.moments())
    # An inscribed surface lies up to 1 − cos(π/96) inside the true one.
    margin = 1e-3 * np.ptp(surface, axis=0).max()
    bounds = np.array([surface.min(axis=0) - margin, surface.max(axis=0) + margin])
    reach = np.linalg.norm(surface - moments.centre, axis=1).max()
    checks = check_body(
        moments.times(density), name="part", volume=float(moments.mass), reach=float(reach), bounds=bounds
    )
    assert failing(checks) == []
    assert [check.name for check in checks] == [
        "mass",
        "symmetric tensor",
        "principal moments",
        "density",
        "centre within the part",
        "radius of gyration",
    ]


@pytest.mark.parametrize(
    "diagonal", [[1.0, 1.0, 0.0], [1.0, 1.0, 2.0], [0.0, 0.0, 0.0]], ids=["rod", "disc", "point"]
)
@given(directions, st.floats(-3, 3), points)
def test_an_ideal_rod_disc_and_point_pass_after_a_turn_and_two_shifts(diagonal, direction, angle, place):
    turn = turn_about(direction, angle)
    tensor = turn @ np.diag(diagonal) @ turn.T
    far = 1000 * place
    about_far = Moments.from_inertia(2.0, ORIGIN, tensor).inertia_about_point(far)
    again = Moments.from_inertia_about_point(2.0, ORIGIN, far, about_far)
    # Two shifts over up to 1700 m cost round-off of 2·1700²·2⁻⁵² kg·m², below 1e-6 of 1 kg·m²; a point has no size
    # of its own to judge that by, so it is shifted as it is.
    moments = again if any(diagonal) else Moments(2.0, far, np.zeros((3, 3)))
    assert failing(check_body(moments, name="part")) == []


@given(directions, st.floats(-3, 3))
def test_a_thin_disc_read_from_three_printed_figures_passes(direction, angle):
    turn = turn_about(direction, angle)
    assert failing(check_inertia_tensor(2.0, turn @ np.diag([0.626, 0.623, 1.25]) @ turn.T, "disc")) == []


@given(realisable_moments(), points)
def test_a_data_sheet_tensor_about_any_point_passes_when_the_lever_is_given(moments, point):
    tensor = moments.inertia_about_point(point)
    assert (
        failing(check_inertia_tensor(float(moments.mass), tensor, "part", lever=moments.centre - point)) == []
    )


@given(realisable_moments(), points, directions)
def test_the_true_inertia_about_an_axis_passes(moments, point, direction):
    stated = float(moments.inertia_about_axis(point, direction))
    assert check_axis_inertia(moments, point, direction, stated=stated, name="part").ok


# ------------------------------------------------------------------ what cannot is named


@pytest.mark.parametrize(
    ("mass", "text"),
    [
        (0.0, "hub: a mass is more than 0 kg, but it is 0 kg. Choose its material or enter its mass."),
        (
            -1.25,
            (
                "hub: a mass is more than 0 kg, but it is -1.25 kg. "
                "Likely cause: more is cut away than there is; or the sign is wrong."
            ),
        ),
    ],
)
def test_a_mass_of_nothing_or_less_is_named(mass, text):
    assert check_mass(mass, "hub") == Check("mass", ok=False, text=text)
    assert failing(check_body(Moments(mass, ORIGIN, np.zeros((3, 3))), name="hub")) == [text]


def test_a_number_that_is_not_finite_is_named_alone():
    moments = Moments(np.nan, ORIGIN, np.full((3, 3), np.inf))
    assert failing(check_body(moments, name="hub")) == ["hub: not a finite number: mass, inertia."]
    assert failing(check_inertia_tensor(1.0, np.full((3, 3), np.nan), "hub")) == [
        "hub: not a finite number: inertia."
    ]


RULE = "motor: a principal moment about the centre of mass is at most the sum of the other two, "


@pytest.mark.parametrize(
    ("diagonal", "text"),
    [
        (
            [1, 1, 2.5],
            (
                "but 2.5 is more than 1 + 1 = 2 kg·m². "
                "Likely cause: Izz is 10 times too large (2.5 instead of 0.25 kg·m²)."
            ),
        ),
        (
            [0.0125, 1.2, 1.25],
            (
                "but 1.25 is more than 0.0125 + 1.2 = 1.212 kg·m². "
                "Likely cause: Ixx is 10 times too small (0.0125 instead of 0.125 kg·m²)."
            ),
        ),
        (
            [150, 1, 1],
            (
                "but 150 is more than 1 + 1 = 2 kg·m². "
                "Likely cause: Ixx is 100 times too large (150 instead of 1.5 kg·m²)."
            ),
        ),
    ],
)
def test_a_broken_triangle_inequality_names_the_moment_whose_power_of_ten_would_mend_it(diagonal, text):
    assert failing(check_body(body(2.0, diagonal), name="motor")) == [RULE + text]


def test_a_broken_triangle_inequality_that_no_single_slip_explains_points_to_the_source():
    (text,) = failing(check_body(body(2.0, [1, 1e9, 1e5]), name="motor"))
    assert text.startswith(f"{RULE}but 1e+09 is more than 1 + 100000 = ")
    assert text.endswith(SOURCE)


def test_a_value_about_the_centre_that_was_moved_as_if_about_the_origin_is_recognised():
    # 1 kg·m² about the centre; taken as if about the origin, 2 kg at 1 m take 2 kg·m² away.
    wrong = Moments(
        2.0, [1, 0, 0], Moments.from_inertia(2.0, ORIGIN, np.eye(3)).spread - np.diag([2.0, 0, 0])
    )
    (text,) = failing(check_body(wrong, name="motor"))
    assert text == (
        "motor: no principal moment about the centre of mass is negative, but one is -1 kg·m², beside -1 and 1 kg·m². "
        "Likely cause: the tensor is about the centre of mass, not about the origin."
    )


def test_a_tensor_too_small_for_its_lever_is_taken_for_one_about_the_centre():
    (text,) = failing(check_inertia_tensor(2.0, np.diag([1, 1, 1.2]), "motor", lever=[2, 0, 0]))
    assert text.startswith(
        "motor: no principal moment about the centre of mass is negative, but one is -7 kg·m²"
    )
    assert text.endswith(
        "Likely cause: the tensor is about the centre of mass, not about the origin; or the mass is 100 times too large."
    )


def test_products_of_inertia_with_the_other_sign_are_recognised():
    tensor = np.array([[1, 0.4, 0.4], [0.4, 1, 0.4], [0.4, 0.4, 1]])
    (text,) = failing(check_inertia_tensor(2.0, tensor, "motor"))
    assert text == (
        f"{RULE}but 1.8 is more than 0.6 + 0.6 = 1.2 kg·m². "
        "Likely cause: the products of inertia have the other sign (+∫xy dm)."
    )


@pytest.mark.parametrize(
    ("other", "cause"),
    [
        (-0.1, "Likely cause: one of them has the wrong sign."),
        (0.01, "Likely cause: the decimal point of one of them is off by a factor of 10."),
        (0.0001, "Likely cause: the decimal point of one of them is off by a factor of 1000."),
        (0.03, SOURCE),
    ],
)
def test_a_tensor_that_is_not_symmetric_names_the_pair_and_the_slip(other, cause):
    tensor = np.array([[1, 0, 0.1], [0, 1, 0], [other, 0, 1]])
    check = check_symmetric(tensor, "motor")
    assert not check.ok
    assert (
        check.text
        == f"motor: Ixz and Izx of an inertia tensor are equal, but they are 0.1 and {other:g} kg·m². {cause}"
    )
    assert failing(check_inertia_tensor(1.0, tensor, "motor")) == [check.text]


@pytest.mark.parametrize(
    ("mass", "volume", "found", "causes"),
    [
        (
            7.85,
            1e-6,
            "7850000",
            "the mass is in g and was read as kg; or the lengths are in cm and were read as mm",
        ),
        (
            7.85,
            1.0,
            "7.85",
            "the mass is in kg and was read as g; or the lengths are in mm and were read as cm",
        ),
        (7850.0, 25.4**-3, "", "the lengths are in inches and were read as mm"),
        (7.85e-6, 1.0, "7.85e-06", "the lengths are in mm and were read as m"),
    ],
)
def test_a_density_that_no_solid_has_names_the_unit_that_would_explain_it(mass, volume, found, causes):
    check = check_density(mass, volume, "hub")
    assert not check.ok
    assert check.text.startswith("hub: a density lies between 20 and 23000 kg/m³, but ")
    assert not found or float(check.text.split(" are ")[1].split(" ")[0]) == float(found)
    assert check.text.endswith(f"Likely cause: {causes}.")


@pytest.mark.parametrize("density", [20.0, 2700.0, 23_000.0])
def test_a_density_at_or_between_the_limits_passes(density):
    assert check_density(density * 0.5, 0.5, "hub").ok


@pytest.mark.parametrize("density", [19.99, 23_010.0])
def test_a_density_just_beyond_the_limits_fails(density):
    assert not check_density(density, 1.0, "hub").ok


def test_a_volume_that_is_not_more_than_nothing_points_to_the_mesh():
    assert check_density(1.0, -2e-6, "hub").text == (
        "hub: a volume is more than 0 m³, but it is -2e-06 m³. Likely cause: the mesh is open or inside out."
    )


GYRATION = (
    "motor: a radius of gyration is at most the distance from the centre of mass to the farthest point, "
)


@pytest.mark.parametrize(
    ("inertia", "shown", "causes"),
    [
        # 1 kg within 0.1 m: at most 0.01 kg·m².
        (
            0.0251,
            "0.1584",
            "the inertia is 10 times too large or the mass too small; or it is a flywheel effect GD², which is 4 J",
        ),
        (50.0, "7.071", "it is in kg·cm² and was read as kg·m²"),
        (20.0, "4.472", "it is in kg·cm² and was read as kg·m²; or it is in lb·in² and was read as kg·m²"),
        (5000.0, "70.71", "it is in kg·mm² and was read as kg·m²; or it is in g·cm² and was read as kg·m²"),
    ],
)
def test_a_radius_of_gyration_beyond_the_part_names_the_unit_that_would_explain_it(inertia, shown, causes):
    check = check_gyration(body(1.0, [inertia] * 3), 0.1, "motor")
    assert not check.ok
    assert check.text == f"{GYRATION}but {shown} m is more than 0.1 m. Likely cause: {causes}."


def test_a_tensor_about_the_origin_taken_as_about_the_centre_is_recognised():
    # A point-like part 1 m from the origin: 1.001 kg·m² about the origin, 0.001 about its centre.
    about_origin = body(1.0, [0.001] * 3, np.array([1.0, 0, 0])).inertia_about_point(ORIGIN)
    wrong = Moments.from_inertia(1.0, [1.0, 0, 0], about_origin)
    check = check_gyration(wrong, 0.1, "motor")
    assert (
        "Likely cause: the tensor is about the origin and was read as about the centre of mass" in check.text
    )


def test_a_sphere_shell_just_within_its_own_radius_passes_and_one_beyond_it_fails():
    # Six points on the axes of a sphere: J = 2/3 m r² about every axis.
    assert check_gyration(body(3.0, [2.0] * 3), (2 / 3) ** 0.5, "shell").ok
    assert not check_gyration(body(3.0, [2.0] * 3), (2 / 3) ** 0.5 * 0.999, "shell").ok


BOUNDS = [[-0.2, -0.2, 0.0], [0.2, 0.2, 0.5]]


@pytest.mark.parametrize(
    ("centre", "found", "causes"),
    [
        (
            [0, 0, 300.0],
            "z = 300 m is not between 0 and 0.5 m",
            "the centre is in mm and was read as m; or it is given in another frame than the part's shape",
        ),
        (
            [0, 0, -0.25],
            "z = -0.25 m is not between 0 and 0.5 m",
            "the sign of z is wrong; or it is given in another frame than the part's shape",
        ),
        (
            [0.9, 0, 0.25],
            "x = 0.9 m is not between -0.2 and 0.2 m",
            "the centre is in mm and was read as m; or the centre is in mm and was read as cm",
        ),
    ],
)
def test_a_centre_outside_the_part_names_the_coordinate_and_the_slip(centre, found, causes):
    assert check_centre(centre, BOUNDS, "hub").text == (
        f"hub: a centre of mass lies within the box around the part, but its {found}. Likely cause: {causes}."
    )


def test_a_centre_on_the_edge_of_a_flat_part_passes():
    assert check_centre([0.1, 0.1, 1e-9], [[0, 0, 0], [0.2, 0.2, 0]], "sheet").ok


def test_a_stated_inertia_below_the_one_about_the_centre_is_named():
    check = check_axis_inertia(body(2.0, [1, 1, 1]), [1, 0, 0], [0, 0, 1], stated=0.9, name="arm")
    assert check.text == (
        "arm: J about an axis is at least J about the parallel axis through the centre of mass, but 0.9 is less than "
        "1 kg·m². With m·d² it would be 3 kg·m². Likely cause: it is 10 times too small."
    )


def test_numbers_that_differ_late_are_shown_with_the_digits_that_differ():
    (text,) = failing(check_body(body(1.0, [1.0, 1.0, 2.00001]), name="disc"))
    assert "2.00001 is more than 1 + 1 = 2 kg·m²" in text


@given(st.lists(realisable_moments(), min_size=1, max_size=5), st.floats(1e-9, 1e3), st.floats(0.01, 10))
def test_a_body_found_surely_sound_among_many_keeps_every_check_alone(bodies, volume, size):
    bounds = np.stack([np.stack([one.centre - size, one.centre + size]) for one in bodies])
    volumes = np.array([np.nan if at % 2 else volume for at in range(len(bodies))])
    batch = Moments(
        np.array([one.mass for one in bodies]), np.array([one.centre for one in bodies]),
        np.array([one.spread for one in bodies]),
    )
    for at, sound in enumerate(surely_sound(batch, volumes, bounds)):
        alone = check_body(
            bodies[at], name="body", volume=None if np.isnan(volumes[at]) else volume, bounds=bounds[at]
        )
        if sound:
            assert all(check.ok for check in alone), alone


def test_plain_machine_parts_are_found_surely_sound_and_impossible_ones_are_not():
    bar = Cylinder(0.05, 0.2)
    steel = bar.moments().with_mass(7850.0 * float(bar.moments().mass))
    gold = bar.moments().with_mass(50_000.0 * float(bar.moments().mass))
    away = steel.mapped(np.eye(3), [0.0, 0.0, 5.0])
    batch = Moments(
        np.array([one.mass for one in (steel, gold, away)]), np.array([one.centre for one in (steel, gold, away)]),
        np.array([one.spread for one in (steel, gold, away)]),
    )
    volume = np.full(3, float(bar.moments().mass))
    assert surely_sound(batch, volume, np.stack([bar.box()] * 3)).tolist() == [True, False, False]
