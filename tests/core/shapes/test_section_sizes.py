"""The table of EN sizes: each one makes a section, and has its printed area."""

from __future__ import annotations

import pytest

from core.errors import ShapeError
from core.shapes import Section
from core.shapes.sections import section_named, section_sizes

# Printed areas in cm², from memory, in the order of the table: independent of the dimensions, which they check.
AREAS = {
    "IPE": "7.64 10.3 13.2 16.4 20.1 23.9 28.5 33.4 39.1 45.9 53.8 62.6 72.7 84.5 98.8 116 134 156",
    "HE A": "21.2 25.3 31.4 38.8 45.3 53.8 64.3 76.8 86.8 97.3 112.5 124.4 133.5 142.8 159.0 178.0 197.5 211.8 226.5",
    "HE B": "26.0 34.0 43.0 54.3 65.3 78.1 91.0 106.0 118.4 131.4 149.1 161.3 170.9 180.6 197.8 218.0 238.6 254.1 270.0",
    "IPN": "7.57 10.6 14.2 18.2 22.8 27.9 33.4 39.5 46.1 53.3 61.0 69.0",
    "UPN": "11.0 13.5 17.0 20.4 24.0 28.0 32.2 37.4 42.3 48.3 53.3 58.8",
    "UPE": "10.1 12.5 15.4 18.4 21.7 25.1 29.0 33.9 38.5 44.8 56.6",
    "L": (
        "1.12 1.42 1.74 2.27 2.67 3.08 3.79 3.90 4.80 5.69 5.82 6.91 9.03 8.70 8.13 9.40 8.73 11.4 12.3 15.1 "
        "12.2 13.9 15.5 15.5 19.2 22.7 23.2 27.5 34.8 43.0 55.4 61.8 76.3 "
        "4.79 5.68 5.54 7.19 9.41 6.89 9.38 8.71 11.4 11.2 12.7 13.5 16.6 15.5 19.1 21.7 24.2 28.7 29.2 34.8 40.8"
    ),
}


@pytest.mark.parametrize("series", AREAS)
def test_every_size_has_its_printed_area(series):
    sizes = [size for size in section_sizes().values() if size.series == series]
    printed = AREAS[series].split()
    assert len(sizes) == len(printed)
    for size, text in zip(sizes, printed, strict=True):
        section = size.section(1.0)
        assert isinstance(section, Section)
        decimals = len(text.partition(".")[2])
        # Some tables cut where others round, and differ by 0.2 %; a tenth of a mm in a thickness shows beyond that.
        slack = max(1.01 * 10.0**-decimals, 2.3e-3 * float(text))
        assert float(section.plane.area) * 1e4 == pytest.approx(float(text), abs=slack), size.name


def test_every_size_makes_a_section_and_names_its_source():
    for name, size in section_sizes().items():
        assert size.name == name
        assert isinstance(size.section(2.0), Section)
        assert size.section(2.0).values() == {**size.dimensions, "length": 2.0}
        assert "from memory" in size.source


def test_no_two_sizes_are_spelled_alike():
    assert {section_named(name).name for name in section_sizes()} == set(section_sizes())


@pytest.mark.parametrize(
    ("typed", "name"),
    [
        ("ipe200", "IPE 200"), ("HEA 200", "HE 200 A"), ("he 200 a", "HE 200 A"), ("HEB300", "HE 300 B"),
        ("L 50×5", "L 50x50x5"), ("l50x50x5", "L 50x50x5"), ("SHS 100x5 hot", "SHS 100x100x5 hot"),
        ("chs 88,9 x 5", "CHS 88.9x5"), ("RHS 120 × 80 × 5 cold", "RHS 120x80x5 cold"),
    ],
)  # fmt: skip
def test_a_name_is_known_however_it_is_spelled(typed, name):
    assert section_named(typed).name == name


def test_a_name_that_is_not_in_the_table_is_refused_with_the_nearest_ones():
    with pytest.raises(ShapeError) as refusal:
        section_named("IPE 210")
    assert str(refusal.value).startswith('section: there is no such size in the table; read "IPE 210". Choose from IPE')
    with pytest.raises(ShapeError) as refusal:
        section_named("")
    assert str(refusal.value) == (
        'section: there is no such size in the table; read "". Write a name such as "IPE 200".'
    )
