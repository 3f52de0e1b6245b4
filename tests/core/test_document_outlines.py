"""Bodies made from outlines in a document: they come back as they were, and a broken one is named with its place."""

from __future__ import annotations

import json

import pytest
from documents import BY_HAND, packed, refusal_of, saved, unpacked
from hypothesis import given, settings
from strategies import OWN_STRATEGIES

from core.assembly import Assembly, DriveAxis, Part, ShapeBody
from core.document import read_document_bytes, save_document
from core.machine import Machine
from core.material import NotSet
from core.shapes import Cylinder, Extruded, Outline
from core.shapes.profile import MOST_POINTS, circle_loop, rectangle_loop

PLATE = Extruded(Outline((rectangle_loop(0.08, 0.05, rounding=0.008), circle_loop(0.02, 0.03, 0.02))), 0.01)


def assembly_of(shape) -> Assembly:
    return Assembly("one", (Part("a", "plate", ShapeBody(shape), NotSet()),), (DriveAxis("Spindle"),))


def changed(document: bytes, change) -> bytes:
    entries = unpacked(document)
    data = json.loads(entries["assembly.json"])
    change(data["members"][0]["body"])
    return packed({**entries, "assembly.json": json.dumps(data).encode()})


@pytest.mark.parametrize("key", ["extruded profile", "turned profile"])
def test_a_body_from_an_outline_comes_back_equal(tmp_path, key):
    path = tmp_path / "one.masswright"

    @settings(max_examples=20)
    @given(shape=OWN_STRATEGIES[key])
    def holds(shape):
        assembly = assembly_of(shape)
        save_document(Machine(assembly), path)
        assert read_document_bytes(path.read_bytes(), "one").assembly == assembly

    holds()


def test_an_outline_is_written_by_its_points(tmp_path):
    body = json.loads(unpacked(saved(tmp_path, assembly_of(PLATE)))["assembly.json"])["members"][0]["body"]
    assert body["dimensions"] == {"length": 0.01}
    assert [len(loop["points"]) for loop in body["outline"]] == [4, 2]
    assert body["outline"][0]["points"][2] == [0.08, 0.05, 0.008, 0.0]


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (
            lambda body: body["outline"][0]["points"].__setitem__(2, [0.08, 0.05]),
            "members[0].body.outline[0].points[2][2] (plate): this entry is missing (the first of 2 such places).",
        ),
        (
            lambda body: body["outline"][0]["points"].__setitem__(1, [0.0, 0.0, 0.0, 0.0]),
            "members[0].body (plate), outline: point 1 at (0, 0) mm lies where point 2 lies. Leave one of them out.",
        ),
        (lambda body: body.pop("outline"), f"members[0].body (plate), extruded profile: the outline is missing. {BY_HAND}"),
        (
            lambda body: body["outline"][0].update(points=[[0.0, 0.0, 0.0, 0.0]] * (MOST_POINTS + 1)),
            "members[0].body.outline[0].points (plate): this holds more than 10000 values",
        ),
    ],
)  # fmt: skip
def test_a_broken_outline_is_named_with_its_place(tmp_path, change, sentence):
    assert sentence in refusal_of(changed(saved(tmp_path, assembly_of(PLATE)), change))


def test_a_shape_without_an_outline_takes_none(tmp_path):
    document = saved(tmp_path, assembly_of(Cylinder(0.1, 0.02)))
    corners = [[0.0, 0.0, 0.0, 0.0], [1.0, 0.0, 0.0, 0.0], [0.0, 1.0, 0.0, 0.0]]
    text = refusal_of(changed(document, lambda body: body.update(outline=[{"points": corners}])))
    assert text == f"dial.masswright, members[0].body (plate), cylinder: this shape has no outline. {BY_HAND}"
