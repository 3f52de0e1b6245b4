"""Linked groups in files: paths, hashes, what is missing or changed, loops, and what a stranger's document may name."""

from __future__ import annotations

import json
import os
from dataclasses import replace
from hashlib import sha256
from typing import TYPE_CHECKING

import pytest
from documents import packed, refusal_after, saved, unpacked
from hypothesis import given
from strategies import STEPS, absolute_paths

from core.assembly import Assembly, Group, Part, ShapeBody
from core.assembly.link import Link
from core.assembly.linked_groups import LinkedDocument, with_link_read, with_linked_group
from core.document import (
    hash_of,
    linked_paths,
    look_at_links,
    read_document,
    read_document_bytes,
    read_linked,
    save_document,
)
from core.document.link_path import path_from, path_of
from core.errors import Cancelled, DocumentError
from core.machine import Machine
from core.material import ByDensity
from core.progress import Progress
from core.shapes import Box, Cylinder

if TYPE_CHECKING:
    from pathlib import Path


def block(width: float = 0.06) -> Assembly:
    return Assembly("fixture", (Part("p1", "block", ShapeBody(Box(width, 0.05, 0.03)), ByDensity(2700.0)),))


def placed(path: Path, *, holder: Path | None = None, into: Assembly | None = None) -> Assembly:
    """Return a plate, or another assembly, with the document in a file as a linked group."""
    plate = Part("p1", "plate", ShapeBody(Cylinder(0.4, 0.02)), ByDensity(7850.0))
    return with_linked_group(into or Assembly("dial", (plate,)), read_linked(path, holder), None, None)


def saved_as(path: Path, assembly: Assembly) -> Path:
    path.parent.mkdir(parents=True, exist_ok=True)
    save_document(Machine(assembly), path)
    return path


def read_back(path: Path) -> Assembly:
    return read_document(path).assembly


def link_in(document: Path) -> dict:
    data = json.loads(unpacked(document.read_bytes())["assembly.json"])
    return next(node["link"] for node in data["members"] if "link" in node)


@pytest.fixture
def parts(tmp_path: Path) -> Path:
    return saved_as(tmp_path / "parts" / "fixture.masswright", block())


# --- paths and the hash ----------------------------------------------------------------------------------------------


def test_a_document_keeps_the_relative_path_the_hash_and_the_last_values(tmp_path: Path, parts: Path) -> None:
    dial = saved_as(tmp_path / "machines" / "dial.masswright", placed(parts))
    assert link_in(dial) == {
        "path": "../parts/fixture.masswright", "sha256": sha256(parts.read_bytes()).hexdigest(),
    }
    parts.unlink()
    back = read_back(dial)
    assert back == placed_before(parts)
    assert back.node("g1/p1").body.shape == Box(0.06, 0.05, 0.03)


def placed_before(parts: Path) -> Assembly:
    saved_as(parts, block())
    return placed(parts)


def test_saved_into_another_folder_the_document_tells_the_file_from_there(tmp_path: Path, parts: Path) -> None:
    first = saved_as(tmp_path / "machines" / "dial.masswright", placed(parts))
    second = saved_as(tmp_path / "parts" / "dial.masswright", read_back(first))
    third = saved_as(tmp_path / "a" / "b" / "dial.masswright", read_back(second))
    assert [link_in(each)["path"] for each in (first, second, third)] == [
        "../parts/fixture.masswright", "fixture.masswright", "../../parts/fixture.masswright",
    ]
    assert {read_back(each).node("g1").link.path for each in (first, second, third)} == {str(parts)}


def test_moved_together_document_and_linked_file_find_each_other(tmp_path: Path, parts: Path) -> None:
    saved_as(tmp_path / "parts" / "dial.masswright", placed(parts))
    (tmp_path / "parts").rename(tmp_path / "elsewhere")
    back = read_back(tmp_path / "elsewhere" / "dial.masswright")
    look_at_links(back)
    assert back.node("g1").link.state == "as read"


def test_a_path_that_shares_only_the_root_is_told_as_it_is(tmp_path: Path) -> None:
    far = Assembly("a", (Group("g", "g", link=Link("/no such folder/x.masswright", "0" * 64)),))
    assert link_in(saved_as(tmp_path / "a.masswright", far))["path"] == "/no such folder/x.masswright"
    other_system = replace(far.node("g"), link=Link("C:\\parts\\x.masswright", "0" * 64))
    assert path_from(str(tmp_path), other_system.link.path) == "C:\\parts\\x.masswright"


