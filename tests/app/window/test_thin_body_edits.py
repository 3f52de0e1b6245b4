"""What typing into the ledger says about the mass of sheets, rods and point masses, and what is refused."""

from __future__ import annotations

import pytest

from app.window.ledger.edits import driver_of, made_of
from core.assembly import Assembly, Part, ShapeBody
from core.errors import MaterialError, QuantityError
from core.material import ByDensity, ByMaterial, NotSet, PerArea, PerLength, Weighed
from core.quantity import DEFAULT_UNITS
from core.shapes import SHAPES


def assembly_of(shape: str, driver: object = None) -> Assembly:
    return Assembly("a", (Part("k", "cover", ShapeBody(SHAPES[shape].of({})), driver or NotSet()),))


@pytest.mark.parametrize(
    ("text", "driver"),
    [
        ("12 kg/m²", PerArea(12.0)),
        ("0,8 kg/m", PerLength(0.8)),
        ("800 g/m", PerLength(0.8)),
        ("7850 kg/m³", ByDensity(7850.0)),
        ("1.2", Weighed(1.2)),
        ("steel", ByMaterial.named("steel")),
    ],
)
def test_the_unit_tells_what_a_number_says_about_the_mass(text, driver):
    assert driver_of(text, DEFAULT_UNITS, "cover") == driver


def test_a_number_with_another_unit_is_refused_with_all_that_can_be_typed():
    with pytest.raises(QuantityError) as refusal:
        driver_of("12 mm", DEFAULT_UNITS, "cover")
    assert str(refusal.value) == (
        'cover: this is no material, density or mass; read "12 mm". Type a material\'s name, a density like '
        '"7850 kg/m³", a weighed mass like "1.2 kg", or of a thin body its mass per area or length like "12 kg/m²" '
        'or "0.8 kg/m".'
    )


@pytest.mark.parametrize(
    ("shape", "text", "sentence"),
    [
        (
            "thin disc",
            "steel",
            ("cover: a density needs a volume, and the thickness of this body is not given; read steel. Give its mass "
            'per area (density times thickness) like "12 kg/m²", or weigh it.'),
        ),
        (
            "thin rod",
            "2700 kg/m³",
            ("cover: a density needs a volume, and the cross-section of this body is not given; read 2700 kg/m³. Give "
            'its mass per length (density times cross-section) like "0.8 kg/m", or weigh it.'),
        ),
        (
            "point mass",
            "steel",
            ("cover: a density needs a volume, and the size of this body is not given; read steel. Give its mass like "
            '"1.2 kg".'),
        ),
        (
            "box",
            "12 kg/m²",
            ("cover: a mass per area does not fit a body that has a volume; read 12 kg/m². Give a material, a density "
            'like "7850 kg/m³", or a weighed mass.'),
        ),
        (
            "spherical shell",
            "0.8 kg/m",
            ("cover: a mass per length does not fit a body that has an area; read 0.8 kg/m. Give its mass per area "
            '(density times thickness) like "12 kg/m²", or weigh it.'),
        ),
    ],
)
def test_what_does_not_fit_the_body_is_refused_with_what_is_missing(shape, text, sentence):
    with pytest.raises(MaterialError) as refusal:
        made_of("k", text, DEFAULT_UNITS)(assembly_of(shape))
    assert str(refusal.value) == sentence
