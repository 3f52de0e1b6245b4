"""Every way in which an STL file can be wrong is refused in one line: what, where, what was read, what to do."""

import gzip
import os

import numpy as np
import pytest
from mesh_files import ascii_stl, binary_stl, box, records

from core.errors import MeshFileError
from core.mesh import MeshAsset, survey_file
from core.mesh.stl_faults import MOST_FACETS

BOX = box(40, 30, 20)
SOUND = binary_stl(BOX)  # 684 bytes
TEXT = ascii_stl(BOX, number="{:g}")
AGAIN = "Export or copy the file again."

REFUSED = {
    "empty": (b"", f"the file is empty; read 0 bytes. {AGAIN}"),
    "too short": (
        SOUND[:50], f"the file is too short for an STL file; read 50 bytes where the header alone takes 84. {AGAIN}"),
    "cut inside a facet": (
        SOUND[:300],
        ("the file is cut short; read a count of 12 at byte 80, which needs 684 bytes, in a file of 300 bytes with room for"
        f" 4 whole facets. It was not copied or written to its end. {AGAIN}")),
    "cut after a facet": (
        SOUND[:334],
        ("the facet count in the header does not fit the file; read a count of 12 at byte 80, which needs 684 bytes, in a"
        f" file of 334 bytes with room for 5 whole facets. The file was cut or its header is wrong. {AGAIN}")),
    "header alone": (
        SOUND[:84],
        ("the facet count in the header does not fit the file; read a count of 12 at byte 80, which needs 684 bytes, in a"
        f" file of 84 bytes with room for 0 whole facets. The file was cut or its header is wrong. {AGAIN}")),
    "count too small": (
        binary_stl(BOX, count=7),
        ("the facet count in the header does not fit the file; read a count of 7 at byte 80, which needs 434 bytes, in a"
        f" file of 684 bytes with room for 12 whole facets. The file was cut or its header is wrong. {AGAIN}")),
    "trailing bytes": (
        SOUND + b"tail",
        ("bytes follow after the last facet; read a count of 12 at byte 80, which needs 684 bytes, in a file of 688 bytes"
        f" with room for 12 whole facets. Something was appended to the file. {AGAIN}")),
    "absurd count": (
        binary_stl(BOX, count=4_294_967_295),
        ("the header announces an absurd number of facets; read a count of 4294967295 at byte 80, which needs"
        " 214748364834 bytes, in a file of 684 bytes with room for 12 whole facets. If it is meant to be STL, export or"
        " copy the file again.")),
    "solid header, cut": (
        binary_stl(BOX, header=b"solid part")[:300],
        ("the file is cut short; read a count of 12 at byte 80, which needs 684 bytes, in a file of 300 bytes with room for"
        f" 4 whole facets. It was not copied or written to its end. {AGAIN}")),
    "no facets": (binary_stl(BOX[:0]), f"the file holds no facets; read a count of 0 at byte 80. {AGAIN}"),
    "no facets in text": (
        b"solid nothing\nendsolid nothing\n", f'the file holds no facets; read "solid" and nothing more. {AGAIN}'),
    "web page": (
        b"<!DOCTYPE html>\n<html><head><title>404</title></head></html>\n" * 3,
        'this is a web page, not an STL file; read "<!DOCTYPE html> <html><head><title>404</". Export the part as STL.'),
    "zip": (b"PK\x03\x04" + bytes(300), 'this is a ZIP archive, not an STL file; read "PK??????????????????????????????????????". Export the part as STL.'),
    "other text": (
        b"o part\nv 0 0 0\nv 1 0 0\n" * 5,
        ('this is a text that does not begin with "solid", not an STL file; read "o part v 0 0 0 v 1 0 0 o part v 0 0 0 v".'
        " Export the part as STL.")),
    "damaged packing": (
        gzip.compress(SOUND)[:-12],
        ("the gzip packing is damaged; read Compressed file ended before the end-of-stream marker was reached."
        f" {AGAIN}")),
}