@given(absolute_paths, absolute_paths)
def test_any_path_comes_back_from_any_folder(folder: str, path: str) -> None:
    assert path_of(folder, path_from(folder, path)) == path
    assert path_of(folder, path_from(folder, f"{folder}/x.masswright")) == f"{folder}/x.masswright"


@given(absolute_paths, STEPS)
def test_a_file_beside_the_document_is_told_by_its_name(folder: str, name: str) -> None:
    assert path_from(folder, f"{folder}/{name}") == name


def test_bytes_without_a_folder_leave_the_path_as_it_is_told(tmp_path: Path, parts: Path) -> None:
    dial = saved_as(tmp_path / "dial.masswright", placed(parts))
    assert read_document_bytes(dial.read_bytes()).assembly.node("g1").link.path == "parts/fixture.masswright"


def test_documents_without_linked_groups_have_no_word_of_them(tmp_path: Path) -> None:
    assert b"link" not in unpacked(saved(tmp_path))["assembly.json"]


def test_a_hash_that_is_none_and_a_link_on_a_part_are_refused(tmp_path: Path) -> None:
    def linked(path: str, digest: str):
        return lambda data: data["members"][0].update(link={"path": path, "sha256": digest})

    assert "members[0].link.sha256 (turning): this has to be a SHA-256 of 64 hexadecimal digits" in refusal_after(
        tmp_path, linked("x.masswright", "0" * 63)
    )
    on_a_part = refusal_after(tmp_path, lambda data: data["members"][1].update(link=None))
    assert "members[1].link (wedge): this version knows no such entry" in on_a_part


# --- looking, and reading again --------------------------------------------------------------------------------------


def test_a_look_tells_same_changed_and_missing(tmp_path: Path, parts: Path) -> None:
    dial = saved_as(tmp_path / "dial.masswright", placed(parts))
    assert read_back(dial).node("g1").link.state == "not looked at"
    states = []
    for change in (lambda: None, lambda: saved_as(parts, block(0.07)), parts.unlink):
        change()
        back = read_back(dial)
        look_at_links(back)
        states.append(back.node("g1").link.state)
    assert states == ["as read", "changed", "missing"]


def test_what_is_read_again_is_what_the_file_holds_now(parts: Path) -> None:
    before = placed(parts)
    saved_as(parts, block(0.09))
    after = with_link_read(before, "g1", read_linked(parts))
    assert after.node("g1/p1").body.shape == Box(0.09, 0.05, 0.03)
    assert after.node("g1").link.state == "as read"
    assert after.node("g1").link.sha256 == hash_of(str(parts)) != before.node("g1").link.sha256


def test_each_file_is_hashed_once_however_often_it_is_linked(monkeypatch: pytest.MonkeyPatch, parts: Path) -> None:
    twice = placed(parts, into=placed(parts))
    looked: list[str] = []
    monkeypatch.setattr("core.document.linking.hash_of", looked.append)
    look_at_links(twice)
    assert looked == [str(parts)] == list(linked_paths(twice))


def test_a_linked_file_that_is_no_document_is_refused(tmp_path: Path) -> None:
    bad = tmp_path / "bad.masswright"
    bad.write_bytes(b"a letter")
    with pytest.raises(DocumentError, match=r"bad\.masswright: the file is no Masswright document"):
        read_linked(bad)


