"""How fast closed forms of many parameter sets at once are: 100,000 of each shape are to take less than 50 ms.

Run with --benchmark-only. Times are printed, and only compared with a limit far above, since machines differ.
"""

from __future__ import annotations

import time

import numpy as np
import pytest

from core.shapes import SHAPES, Shape

SETS = 100_000
ROUNDS = 7


def many(key: str) -> tuple[type[Shape], dict[str, np.ndarray]]:
    """The dimensions of SETS shapes that are up to 0.1 % smaller, all of them bodies; counts are those of the default."""
    rng = np.random.default_rng(7)
    family = SHAPES[key]
    spread = {one.name: 1e-3 if one.kind != "count" else 0.0 for one in family.dimensions}
    single = family.of({}).values()
    return family, {
        name: value * (1 + spread[name] * rng.uniform(-1, 0, SETS)) if spread[name] else np.full(SETS, value)
        for name, value in single.items()
    }


def least_seconds(family: type[Shape], values: dict[str, np.ndarray]) -> float:
    times = []
    for _ in range(ROUNDS):
        start = time.perf_counter()
        family.of(values).moments()
        times.append(time.perf_counter() - start)
    return min(times)


@pytest.mark.parametrize("key", sorted(SHAPES))
def test_a_hundred_thousand_sets_of_dimensions(benchmark, capsys, key: str):
    family, values = many(key)
    benchmark.pedantic(lambda: family.of(values).moments(), rounds=1)
    seconds = least_seconds(family, values)
    benchmark.extra_info.update(milliseconds=seconds * 1e3)
    with capsys.disabled():
        print(f"\n{key}: {SETS} sets in {seconds * 1e3:.1f} ms, made and integrated")  # noqa: T201  # what the run is for
