"""How long profiles take: an outline checked and integrated, sections drawn at random, a large outline pasted.

Times on two cores shared with other work are printed, and only held against limits far above what is usual.
"""

from __future__ import annotations

import numpy as np

from core.quantity import UNITS
from core.shapes import Extruded, ISection, Outline
from core.shapes.profile import circle_loop, outline_of_text, rectangle_loop


def test_an_edited_outline_is_checked_and_integrated(benchmark):
    widths = iter(np.linspace(0.08, 0.09, 1000))

    def edit() -> None:
        plate = Outline((rectangle_loop(next(widths), 0.05, rounding=0.008), circle_loop(0.02, 0.03, 0.02)))
        Extruded(plate, 0.02).moments()

    benchmark.pedantic(edit, rounds=20)
    assert benchmark.stats["min"] < 0.030


def test_a_hundred_thousand_sections_drawn_at_random(benchmark):
    rng = np.random.default_rng(7)
    number, a_few = 100_000, 4_000
    lengths = [np.abs(rng.normal(size, 1e-2 * size, number)) for size in (0.2, 0.1, 0.0056, 0.0085, 0.012, 1.0)]

    def draw() -> None:
        for first in range(0, number, a_few):
            ISection(*(values[first : first + a_few] for values in lengths)).moments()

    benchmark.pedantic(draw, rounds=2)
    assert benchmark.stats["min"] < 10.0


def test_an_outline_of_ten_thousand_points_is_pasted_and_drawn(benchmark):
    angle = np.linspace(0, 2 * np.pi, 10_000, endpoint=False)
    text = "\n".join(f"{x:.4f}\t{y:.4f}" for x, y in zip(50 * np.cos(angle), 50 * np.sin(angle), strict=True))
    benchmark.pedantic(lambda: Extruded(outline_of_text(text, UNITS["mm"]), 0.01).facets(), rounds=2)
    assert benchmark.stats["min"] < 3.0
