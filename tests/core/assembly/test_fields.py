"""Every number that a person types about a line: read, changed and named under one path."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st
from strategies import COORDINATES

from core.assembly import Cut, DataSheet, Group, KnownAxial, KnownTensor, Part, ShapeBody
from core.assembly.fields import kind_of, typed_for, value_of, with_typed, with_value, with_values, words_of
from core.errors import EditRefused, QuantityError, ShapeError
from core.material import ByDensity, PerArea, PerLength, Weighed
from core.placement import Mirrored, Ring, Row
from core.quantity import Kind
from core.shapes import SHAPES, Box, Cylinder, Tube

TUBE = Part("a", "rim", ShapeBody(Tube(0.4, 0.38, 0.02)), ByDensity(7850.0), copies=Ring(3))
BORE = Cut("c", "bore", Cylinder(0.01, 0.02), copies=Row(2))
ROTOR = Part("d", "rotor", KnownTensor(1.0, (0.0, 0.0, 0.0), (1e-3, 1e-3, 1e-3, 0.0, 0.0, 0.0)), DataSheet())
DISC = Part("e", "disc", KnownAxial(1.0, (0.0, 0.0, 0.0), 1e-3), DataSheet(), copies=Mirrored())
GROUP = Group("g", "dial", (TUBE,), copies=Ring(2))

PATHS = [
    (TUBE, "dimension.outer_diameter", Kind.LENGTH, 0.5), (TUBE, "density", Kind.DENSITY, 1000.0),
    (TUBE, "copies.count", Kind.NUMBER, 5.0), (TUBE, "copies.start", Kind.ANGLE, 0.3), (TUBE, "copies.span", Kind.ANGLE, 1.0),
    *[(TUBE, f"copies.point.{at}", Kind.LENGTH, 0.7) for at in range(3)],
    *[(TUBE, f"copies.direction.{at}", Kind.NUMBER, 0.7) for at in range(3)],
    *[(GROUP, f"position.{at}", Kind.LENGTH, -0.7) for at in range(3)],
    *[(GROUP, f"turn.{at}", Kind.ANGLE, 0.7) for at in range(3)],
    (BORE, "dimension.diameter", Kind.LENGTH, 0.011), *[(BORE, f"copies.step.{at}", Kind.LENGTH, 0.3) for at in range(3)],
    (BORE, "position.2", Kind.LENGTH, 0.001), (ROTOR, "known.mass", Kind.MASS, 2.0),
    *[(ROTOR, f"known.centre.{at}", Kind.LENGTH, 0.2) for at in range(3)],
    *[(ROTOR, f"known.tensor.{at}", Kind.INERTIA, 2e-3) for at in range(6)],
    (DISC, "known.axial", Kind.INERTIA, 2e-3), (DISC, "known.length", Kind.LENGTH, 0.1),
    *[(DISC, f"copies.normal.{at}", Kind.NUMBER, 0.5) for at in range(3)],
]


@pytest.mark.parametrize(("line", "path", "kind", "value"), PATHS, ids=[f"{line.name} {path}" for line, path, *_ in PATHS])
def test_a_number_put_under_a_path_is_read_there_and_no_other_one_changes(line, path, kind, value):
    changed = with_value(line, path, value)
    assert kind_of(line, path) is kind
    assert value_of(changed, path) == value
    assert words_of(line, path)
    before = {other: value_of(line, other) for _, other, *_ in PATHS}
    after = {other: value_of(changed, other) for other in before}
    assert {other for other in before if before[other] != after[other]} == {path}


@pytest.mark.parametrize(
    ("path", "driver", "kind"),
    [("density", ByDensity(2.0), Kind.DENSITY), ("per area", PerArea(2.0), Kind.AREA_DENSITY),
     ("per length", PerLength(2.0), Kind.LINEAR_DENSITY), ("weighed", Weighed(2.0), Kind.MASS)],
)
def test_the_path_of_a_mass_says_what_counts_from_then_on(path, driver, kind):
    fitting = {"per area": "disc", "per length": "rod"}.get(path)
    part = TUBE if fitting is None else Part("a", "thin", ShapeBody(next(
        shape for shape in SHAPES.values() if shape.measure == path.removeprefix("per ")
    ).of({})))
    assert with_value(part, path, 2.0).driver == driver
    assert value_of(with_value(part, path, 2.0), path) == 2.0
    assert kind_of(part, path) is kind
    assert value_of(ROTOR, path) is None


@given(st.tuples(COORDINATES, COORDINATES, COORDINATES))
def test_three_numbers_are_put_in_together(triple):
    moved = with_values(TUBE, {f"position.{at}": triple[at] for at in range(3)})
    assert moved.pose.position == triple


def test_a_tube_grows_past_its_old_outside_when_both_diameters_change_at_once():
    grown = with_values(TUBE, {"dimension.bore": 0.78, "dimension.outer_diameter": 0.8})
    assert value_of(grown, "dimension.bore") == 0.78
    with pytest.raises(ShapeError):
        with_value(TUBE, "dimension.bore", 0.78)


def test_an_axis_turns_from_one_direction_to_another_without_a_zero_between():
    turned = with_values(TUBE, {"copies.direction.2": 0.0, "copies.direction.0": 1.0})
    assert turned.copies == replace(TUBE.copies, direction=(1.0, 0.0, 0.0))


@pytest.mark.parametrize(
    ("line", "path"),
    [(ROTOR, "dimension.diameter"), (GROUP, "known.mass"), (BORE, "copies.span"), (DISC, "copies.count"),
     (TUBE, "dimension.height"), (TUBE, "colour"), (DISC, "known.tensor.0"), (GROUP, "density"), (BORE, "weighed")],
)
def test_a_number_that_a_line_has_not_is_refused_with_the_line_named(line, path):
    with pytest.raises(EditRefused, match=line.name):
        with_value(line, path, 1.0)
    assert value_of(line, path) is None


def test_half_a_bolt_is_refused():
    with pytest.raises(QuantityError, match=r"rim: a quantity is a whole number; read 2\.5"):
        with_value(TUBE, "copies.count", 2.5)


def test_what_was_typed_is_kept_under_its_path_and_dropped_where_the_number_says_it_all():
    kept = with_typed(with_typed(TUBE, "position.0", "1 in"), "density", "1 kg/m^3")
    assert (typed_for(kept, "position.0"), typed_for(kept, "density"), typed_for(kept, "turn.0")) == ("1 in", "1 kg/m^3", "")
    assert with_typed(with_typed(kept, "density", ""), "position.0", "") == TUBE


def test_a_box_is_changed_in_all_its_dimensions():
    box = Part("b", "box", ShapeBody(Box(0.1, 0.2, 0.3)))
    names = [dimension.name for dimension in Box.dimensions]
    resized = with_values(box, {f"dimension.{name}": 1.0 + at for at, name in enumerate(names)})
    assert resized.body == ShapeBody(Box(1.0, 2.0, 3.0))