MEND = "Mend the part where it was made and export it again."
TEXT_REFUSED = {
    "decimal comma": (
        TEXT.replace("40", "40,5", 1), ", line 18, facet 3",
        'a decimal comma stands in a coordinate; read "40,5". Export the part again with a decimal point; it is not guessed.'),
    "word for a number": (
        TEXT.replace("40", "forty", 1), ", line 18, facet 3", f'a coordinate is not a number; read "forty". {AGAIN}'),
    "comma after a number": (
        TEXT.replace("40", "40,", 1), ", line 18, facet 3", f'a coordinate is not a number; read "40,". {AGAIN}'),
    "digits with underscore": (
        TEXT.replace("40", "4_0", 1), ", line 18, facet 3", f'a coordinate is not a number; read "4_0". {AGAIN}'),
    "not a number": (
        TEXT.replace("40", "NaN", 1), ", line 18, facet 3", f'a coordinate is not a finite number; read "NaN". {MEND}'),
    "infinite": (
        TEXT.replace("40", "-inf", 1), ", line 18, facet 3", f'a coordinate is not a finite number; read "-inf". {MEND}'),
    "beyond float32": (
        TEXT.replace("40", "4e38", 1), ", line 18, facet 3",
        f'a coordinate is larger than an STL file can hold; read "4e38". {AGAIN}'),
    "too few coordinates": (
        TEXT.replace("vertex 40 ", "vertex ", 1), ", line 19, facet 3", f'a coordinate is not a number; read "vertex". {AGAIN}'),
    "too many coordinates": (
        TEXT.replace("vertex 40 ", "vertex 40 1 ", 1), ", line 18, facet 3", f'"vertex" is missing in the STL text; read "0". {AGAIN}'),
    "word left out": (
        TEXT.replace("    outer loop\n", "", 1), ", line 3, facet 1", f'"outer" is missing in the STL text; read "vertex". {AGAIN}'),
    "short normal": (
        TEXT.replace("normal 0 0 0", "normal 0 0", 1), ", line 3, facet 1", f'a number of the normal is missing; read "outer". {AGAIN}'),
    "a fourth corner": (
        TEXT.replace("    endloop", "      vertex 1 1 1\n    endloop", 1), ", line 7, facet 1",
        f'"endloop" is missing in the STL text; read "vertex". {AGAIN}'),
    "cut in a facet": (
        TEXT[:TEXT.index("40")], ", line 18, facet 3",
        f"the file is cut short in the middle of a facet; read 8 of its 21 words. It was not copied or written to its end. {AGAIN}"),
}


def refusal(path) -> MeshFileError:
    with pytest.raises(MeshFileError) as refused:
        survey_file(path)
    return refused.value


@pytest.mark.parametrize("fault", REFUSED)
def test_a_file_that_is_no_sound_stl_is_refused(tmp_path, fault):
    data, message = REFUSED[fault]
    path = tmp_path / "part.stl"
    path.write_bytes(data)
    assert str(refusal(path)) == f"{path}: {message}"
    with pytest.raises(MeshFileError) as refused:
        MeshAsset.of_bytes(data, "part.stl")
    assert str(refused.value) == f"part.stl: {message}"


@pytest.mark.parametrize("fault", TEXT_REFUSED)
def test_a_faulty_text_is_refused_with_its_line_and_facet(tmp_path, fault):
    text, place, message = TEXT_REFUSED[fault]
    path = tmp_path / "part.stl"
    path.write_text(text)
    assert str(refusal(path)) == f"{path}{place}: {message}"
    path.write_bytes(text.replace("\n", "\r\n").encode())
    assert str(refusal(path)) == f"{path}{place}: {message}"


def test_the_line_of_a_fault_counts_through_all_blocks(tmp_path):
    many = np.concatenate([BOX + step for step in range(300)])
    lines = ascii_stl(many, number="{:g}").split("\n")
    lines[20_000] = lines[20_000].replace("vertex", "vortex").replace("facet", "faced").replace("loop", "hoop")
    path = tmp_path / "part.stl"
    path.write_text("\n".join(lines))
    assert refusal(path).where == f"{path}, line 20001, facet {(20_000 - 1) // 7 + 1}"


