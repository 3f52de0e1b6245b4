"""Whatever bytes an STL reader is given: a mesh or a refusal in one line, in good time and bounded memory."""

import gzip
import time
import tracemalloc

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from mesh_files import ascii_stl, binary_stl, box, quartered

from core.errors import MeshFileError
from core.mesh import MeshAsset
from core.mesh.weld import clusters_within

BOX = box(40, 30, 20)
SOUND = [
    binary_stl(BOX), binary_stl(BOX[:-1]), binary_stl(BOX[:1]), ascii_stl(BOX, number="{:g}").encode(),
    ascii_stl(BOX[1:], end="\r", number="{:g}").encode(), ascii_stl(BOX[:1]).encode(),
]  # fmt: skip
PIECES = st.one_of(
    st.binary(max_size=8),
    st.sampled_from([
        b"facet normal 0 0 0\n", b"outer loop\n", b"vertex ", b"endfacet", b"endsolid", b"solid\n", b" 1e-200 ", b"1e-320",
        b"3.5e38", b"nan", b"1_0", b"1,5", b"-0", b"\r", b"\0", b"\xff\xff\x7f\x7f", b"\0\0\x80\x7f", b"\1\0\0\0",
    ]),
)
# Buffers of a fixed size, and what may come with each byte of a file; unpacked, where it is packed.
MEMORY_AT_ALL, MEMORY_PER_BYTE = 6 << 20, 20


def read_or_refused(data: bytes) -> MeshAsset | None:
    """Read bytes and check what comes out; None where they are refused in one line."""
    try:
        asset = MeshAsset.of_bytes(data, "part.stl")
    except MeshFileError as fault:
        refusal = str(fault)
    else:
        assert_sound(asset)
        return asset
    assert refusal.startswith("part.stl")
    assert "\n" not in refusal
    return None


def assert_sound(asset: MeshAsset) -> None:
    assert len(asset.triangles) == asset.survey.triangles >= 1
    assert np.isfinite(asset.triangles).all()
    assert 1 <= asset.count_shells() <= len(asset.triangles)
    solid = asset.survey.solid
    if solid is not None:
        assert solid.mass > 0
        assert np.isfinite(solid.centre).all()
        assert np.isfinite(solid.spread).all()


@st.composite
def mutated(draw: st.DrawFn) -> bytes:
    """The bytes of a sound file with a few pieces put in, put over or cut out."""
    data = draw(st.sampled_from(SOUND))
    for _ in range(draw(st.integers(0, 6))):
        place, piece = draw(st.integers(0, len(data))), draw(PIECES)
        data = data[:place] + piece + data[place + draw(st.sampled_from([0, len(piece), 1, 50])) :]
    return data


@given(st.one_of(st.binary(max_size=400), st.binary(max_size=400).map(b"solid ".__add__)))
def test_random_bytes_are_read_or_refused(data):
    read_or_refused(data)


@given(mutated())
@settings(max_examples=300)
def test_damaged_files_are_read_or_refused(data):
    read_or_refused(data)


@given(mutated(), st.integers(0, 400), st.binary(max_size=4))
def test_damaged_packed_files_are_read_or_refused(data, place, piece):
    packed = gzip.compress(data, 1, mtime=0)
    plain, inside = read_or_refused(data), read_or_refused(packed)
    assert (plain is None) == (inside is None)
    assert plain is None or inside is None or plain == inside
    read_or_refused(packed[:place] + piece + packed[place + len(piece) :])


def test_a_file_packed_twice_is_refused():
    twice = gzip.compress(gzip.compress(SOUND[0]))
    with pytest.raises(MeshFileError, match="this is a file packed twice with gzip, not an STL file"):
        MeshAsset.of_bytes(twice, "part.stl")


def test_a_hole_too_small_for_its_squares_is_closed_without_a_warning():
    text = ascii_stl(BOX[:1] * 1e-202)
    asset = MeshAsset.of_bytes(text.encode(), "part.stl")
    assert asset.survey.open_edges == 3
    assert asset.survey.solid is None


def seconds_for(data: bytes) -> float:
    started = time.process_time()
    assert read_or_refused(data) is None
    return time.process_time() - started


# Before, each took more than ten seconds here: their time grew with the square of their size.
def test_a_fault_after_many_lines_that_end_in_carriage_returns_is_told_at_once():
    text = ascii_stl(quartered(BOX, 3), end="\r", number="{:g}")
    assert len(text) > 90_000
    assert seconds_for(text.encode()[:-60] + b" endfacet") < 2


def test_a_number_of_very_many_digits_is_refused_at_once():
    start = b"solid\nfacet normal 0 0 0 outer loop vertex "
    assert seconds_for(start + b"1" * 300_000 + b"x") < 2


def test_points_laid_out_so_that_each_split_frees_one_more_are_given_up_in_time():
    # Along x the order is 0, 2, 1, 4, 3 ..., along y 1, 0, 3, 2 ...: each point bridges the gap of the next one.
    place = np.arange(32_000)
    x = np.where(place == 0, -2, np.where(place % 2, place + 1, place - 1))
    y = np.where(place % 2, place - 1, place + 1)
    points = 0.9 * np.stack([x, y, 0 * place], axis=1)
    started = time.process_time()
    groups = clusters_within(points, 1.0)
    assert time.process_time() - started < 2
    assert groups[0] != groups[1]


@pytest.mark.parametrize("kind", ["binary", "open binary", "text", "endless words", "zeros"])
def test_memory_stays_below_a_multiple_of_the_size(kind):
    triangles = quartered(BOX, 5)
    data = {
        "binary": lambda: binary_stl(triangles),
        "open binary": lambda: binary_stl(triangles + np.arange(len(triangles))[:, None, None]),
        "text": lambda: ascii_stl(triangles, number="{:g}").encode(),
        "endless words": lambda: b"solid \n" + b"a1 " * 500_000 + b"endfacet",
        "zeros": lambda: bytes(1_000_000),
    }[kind]()
    MeshAsset.of_bytes(SOUND[0], "warm.stl")
    tracemalloc.start()
    try:
        read_or_refused(data)
        peak = tracemalloc.get_traced_memory()[1]
    finally:
        tracemalloc.stop()
    assert peak < MEMORY_AT_ALL + MEMORY_PER_BYTE * len(data)
