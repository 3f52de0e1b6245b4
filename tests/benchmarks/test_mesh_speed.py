"""How fast and in how much memory a large binary STL file is surveyed, beside two peers in the same run.

Run with --benchmark-only. The ratios are printed; times are not asserted, since machines and their load differ.
"""

import os
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pytest
from mesh_files import binary_stl, records, ring_grid

from core.mesh import count_shells, survey_file

MILLIONS = int(os.environ.get("MASSWRIGHT_BENCH_MILLIONS", "2"))
ROUNDS = 5

# The kernel's own mark of the highest resident size: getrusage would count what the parent held when it forked.
MEMORY_SCRIPT = """
import sys
from core.mesh import {function}
print({function}(sys.argv[1]))
print(next(line.split()[1] for line in open("/proc/self/status") if line.startswith("VmHWM")))
"""


@pytest.fixture(scope="module")
def large(tmp_path_factory):
    path = tmp_path_factory.mktemp("mesh") / "ring.stl"
    path.write_bytes(binary_stl(ring_grid(1000 * MILLIONS, 500)))
    yield path
    path.unlink()


def plain_pass(path: Path) -> int:
    """Read a file once and add up its bytes as 64-bit numbers, in a buffer that is used again."""
    buffer = bytearray(1 << 20)
    total = 0
    with path.open("rb", buffering=0) as file:
        while got := file.readinto(buffer):
            total += int(np.frombuffer(buffer, np.uint64, got // 8).sum())
    return total


def whole_pass(path: Path) -> int:
    """Read a file whole and add up its bytes as 64-bit numbers."""
    data = path.read_bytes()
    return int(np.frombuffer(data, np.uint64, len(data) // 8).sum())


def peer(path: Path) -> tuple[bool, np.ndarray]:
    import trimesh

    mesh = trimesh.load(path)
    return mesh.is_watertight, mesh.moment_inertia


def seconds(function, path: Path, rounds: int) -> float:
    times = []
    for _ in range(rounds):
        start = time.perf_counter()
        function(path)
        times.append(time.perf_counter() - start)
    return min(times)


@pytest.mark.timeout(900)
def test_survey_beside_a_plain_pass_and_a_mesh_library(benchmark, large, capsys):
    survey_file(large)
    plain, whole = seconds(plain_pass, large, ROUNDS), seconds(whole_pass, large, ROUNDS)
    survey = benchmark.pedantic(survey_file, (large,), rounds=ROUNDS)
    library = seconds(peer, large, 1)
    ours = benchmark.stats.stats.min
    assert survey.verdict == "closed"
    benchmark.extra_info.update(library_over_ours=library / ours, ours_over_whole_pass=ours / whole, ours_over_plain_pass=ours / plain)
    with capsys.disabled():
        print(  # noqa: T201  # the ratios are what the run is for
            f"\n{survey.triangles} facets: survey {ours * 1e3:.0f} ms ({survey.triangles / ours / 1e6:.1f} M facets/s),"
            f" mesh library {library:.2f} s = {library / ours:.0f} times as long,"
            f" {ours / whole:.1f} times reading the file whole and adding up its words ({whole * 1e3:.0f} ms),"
            f" {ours / plain:.1f} times doing so in one small buffer ({plain * 1e3:.1f} ms)"
        )


@pytest.mark.timeout(900)
def test_shells_of_a_large_file(benchmark, large):
    assert benchmark.pedantic(count_shells, (large,), rounds=1) == 1


@pytest.mark.timeout(900)
@pytest.mark.skipif(sys.platform != "linux", reason="the highest resident size is read from /proc")
@pytest.mark.parametrize("function", ["survey_file", "count_shells"])
def test_peak_memory_of_ten_million_facets(benchmark, tmp_path, capsys, function):
    path = tmp_path / "ring.stl"
    facets = ring_grid(1000, 500)
    with path.open("wb") as file:
        file.write(bytes(80) + (10 * len(facets)).to_bytes(4, "little"))
        for step in range(10):
            file.write(records(facets + np.float32(100 * step)))
    command = [sys.executable, "-c", MEMORY_SCRIPT.format(function=function), str(path)]

    def run() -> str:
        return subprocess.run(command, check=True, capture_output=True, text=True, cwd=Path(__file__).parents[2]).stdout

    out = benchmark.pedantic(run, rounds=1)
    path.unlink()
    megabytes = int(out.splitlines()[-1]) // 1024
    with capsys.disabled():
        print(f"\n{function} of 10 million facets: peak memory {megabytes} MB")  # noqa: T201  # as above
    assert megabytes < 250
