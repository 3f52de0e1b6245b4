"""A save that fails says why, and leaves what was there; a file that cannot be opened says why."""

from __future__ import annotations

import errno
import os
import stat
import subprocess
import sys

import pytest
from documents import dial, saved

from core.assembly import Assembly, Part, ShapeBody
from core.document import read_document, save_document
from core.errors import DocumentError, FileRefused
from core.machine import Machine
from core.placement import Pose
from core.shapes import Cylinder


def test_a_file_that_is_not_there_is_refused(tmp_path):
    with pytest.raises(FileRefused) as refusal:
        read_document(tmp_path / "lost.masswright")
    path = tmp_path / "lost.masswright"
    assert str(refusal.value) == f"{path}: there is no such file. Look at the name and the folder."


def test_a_folder_is_refused_on_reading_and_on_saving(tmp_path):
    with pytest.raises(DocumentError) as refusal:
        read_document(tmp_path)
    assert str(refusal.value) == f"{tmp_path}: this is a folder, not a document. Choose a .masswright file."
    with pytest.raises(DocumentError) as refusal:
        save_document(Machine(dial()), tmp_path)
    assert str(refusal.value) == (
        f"{tmp_path}: not saved, because a folder has this name; read Is a directory. Choose another name."
    )


def refuse(monkeypatch: pytest.MonkeyPatch, name: str, number: int) -> None:
    """Make a call into the operating system fail with this error number."""

    def fails(*_: object, **__: object) -> None:
        raise OSError(number, os.strerror(number))

    monkeypatch.setattr(name, fails)


def test_a_file_that_may_not_be_read_is_refused(tmp_path, monkeypatch):
    saved(tmp_path)
    path = tmp_path / "start.masswright"
    refuse(monkeypatch, "pathlib.Path.open", errno.EACCES)
    with pytest.raises(DocumentError) as refusal:
        read_document(path)
    assert str(refusal.value) == f"{path}: the file may not be read. Ask its owner for the right to read it."


def test_a_drive_that_fails_is_said_on_reading(tmp_path, monkeypatch):
    path = tmp_path / "start.masswright"
    refuse(monkeypatch, "pathlib.Path.open", errno.EIO)
    with pytest.raises(DocumentError) as refusal:
        read_document(path)
    assert str(refusal.value) == (
        f"{path}: the file cannot be read; read Input/output error. Look at the drive it is on."
    )


@pytest.mark.parametrize("step", ["os.fsync", "pathlib.Path.replace", "zipfile.ZipFile.writestr"])
@pytest.mark.parametrize(
    ("number", "sentence"),
    [
        (errno.ENOSPC, "not saved, because the disk is full; read No space left on device. Make room, or save it somewhere else."),
        (errno.EACCES, "not saved, because it may not be written there; read Permission denied. Save it somewhere else."),
        (errno.EIO, "not saved, because the disk refused it; read Input/output error. Save it somewhere else."),
    ],
)
def test_a_failed_save_says_why_and_leaves_the_old_file_as_it_was(tmp_path, monkeypatch, step, number, sentence):
    before = saved(tmp_path)
    path = tmp_path / "start.masswright"
    with monkeypatch.context() as patch:
        refuse(patch, step, number)
        with pytest.raises(DocumentError) as refusal:
            save_document(Machine(Assembly("another")), path)
    assert str(refusal.value) == f"{path}: {sentence}"
    assert path.read_bytes() == before
    assert [entry.name for entry in tmp_path.iterdir()] == ["start.masswright"]


def test_an_interrupt_leaves_the_old_file_and_nothing_beside_it(tmp_path, monkeypatch):
    before = saved(tmp_path)

    def interrupted(*_: object) -> None:
        raise KeyboardInterrupt

    with monkeypatch.context() as patch:
        patch.setattr("os.fsync", interrupted)
        with pytest.raises(KeyboardInterrupt):
            save_document(Machine(Assembly("another")), tmp_path / "start.masswright")
    assert (tmp_path / "start.masswright").read_bytes() == before
    assert len(list(tmp_path.iterdir())) == 1


