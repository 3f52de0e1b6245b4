"""How long a plain `masswright weigh` takes to start, against the one import it cannot do without."""

from __future__ import annotations

import statistics
import struct
import subprocess
import sys
import time
from pathlib import Path

import pytest

ROUNDS = 15
AT_MOST_TIMES_NUMPY = 2.5

CORNERS = ((0, 0, 0), (10, 0, 0), (0, 10, 0), (0, 0, 10))
FACETS = ((0, 2, 1), (0, 1, 3), (1, 2, 3), (0, 3, 2))


@pytest.fixture
def small_stl(tmp_path: Path) -> Path:
    path = tmp_path / "small.stl"
    facets = (struct.pack("<12fH", 0, 0, 0, *(x for v in f for x in CORNERS[v]), 0) for f in FACETS)
    path.write_bytes(b"\0" * 80 + struct.pack("<I", len(FACETS)) + b"".join(facets))
    return path


def seconds(command: list[str]) -> float:
    start = time.perf_counter()
    subprocess.run(command, check=True, capture_output=True)
    return time.perf_counter() - start


@pytest.mark.benchmark(group="start-up")
def test_weighing_a_small_mesh_starts_within_two_and_a_half_numpy_imports(benchmark, small_stl: Path) -> None:
    weigh = [str(Path(sys.executable).with_name("masswright")), "weigh", str(small_stl), "--material", "steel"]
    numpy = [sys.executable, "-c", "import numpy"]
    subprocess.run(weigh, check=True, capture_output=True)  # the first run writes the byte code
    yardstick: list[float] = []

    def import_numpy() -> tuple[tuple[list[str]], dict[str, object]]:
        yardstick.append(seconds(numpy))
        return (weigh,), {}

    # The set-up runs before each round, so the two alternate and share whatever else the machine does.
    benchmark.pedantic(seconds, setup=import_numpy, rounds=ROUNDS)
    ratio = benchmark.stats.stats.median / statistics.median(yardstick)
    benchmark.extra_info["times_numpy"] = round(ratio, 2)
    benchmark.extra_info["numpy_seconds"] = round(statistics.median(yardstick), 4)
    assert ratio <= AT_MOST_TIMES_NUMPY