@pytest.mark.parametrize(("value", "shown"), [(np.nan, "nan"), (np.inf, "inf"), (-np.inf, "-inf")])
def test_a_coordinate_that_is_not_finite_is_refused_with_its_facet(tmp_path, value, shown):
    many = np.concatenate([BOX + step for step in range(1000)])
    many[11_002, 1, 2] = value
    path = tmp_path / "part.stl"
    path.write_bytes(binary_stl(many))
    assert str(refusal(path)) == (
        f"{path}, facet 11003: a coordinate is not a finite number; read z of corner 2 = {shown}. {MEND}"
    )


def test_more_facets_than_are_taken_are_refused_before_anything_is_allocated(tmp_path):
    path = tmp_path / "part.stl"
    with path.open("wb") as file:
        file.write(bytes(80) + (MOST_FACETS + 1).to_bytes(4, "little"))
        # A hole: the file takes no room on the disk.
        file.truncate(84 + 50 * (MOST_FACETS + 1))
    assert str(refusal(path)) == (
        f"{path}: more than 200000000 facets are not taken; read a count of 200000001 at byte 80."
        " Export the part with a coarser tolerance."
    )


def test_a_missing_file_is_refused(tmp_path):
    path = tmp_path / "part.stl"
    assert str(refusal(path)) == f"{path}: there is no such file. Check the path."
    with pytest.raises(MeshFileError, match="there is no such file"):
        MeshAsset.read(path)


def test_a_folder_is_refused(tmp_path):
    message = f"{tmp_path}: this is a folder, not a mesh file. Name an STL file in it."
    assert str(refusal(tmp_path)) == message
    with pytest.raises(MeshFileError, match="this is a folder"):
        MeshAsset.read(tmp_path)


@pytest.mark.skipif(not hasattr(os, "geteuid") or os.geteuid() == 0, reason="the administrator may read every file")
def test_a_file_without_permission_is_refused(tmp_path):
    path = tmp_path / "part.stl"
    path.write_bytes(SOUND)
    path.chmod(0)
    assert str(refusal(path)) == (
        f"{path}: the file cannot be read; read Permission denied. Check that it is there and that you may read it."
    )


def test_a_read_error_of_the_system_is_refused(tmp_path, monkeypatch):
    def broken(*_args, **_kwargs):
        raise PermissionError(13, "Permission denied")

    path = tmp_path / "part.stl"
    path.write_bytes(SOUND)
    monkeypatch.setattr(type(path), "open", broken)
    assert str(refusal(path)) == (
        f"{path}: the file cannot be read; read Permission denied. Check that it is there and that you may read it."
    )


def test_a_file_that_shrinks_while_it_is_read_is_refused(tmp_path):
    from core.mesh.stl import open_stl

    path = tmp_path / "part.stl"
    path.write_bytes(SOUND)
    source = open_stl(path)
    path.write_bytes(SOUND[: 84 + 5 * 50])
    with pytest.raises(MeshFileError) as refused:
        list(source.chunks(4))
    assert str(refused.value) == (
        f"{path}, facet 6: the file became shorter while it was read; read 334 bytes."
        " Read it again once nothing writes to it."
    )


def test_helper_files_are_as_long_as_the_format_says():
    assert len(records(BOX)) == 12 * 50
    assert len(SOUND) == 684


def test_a_text_cut_short_between_two_facets_is_refused_and_one_that_only_lacks_its_last_line_is_not(tmp_path):
    whole = ascii_stl(box(20, 20, 20))
    lacking = tmp_path / "lacking.stl"
    lacking.write_text(whole.replace("endsolid part\n", ""))
    assert survey_file(lacking).verdict == "closed"
    short = tmp_path / "short.stl"
    short.write_text(whole[: whole.rindex("  facet")])
    with pytest.raises(MeshFileError) as refused:
        survey_file(short)
    assert str(refused.value) == (
        f'{short}: the text ends without "endsolid", and edges are open: it is cut short; read 11 facets. '
        "It was not copied or written to its end. Export or copy the file again."
    )


def test_a_pipe_is_refused_instead_of_waited_for(tmp_path):
    pipe = tmp_path / "pipe.stl"
    os.mkfifo(pipe)
    with pytest.raises(MeshFileError, match=r"this is a pipe or a device, not a file"):
        survey_file(pipe)