def test_the_old_file_stays_in_place_until_the_new_one_lies_on_the_disk(tmp_path, monkeypatch):
    before = saved(tmp_path)
    path = tmp_path / "start.masswright"
    seen = []
    real = os.fsync

    def watched(handle: int) -> None:
        seen.append((path.read_bytes() == before, stat.S_ISDIR(os.fstat(handle).st_mode)))
        real(handle)

    monkeypatch.setattr("os.fsync", watched)
    save_document(Machine(Assembly("another")), path)
    # First the new file, beside the old one; then the folder, once the new one has its name.
    assert seen == [(True, False), (False, True)]


def test_a_folder_that_is_not_there_is_refused(tmp_path):
    path = tmp_path / "no" / "dial.masswright"
    with pytest.raises(DocumentError) as refusal:
        save_document(Machine(dial()), path)
    assert str(refusal.value) == (
        f"{path}: not saved, because there is no such folder; read No such file or directory. Choose another folder."
    )


def test_a_write_protected_file_is_not_replaced(tmp_path, monkeypatch):
    before = saved(tmp_path)
    path = tmp_path / "start.masswright"
    # The super-user may write everything, so the answer is given for the user.
    monkeypatch.setattr("os.access", lambda _path, mode: mode != os.W_OK)
    with pytest.raises(DocumentError) as refusal:
        save_document(Machine(Assembly("another")), path)
    assert str(refusal.value) == (
        f"{path}: not saved, because it may not be written there; read Permission denied. Save it somewhere else."
    )
    assert path.read_bytes() == before


def test_saving_keeps_the_permissions_of_the_file_it_replaces(tmp_path):
    saved(tmp_path)
    path = tmp_path / "start.masswright"
    path.chmod(0o640)
    save_document(Machine(Assembly("another")), path)
    assert stat.S_IMODE(path.stat().st_mode) == 0o640


def test_a_new_file_has_the_permissions_that_the_user_gives_new_files(tmp_path):
    plain = tmp_path / "plain.txt"
    plain.write_text("x")
    saved(tmp_path)
    assert stat.S_IMODE((tmp_path / "start.masswright").stat().st_mode) == stat.S_IMODE(plain.stat().st_mode)


def test_saving_through_a_link_keeps_the_link(tmp_path):
    (tmp_path / "deep").mkdir()
    save_document(Machine(dial()), tmp_path / "deep" / "real.masswright")
    link = tmp_path / "link.masswright"
    link.symlink_to(tmp_path / "deep" / "real.masswright")
    save_document(Machine(Assembly("another")), link)
    assert link.is_symlink()
    assert read_document(tmp_path / "deep" / "real.masswright").assembly == Assembly("another")


@pytest.mark.parametrize(
    ("assembly", "sentence"),
    [
        (
            Assembly("a", (Part("p", "bar", ShapeBody(Cylinder(0.1, 0.1)), pose=Pose((float("nan"), 0.0, 0.0))),)),
            "members[0].pose.position[0] (bar): a number has to be finite; read nan. Give an ordinary number.",
        ),
        (
            Assembly("a", (Part("p", "bar", ShapeBody(Cylinder(0.1, 0.1)), note="n" * 20_001),)),
            f"members[0].note (bar): this text is longer than 20000 characters; read '{'n' * 59} …. Shorten it.",
        ),
    ],
)
def test_what_could_not_be_read_again_is_not_saved(tmp_path, assembly, sentence):
    before = saved(tmp_path)
    path = tmp_path / "start.masswright"
    with pytest.raises(DocumentError) as refusal:
        save_document(Machine(assembly), path)
    assert str(refusal.value) == f"start.masswright, {sentence}"
    assert path.read_bytes() == before


def test_the_document_is_importable_without_pydantic():
    code = "import sys, core.document; print('pydantic' in sys.modules)"
    ran = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert ran.stdout.strip() == "False"
