"""What is read from an STL file, in all the dress that sound files come in."""

import gzip

import numpy as np
import pytest
from mesh_files import ascii_stl, binary_stl, box

from core.errors import Cancelled
from core.mesh import MeshAsset, survey_file
from core.mesh.stl import open_stl, stl_of_bytes
from core.progress import Progress

BOX = box(40, 30, 20, at=(-5, 0.1, 7))


def read(data: bytes, most: int = 10_000) -> np.ndarray:
    return np.concatenate([part.copy() for part, _ in stl_of_bytes(data, "part.stl").chunks(most)])


def of_text(text: str) -> np.ndarray:
    return read(text.encode())


def test_binary_file_gives_its_float32_corners_bit_for_bit():
    np.testing.assert_array_equal(read(binary_stl(BOX)), BOX.astype(np.float32), strict=True)


@pytest.mark.parametrize("most", [1, 5, 12, 13])
def test_chunks_of_any_size_give_the_same_facets(most):
    np.testing.assert_array_equal(read(binary_stl(BOX), most), BOX.astype(np.float32))
    np.testing.assert_array_equal(read(ascii_stl(BOX).encode(), most), BOX)


@pytest.mark.parametrize("header", [b"solid part", b"SOLID\n facet normal", b"caf\xe9 \xff\xfe", b"solid " + b" " * 74])
def test_file_is_binary_by_its_size_whatever_the_header_says(header):
    assert stl_of_bytes(binary_stl(BOX, header), "part.stl").format == "binary STL"


def test_ascii_file_gives_its_numbers_in_double_precision():
    np.testing.assert_array_equal(of_text(ascii_stl(BOX / 3)), BOX / 3, strict=True)


@pytest.mark.parametrize("text", [
    ascii_stl(BOX, end="\r\n"),
    ascii_stl(BOX, end="\r"),
    ascii_stl(BOX).upper(),
    "\n \t" + ascii_stl(BOX),
    "\ufeff" + ascii_stl(BOX),
    ascii_stl(BOX, name=""),
    ascii_stl(BOX, name="hub of the 2nd dial"),
    ascii_stl(BOX, name="solid facet normal"),
    ascii_stl(BOX, indent=""),
    ascii_stl(BOX, indent="\t"),
    ascii_stl(BOX).replace("endsolid part\n", ""),
    ascii_stl(BOX).rstrip("\n"),
    ascii_stl(BOX).replace("normal 0 0 0", "normal nan -nan(ind) 1.#QNAN"),
])
def test_ascii_file_is_read_in_whatever_dress_it_comes(text):
    np.testing.assert_array_equal(of_text(text), BOX)


def test_ascii_exponents_of_three_digits_are_read():
    np.testing.assert_allclose(of_text(ascii_stl(BOX * 1e-16, number="{:.17e}").replace("e-1", "e-01")), BOX * 1e-16, rtol=1e-16)


def test_all_solids_of_an_ascii_file_are_read():
    far = BOX + 100
    text = ascii_stl(BOX, name="one") + "\n" + ascii_stl(far, name="") + ascii_stl(BOX * 2, name="endsolid three")
    np.testing.assert_array_equal(of_text(text), np.concatenate([BOX, far, BOX * 2]))


def test_ascii_text_longer_than_a_block_is_read_whole():
    many = np.concatenate([BOX + step for step in range(1000)])
    text = ascii_stl(many)
    assert len(text) > 3 << 19
    np.testing.assert_array_equal(of_text(text), many)


def test_solid_lines_on_the_border_of_a_block_do_no_harm():
    text = ascii_stl(BOX)
    for filler in range((1 << 19) - len(text) - 40, (1 << 19) - len(text) + 20, 11):
        padded = text.replace("endsolid part\n", "") + " " * filler + "\nendsolid part of two\n" + text
        assert len(of_text(padded)) == 24


def test_packed_files_read_like_plain_ones(tmp_path):
    for data, kind in ((binary_stl(BOX), "binary STL"), (ascii_stl(BOX).encode(), "ASCII STL")):
        packed = tmp_path / "part.stl.gz"
        packed.write_bytes(gzip.compress(data))
        source = open_stl(packed)
        assert source.format == kind
        got = np.concatenate([part.copy() for part, _ in source.chunks(5)])
        np.testing.assert_array_equal(got, read(data))


def test_progress_ends_at_its_total(tmp_path):
    for name, data in (("binary.stl", binary_stl(BOX)), ("text.stl", ascii_stl(BOX).encode())):
        (tmp_path / name).write_bytes(data)
        progress = Progress("reading")
        survey_file(tmp_path / name, progress)
        assert (progress.done, progress.fraction) == (progress.total, 1.0)
        assert progress.total > 0


def test_cancelled_reading_stops_and_says_how_far_it_came(tmp_path):
    (tmp_path / "part.stl").write_bytes(binary_stl(BOX))
    progress = Progress("reading part.stl")
    progress.cancel()
    with pytest.raises(Cancelled) as stopped:
        survey_file(tmp_path / "part.stl", progress)
    assert str(stopped.value) == "reading part.stl was stopped before it was done; read 0 of 12."


@pytest.mark.parametrize("ending", ["endsolid part\n", "END  SOLID part\n", "endsolid " + "n" * 2000, "endsolid" + " \r\n" * 2000])
def test_an_open_text_file_is_read_however_its_solid_ends(ending):
    text = ascii_stl(box()[1:]).replace("endsolid part\n", ending)
    assert MeshAsset.of_bytes(text.encode(), "part.stl").survey.open_edges == 3