@pytest.mark.parametrize("name", ["gone.masswright", "letter.txt", "folder.masswright", "no\0path.masswright"])
def test_what_cannot_be_a_document_is_not_read(tmp_path: Path, name: str) -> None:
    (tmp_path / "letter.txt").write_text("secret")
    (tmp_path / "folder.masswright").mkdir()
    path = str(tmp_path / name)
    assert hash_of(path) is None
    with pytest.raises(DocumentError, match="there is no such document"):
        read_linked(path)


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="pipes with a name are not known here")
def test_a_pipe_with_the_name_of_a_document_does_not_hold_up_the_reader(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe.masswright")
    assert hash_of(str(tmp_path / "pipe.masswright")) is None


def test_looking_at_a_file_can_be_stopped(parts: Path) -> None:
    progress = Progress()
    assert hash_of(str(parts), progress) == hash_of(str(parts))
    assert progress.done == parts.stat().st_size
    progress.cancel()
    with pytest.raises(Cancelled):
        hash_of(str(parts), progress)


def test_a_file_larger_than_any_document_is_not_read(monkeypatch: pytest.MonkeyPatch, parts: Path) -> None:
    monkeypatch.setattr("core.document.linking.MOST_BYTES", 100)
    assert hash_of(str(parts)) is None


def test_a_document_that_names_an_impossible_path_is_read_looked_at_and_saved(tmp_path: Path) -> None:
    entries = unpacked(saved(tmp_path))
    data = json.loads(entries["assembly.json"])
    data["members"][0]["link"] = {"path": "no\0path.masswright", "sha256": "0" * 64}
    strange = tmp_path / "strange.masswright"
    strange.write_bytes(packed({**entries, "assembly.json": json.dumps(data).encode()}))
    back = read_back(strange)
    look_at_links(back)
    assert back.members[0].link.state == "missing"
    saved_as(strange, back)
    assert read_back(strange) == back


# --- links in links, and loops ---------------------------------------------------------------------------------------


def test_links_nest_and_each_is_told_from_the_document_that_holds_it(tmp_path: Path, parts: Path) -> None:
    dial = saved_as(tmp_path / "machines" / "dial.masswright", placed(parts))
    line = saved_as(tmp_path / "line.masswright", placed(dial))
    back = read_back(line)
    assert back.node("g1").link.path == str(dial)
    assert back.node("g1/g1").link.path == str(parts)
    assert back == placed(dial)
    saved_as(parts, block(0.07))
    look_at_links(back)
    assert (back.node("g1").link.state, back.node("g1/g1").link.state) == ("as read", "changed")


def test_a_document_that_would_link_itself_is_refused(tmp_path: Path, parts: Path) -> None:
    with pytest.raises(DocumentError) as refusal:
        read_linked(parts, parts)
    assert str(refusal.value) == (
        "fixture.masswright: a document cannot hold itself as a linked group; "
        "read fixture.masswright → fixture.masswright. Break one of these links first."
    )
    (tmp_path / "other name.masswright").symlink_to(parts)
    with pytest.raises(DocumentError, match=r"read fixture\.masswright → other name\.masswright\."):
        read_linked(tmp_path / "other name.masswright", parts)


def test_a_loop_through_other_documents_is_refused_with_the_chain(tmp_path: Path, parts: Path) -> None:
    dial = saved_as(tmp_path / "dial.masswright", placed(parts))
    in_a_group = Assembly("line", (Group("x", "x", (placed(dial).node("g1"),)),))
    line = saved_as(tmp_path / "line.masswright", in_a_group)
    with pytest.raises(DocumentError) as refusal:
        read_linked(line, parts)
    assert str(refusal.value) == (
        "fixture.masswright: a document cannot hold itself as a linked group; read fixture.masswright → "
        "line.masswright → dial.masswright → fixture.masswright. Break one of these links first."
    )


def test_a_loop_that_was_made_behind_our_back_is_refused_and_does_not_hold_up_the_reader(tmp_path: Path) -> None:
    one, two = tmp_path / "one.masswright", tmp_path / "two.masswright"
    for path, other in ((one, two), (two, one)):
        saved_as(path, Assembly("a", (Group("g", "g", link=Link(str(other), "0" * 64)),)))
    assert read_back(one).node("g").link.path == str(two)
    with pytest.raises(DocumentError, match=r"read one\.masswright → two\.masswright → one\.masswright"):
        read_linked(one)


def test_the_same_file_linked_on_two_ways_is_no_loop(tmp_path: Path, parts: Path) -> None:
    dial = saved_as(tmp_path / "dial.masswright", placed(parts))
    both = placed(dial, into=placed(parts))
    line = saved_as(tmp_path / "line.masswright", both)
    assert read_linked(line, tmp_path / "plant.masswright").assembly == both


def test_a_missing_file_in_the_chain_leads_nowhere(tmp_path: Path, parts: Path) -> None:
    dial = saved_as(tmp_path / "dial.masswright", placed(parts))
    parts.unlink()
    assert read_linked(dial, tmp_path / "line.masswright").name == "dial"


def test_a_document_is_not_saved_over_a_file_that_it_links(tmp_path: Path, parts: Path) -> None:
    dial = saved_as(tmp_path / "machines" / "dial.masswright", placed(parts))
    before = parts.read_bytes()
    for assembly in (placed(parts), placed(dial)):
        with pytest.raises(DocumentError) as refusal:
            saved_as(parts, assembly)
        assert str(refusal.value).startswith(
            "fixture.masswright, fixture: a document cannot hold itself as a linked group; read "
        )
    assert parts.read_bytes() == before


def test_a_linked_document_is_told_by_its_files_name(parts: Path) -> None:
    linked = read_linked(parts)
    assert isinstance(linked, LinkedDocument)
    assert (linked.name, linked.link.path, linked.assembly) == ("fixture", str(parts), block())
