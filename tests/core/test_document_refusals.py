"""A file that cannot be taken is refused in one sentence: what is wrong, where, what was read, what to do."""

from __future__ import annotations

import io
import struct
import zipfile

import pytest
from documents import (
    BY_HAND,
    BY_HAND_JSON,
    GOOD_COPY,
    dial,
    packed,
    refusal_after,
    refusal_of,
    refusal_of_json,
    saved,
    unpacked,
)
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from core.document import read_document_bytes
from core.document.migration import migrated
from core.errors import DocumentError

# --- the file and its archive ------------------------------------------------------------------------------------


def test_a_file_that_is_no_archive_is_refused():
    assert refusal_of(b"solid wedge\nendsolid wedge\n") == (
        "dial.masswright: the file is no Masswright document; read a file that begins with b'soli'. "
        "Choose a .masswright file; a mesh is added to a document as a part."
    )


def test_an_empty_file_is_refused():
    assert refusal_of(b"") == f"dial.masswright: the file is empty. {GOOD_COPY}"


def test_a_file_that_was_cut_off_is_refused(tmp_path):
    document = saved(tmp_path)
    for length in (5, 200, len(document) // 2, len(document) - 1):
        assert refusal_of(document[:length]) == (
            "dial.masswright: the file is damaged or cut off: the list of its contents at the end is missing. "
            + GOOD_COPY
        )


def test_an_archive_without_the_json_is_refused():
    assert refusal_of(packed({"letter.txt": b"Dear all"})) == (
        "dial.masswright: the archive holds no assembly.json, so it is no Masswright document. "
        "Choose a .masswright file."
    )


def test_bytes_that_were_changed_on_the_disk_are_noticed(tmp_path):
    document = saved(tmp_path)
    at = document.index(b'"plate"')
    assert refusal_of(document[:at] + b'"plane"' + document[at + 7 :]) == (
        f"dial.masswright, assembly.json: this file in the archive is damaged or cut off. {GOOD_COPY}"
    )


@pytest.mark.filterwarnings("ignore:Duplicate name")
def test_two_files_of_the_same_name_are_refused(tmp_path):
    file = io.BytesIO(saved(tmp_path))
    with zipfile.ZipFile(file, "a") as archive:
        archive.writestr("assembly.json", b"{}")
    assert refusal_of(file.getvalue()) == (
        f"dial.masswright: the archive holds two files of the same name. {GOOD_COPY}"
    )


def test_an_archive_of_too_many_files_is_refused(tmp_path):
    many = {f"notes/{number}": b"" for number in range(10_001)}
    assert refusal_of(packed({**many, **unpacked(saved(tmp_path))})) == (
        "dial.masswright: a document holds at most 10000 files; read 10003. Choose a .masswright file."
    )


def test_a_small_file_that_unpacks_to_a_huge_one_is_refused():
    assert refusal_of(packed({"assembly.json": b" " * 30_000_000}, zipfile.ZIP_DEFLATED)).startswith(
        "dial.masswright, assembly.json: this file in the archive is packed tighter than any document; read 30000000 bytes in "
    )


def test_a_declared_size_beyond_any_document_is_refused_without_unpacking_it(monkeypatch):
    monkeypatch.setattr("core.document.archive.MOST_JSON_BYTES", 2 * 2**20)
    assert refusal_of(packed({"assembly.json": b" " * (3 * 2**20)})) == (
        "dial.masswright, assembly.json: this is larger than any document: at most 2 MB are read; read 3 MB. "
        "Choose a .masswright file, or use a lighter mesh."
    )


def test_an_archive_that_is_too_large_as_a_whole_is_refused(monkeypatch):
    monkeypatch.setattr("core.document.archive.MOST_BYTES", 2**20)
    assert "dial.masswright, the archive: this is larger than any document" in refusal_of(
        packed({"assembly.json": b"{}", "a": b" " * 2**19, "b": b" " * (2**19 + 1)})
    )


def test_a_size_that_was_declared_too_small_yields_no_more_than_was_declared():
    document = bytearray(packed({"assembly.json": b"{}" + b" " * 1000}))
    directory = document.index(b"PK\x01\x02")
    document[directory + 20 : directory + 28] = struct.pack("<II", 2, 2)
    assert refusal_of(bytes(document)) == (
        f"dial.masswright, assembly.json: this file in the archive is damaged or cut off. {GOOD_COPY}"
    )


def test_a_size_that_was_declared_too_large_is_refused():
    document = bytearray(packed({"assembly.json": b"{}"}))
    directory = document.index(b"PK\x01\x02")
    document[directory + 20 : directory + 28] = struct.pack("<II", 60, 60)
    assert "assembly.json: this file in the archive is " in refusal_of(bytes(document))


def test_an_encrypted_or_strangely_packed_file_is_refused():
    strange = packed({"assembly.json": b"{}"}, zipfile.ZIP_LZMA)
    encrypted = bytearray(packed({"assembly.json": b"{}"}))
    encrypted[encrypted.index(b"PK\x01\x02") + 8] |= 1
    for document in (strange, bytes(encrypted)):
        assert refusal_of(document) == (
            "dial.masswright, assembly.json: this file in the archive is encrypted or packed in an unusual way. "
            "Save the document with Masswright itself."
        )


def test_names_in_the_archive_are_never_used_as_paths(tmp_path):
    entries = {"../../outside.txt": b"x", "/outside.txt": b"x", "meshes/../assembly.json": b"x", **unpacked(saved(tmp_path))}
    before = sorted(tmp_path.rglob("*"))
    assert read_document_bytes(packed(entries)).assembly == dial()
    assert sorted(tmp_path.rglob("*")) == before


@given(st.data())
@settings(deadline=None, max_examples=150, suppress_health_check=[HealthCheck.function_scoped_fixture])
def test_whatever_happens_to_its_bytes_a_file_is_read_or_refused(tmp_path, data):
    document = bytearray(saved(tmp_path))
    for _ in range(data.draw(st.integers(1, 4))):
        document[data.draw(st.integers(0, len(document) - 1))] = data.draw(st.integers(0, 255))
    document = document[: data.draw(st.integers(0, len(document)))] if data.draw(st.booleans()) else document
    try:
        read = read_document_bytes(bytes(document)).assembly
    except DocumentError:
        pass
    else:
        # The bytes that hold no content: times, permissions, the compressor's version.
        assert read == dial()


# --- the JSON ----------------------------------------------------------------------------------------------------


def test_broken_json_is_refused_with_its_line_and_column():
    assert refusal_of_json('{\n  "axes": [\n  "name": "dial"\n}') == (
        "dial.masswright, line 3, column 9: the JSON is broken (expecting ',' delimiter). " + BY_HAND_JSON
    )


def test_json_in_another_encoding_is_refused():
    assert refusal_of_json('{"name": "Spannfläche"}'.encode("latin-1")) == (
        f"dial.masswright: the text is not UTF-8; read byte 0xe4 at 17. {BY_HAND_JSON}"
    )


def test_json_that_is_a_list_is_refused():
    assert refusal_of_json("[1, 2]") == (
        f"dial.masswright: the JSON has to hold named values; read list. {BY_HAND_JSON}"
    )


@pytest.mark.parametrize("number", ["NaN", "Infinity", "-Infinity"])
def test_numbers_that_are_not_finite_are_refused(number):
    assert refusal_of_json(f'{{"mass": {number}}}') == (
        f"dial.masswright: a number has to be finite; read {number}. Give an ordinary number."
    )


def test_a_number_beyond_every_double_is_refused(tmp_path):
    entries = unpacked(saved(tmp_path))
    text = entries["assembly.json"].replace(b'"diameter": 0.4', b'"diameter": 1e999')
    assert refusal_of(packed({**entries, "assembly.json": text})) == (
        "dial.masswright, members[0].members[0].body.dimensions.diameter (plate): a number has to be finite; "
        "read inf. Give an ordinary number."
    )


def test_a_number_of_thousands_of_digits_is_refused():
    assert refusal_of_json(f'{{"mass": {"9" * 5000}}}') == (
        f"dial.masswright: a number has more digits than any in a document. {BY_HAND_JSON}"
    )


def test_an_entry_that_is_there_twice_is_refused():
    assert refusal_of_json('{"axes": [{"name": "Spindle", "point": 1, "point": 2}]}') == (
        f"dial.masswright, Spindle: an entry is there twice; read 'point'. {BY_HAND_JSON}"
    )


def test_entries_nested_without_end_are_refused():
    assert refusal_of_json('{"members": ' + "[" * 200_000) == (
        f"dial.masswright: the entries nest deeper than in any document. {BY_HAND_JSON}"
    )


@pytest.mark.parametrize(
    ("depth", "rest"),
    [
        (32, ": groups nest at most 32 deep."),
        (120, ": groups nest at most 32 deep."),
        (300, " (turning): the groups nest deeper than in any document."),
    ],
)
def test_groups_nested_too_deep_are_refused(tmp_path, depth, rest):
    def nest(data: dict) -> None:
        node = data["members"][0]
        for level in range(depth):
            node = {**node, "key": str(level), "members": [node]}
        data["members"] = [node]

    said = refusal_after(tmp_path, nest)
    assert said.startswith("dial.masswright, members[0].members[0].members[0] … members[0].members[0].")
    assert said.endswith(f"members[0].members[0]{rest} {BY_HAND}")


# --- versions ----------------------------------------------------------------------------------------------------


def test_a_document_of_a_newer_major_version_is_refused(tmp_path):
    assert refusal_after(tmp_path, lambda data: data["version"].update(major=2)) == (
        "dial.masswright, version: the document was written by a newer version; this one reads up to 1; "
        "read version 2. Open it with the version of Masswright that wrote it, or a newer one."
    )


def test_a_newer_minor_version_is_read_where_it_holds_nothing_new(tmp_path):
    entries = unpacked(saved(tmp_path))
    text = entries["assembly.json"].replace(b'"minor": 0', b'"minor": 7')
    assert read_document_bytes(packed({**entries, "assembly.json": text})).assembly == dial()


def test_an_entry_of_a_newer_minor_version_is_named(tmp_path):
    def add(data: dict) -> None:
        data["version"]["minor"] = 7
        data["members"][1]["finish"] = "anodised"

    assert refusal_after(tmp_path, add) == (
        "dial.masswright, members[1].finish (wedge): this version knows no such entry; read 'anodised'. "
        "It was written by a newer version of Masswright: open it with that one."
    )


@pytest.mark.parametrize(
    ("version", "read"), [(None, "nothing"), (1, "nothing"), ({"major": "1"}, "'1'"), ({"major": True}, "True")]
)
def test_a_document_that_does_not_say_its_version_is_refused(tmp_path, version, read):
    assert refusal_after(tmp_path, lambda data: data.update(version=version)) == (
        "dial.masswright, version.major: the document does not say which version of the schema it follows; "
        f'read {read}. It has to hold "version": {{"major": 1, "minor": 0}}.'
    )


def test_an_older_document_goes_through_every_step_up_to_this_version():
    steps = {
        3: lambda data: {**data, "trail": ["three"], "members": data["parts"]},
        4: lambda data: {**{name: value for name, value in data.items() if name != "parts"}, "trail": [*data["trail"], "four"]},
    }
    old = {"version": {"major": 3, "minor": 2}, "parts": [1]}
    assert migrated(old, steps, 5) == {"version": {"major": 5, "minor": 0}, "members": [1], "trail": ["three", "four"]}
    assert old == {"version": {"major": 3, "minor": 2}, "parts": [1]}


def test_a_version_that_never_was_is_refused(tmp_path):
    assert refusal_after(tmp_path, lambda data: data["version"].update(major=0)) == (
        "dial.masswright, version: there never was a document of this version; read version 0. "
        "Look for a copy of the document that was saved by Masswright."
    )


def test_a_list_of_contents_that_points_before_the_file_is_refused(tmp_path):
    document = saved(tmp_path)
    # The last field but one of the archive's end is where its list begins.
    moved = int.from_bytes(document[-6:-2], "little") + 100
    assert refusal_of(document[:-6] + moved.to_bytes(4, "little") + document[-2:]) == (
        f"dial.masswright, assembly.json: this file in the archive is damaged or cut off. {GOOD_COPY}"
    )
