"""The points of an outline as numbers of a line: typed with named dimensions, they follow them."""

from __future__ import annotations

import pytest

from core.assembly import Assembly, Cut, Part, ShapeBody
from core.assembly.fields import kind_of, typed_for, value_of, with_typed, with_value, with_values, words_of
from core.assembly.names import NameEntry
from core.assembly.naming import uses_of, with_entry, with_name_changed
from core.assembly.outline_numbers import outline_path, with_places_moved
from core.document import read_document, save_document
from core.errors import EditRefused
from core.machine import Machine
from core.material import ByDensity
from core.quantity import Kind
from core.shapes import SHAPES, Outline

# A rectangle 80 × 50 mm, 10 mm thick.
RECTANGLE = Outline.of([(0, 0, 0, 0), (0.08, 0, 0, 0), (0.08, 0.05, 0, 0), (0, 0.05, 0, 0)])


def plate() -> Part:
    shape = SHAPES["extruded profile"].of({"length": 0.01}, RECTANGLE)
    return Part("p", "plate", ShapeBody(shape), ByDensity(2700.0))


def named() -> Assembly:
    """Return the plate, its width named twice: 80 mm at two of its points."""
    assembly = with_entry(Assembly("a", (plate(),)), NameEntry("wide", "80 mm"))
    part = assembly.node("p")
    for point in (1, 2):
        part = with_typed(part, outline_path(0, point, 0), "wide")
    return assembly.replaced(part)


def test_a_number_of_an_outline_is_known_under_its_path():
    part = plate()
    assert value_of(part, "outline.0.2.1") == 0.05
    assert kind_of(part, "outline.0.2.1") == Kind.LENGTH
    assert words_of(part, "outline.0.2.1") == "point 3, y"
    assert with_value(part, "outline.0.2.2", 0.01).body.shape.outline.loops[0][2].rounding == 0.01


@pytest.mark.parametrize("path", ["outline.1.0.0", "outline.0.4.0", "outline.0.0.4", "outline.0.0", "outline.0.x.1"])
def test_a_point_that_is_not_there_has_no_number(path):
    assert value_of(plate(), path) is None
    with pytest.raises(EditRefused, match="no such number"):
        with_value(plate(), path, 0.1)


def test_an_outline_follows_a_named_dimension_with_mass_and_all():
    after = with_entry(named(), NameEntry("wide", "120 mm"))
    part = after.node("p")
    assert [tuple(point[:2]) for point in part.body.shape.outline.loops[0]] == [(0, 0), (0.12, 0), (0.12, 0.05), (0, 0.05)]
    assert float(part.single.mass) == pytest.approx(2700 * 0.12 * 0.05 * 0.01, rel=1e-12)
    assert typed_for(part, "outline.0.1.0") == "wide"
    assert [use.where for use in uses_of(after, "wide")] == ["plate, point 2, x", "plate, point 3, x"]


def test_renaming_goes_through_to_the_points_of_an_outline():
    after = with_entry(with_name_changed(named(), "wide", "w"), NameEntry("w", "90 mm"))
    assert after.node("p").body.shape.outline.loops[0][1].x == 0.09


def test_a_value_that_bounds_no_area_is_refused_with_the_line_and_the_name():
    with pytest.raises(EditRefused, match="plate → wide"):
        with_entry(named(), NameEntry("wide", "0 mm"))


def test_the_outline_of_a_cut_follows_too_and_dimensions_beside_it():
    profile = SHAPES["extruded profile"].of({"length": 0.01}, RECTANGLE)
    cut = with_values(Cut("c", "slot", profile), {"outline.0.1.0": 0.06, "outline.0.2.0": 0.06, "dimension.length": 0.004})
    assert [point.x for point in cut.shape.outline.loops[0]] == [0, 0.06, 0.06, 0]
    assert cut.shape.values()["length"] == 0.004


def test_texts_go_with_their_points():
    part = named().node("p")
    later = with_places_moved(part, lambda loop, point: (loop, point + (point >= 2)))
    assert [path for path, _ in later.typed] == ["outline.0.1.0", "outline.0.3.0"]
    gone = with_places_moved(part, lambda loop, point: None if point == 1 else (loop, point - 1))
    assert [path for path, _ in gone.typed] == ["outline.0.1.0"]
    assert with_places_moved(part, lambda loop, point: (loop, point)) is part


def test_a_document_keeps_the_texts_of_an_outline(tmp_path):
    save_document(Machine(named()), tmp_path / "plate.masswright")
    assert read_document(tmp_path / "plate.masswright").assembly == named()
