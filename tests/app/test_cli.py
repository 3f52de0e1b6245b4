from __future__ import annotations

import csv
import json
import re
from dataclasses import replace
from pathlib import Path

import pytest
from format_files import glb_bytes, glb_scene, obj_text, off_text, plain_3mf, ply_bytes
from mesh_files import binary_stl, box

from app.cli import main
from app.progress_bar import bar_text
from app.terminal import in_signs_of
from core.assembly import Assembly, DataSheet, Group, KnownAxial, MeshBody, Part, ShapeBody, ledger_of
from core.assembly.assembly import MeantOverlap
from core.document import save_document
from core.handover.answer import KEYS
from core.machine import Machine
from core.material import ByDensity, ByMaterial
from core.mesh import MeshAsset
from core.placement import Pose, Ring
from core.shapes import SHAPES


def assembly() -> Assembly:
    plate = Part("p", "plate", ShapeBody(SHAPES["cylinder"].of({"diameter": 0.3, "length": 0.02})), ByMaterial.named("steel"))
    pin = Part(
        "q", "=pin", ShapeBody(SHAPES["cylinder"].of({"diameter": 0.02, "length": 0.05})), ByDensity(2700.0),
        Pose((0.1, 0.0, 0.02)), Ring(6),
    )  # fmt: skip
    mesh = MeshBody(MeshAsset.of_bytes(binary_stl(box(20, 20, 20)), "cube.stl"), 1e-3)
    cube = Part("c", "cube", mesh, ByDensity(7850.0), Pose((0.0, 0.0, 0.02)))
    rotor = Part("r", "rotor", KnownAxial(1.9, (0, 0, 0), 0.0021, 0.05, "catalogue 7, page 3"), DataSheet())
    return Assembly("dial", (Group("g", "table", (plate, pin)), cube, rotor))


@pytest.fixture
def folder(tmp_path, monkeypatch):
    """The working directory, with a sound document, one with a part that has no mass, and a cube."""
    monkeypatch.chdir(tmp_path)
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    save_document(Machine(assembly()), tmp_path / "dial.masswright")
    blank = Part("n", "not weighed", ShapeBody(SHAPES["sphere"].of({"diameter": 0.1})))
    save_document(Machine(assembly().inserted(blank)), tmp_path / "blank.masswright")
    (tmp_path / "cube.stl").write_bytes(binary_stl(box(20, 20, 20)))
    return tmp_path


@pytest.fixture
def run(folder, capsys):  # noqa: ARG001  (it makes the files)
    """Run the command in this process; returns status, standard output, standard error."""

    def call(*words: str) -> tuple[int, str, str]:
        status = main(words)
        out, err = capsys.readouterr()
        return status, out, err

    return call


def test_a_document_is_answered_with_its_total_its_ledger_and_its_checks(run):
    status, out, err = run("weigh", "dial.masswright", "--format", "json")
    found, whole = json.loads(out), assembly()
    assert (status, err) == (0, "")
    assert tuple(found) == (*KEYS, "axes", "drive", "balance", "ledger")
    assert found["mass_kg"] == pytest.approx(float(whole.total.mass), rel=1e-12)
    foot = ledger_of(whole).total
    assert found["axis"]["inertia_kgm2"] == pytest.approx(foot.inertia, rel=1e-12)
    assert found["axis"]["name"] == "Spindle"
    assert [line["name"] for line in found["ledger"]] == ["table", "plate", "=pin", "cube", "rotor", "dial"]
    for line in found["ledger"]:
        assert line["own_inertia_kgm2"] + line["transfer_kgm2"] == pytest.approx(line["inertia_kgm2"], rel=1e-12)
    assert {"plate", "cube", "rotor"} <= {check["part"] for check in found["checks"]}
    assert [found[key] for key in ("triangles", "unit", "verdict", "curved", "volume_m3")] == [None] * 5


def test_an_overlap_is_named_and_fails_unless_it_is_meant(run, folder):
    cube = assembly().node("c")
    sunk = assembly().replaced(replace(cube, pose=Pose((0.0, 0.0, 0.015))))
    save_document(Machine(sunk), folder / "sunk.masswright")
    save_document(Machine(sunk.with_meant(MeantOverlap("c", "p", "c"))), folder / "meant.masswright")
    status, out, err = run("weigh", "sunk.masswright", "--format", "json")
    # 5 mm of a cube of 20 mm: 2000 mm³ of steel, 0.0157 kg.
    sentence = "plate: cube penetrates it, 2000 mm³; counted twice: 0.0157 kg"
    assert status == 1
    assert f"check failed: overlap: sunk.masswright: {sentence}" in err
    (found,) = (check for check in json.loads(out)["checks"] if check["name"] == "overlap" and not check["ok"])
    assert found["text"].startswith(sentence)
    assert (found["part"], found["key"]) == ("plate", "p")
    assert run("handover", "sunk.masswright", "--to", "sunk.csv")[0] == 1
    assert run("weigh", "meant.masswright")[0] == 0


def test_overlaps_are_not_looked_for_in_a_document_of_very_many_bodies(run, folder):
    many = assembly().node("q")
    save_document(Machine(assembly().replaced(replace(many, copies=Ring(2001)))), folder / "many.masswright")
    status, out, _ = run("weigh", "many.masswright", "--format", "json")
    texts = [check["text"] for check in json.loads(out)["checks"] if check["name"] == "overlap"]
    assert status == 0
    assert texts == ["dial: overlaps are not looked for here among more than 2000 bodies"]


def test_the_text_of_a_document_holds_a_line_for_every_part(run):
    _, out, _ = run("weigh", "dial.masswright")
    ledger = out.partition("Ledger about the drive axis Spindle\n")[2].splitlines()
    assert [re.split(r"\s{2,}", line.strip())[0] for line in ledger] == [
        "Part", "table", "plate", "=pin", "cube", "rotor", "TOTAL",
    ]  # fmt: skip
    assert "catalogue 7, page 3" in out


def test_a_document_is_known_by_its_content_not_by_its_name(run, folder):
    (folder / "dial.masswright").rename(folder / "dial.stl")
    assert json.loads(run("weigh", "dial.stl", "--format", "json")[1])["ledger"]


def test_a_mesh_whose_header_begins_like_an_archive_is_a_mesh(run, folder):
    (folder / "pk.stl").write_bytes(binary_stl(box(20, 20, 20), b"PKG 7 plate"))
    assert run("weigh", "pk.stl")[0] == 0


def test_a_document_with_a_part_without_mass_is_answered_with_status_1(run):
    status, out, err = run("weigh", "blank.masswright")
    assert status == 1
    assert "1 part is left out of every value because no mass is set: not weighed" in out
    assert err.startswith("masswright: check failed: mass: blank.masswright: not weighed: ")


@pytest.mark.parametrize("words", [
    ("--unit", "in"), ("--material", "steel"), ("--density", "1 g/cm^3"), ("--mass", "1 kg"), ("--curved",),
])  # fmt: skip
def test_options_for_meshes_are_refused_for_a_document_and_answered_for_the_mesh_beside_it(run, words):
    status, out, err = run("weigh", "dial.masswright", "cube.stl", *words)
    assert status >= 2
    assert f"dial.masswright: {words[0]} is for mesh files" in err
    assert out.startswith("cube.stl")


def test_the_axis_asked_about_takes_the_place_of_the_drive_axis(run):
    _, out, _ = run("weigh", "dial.masswright", "--axis", "100,0,0;0,0,1", "--format", "json")
    found, whole = json.loads(out), assembly().total
    assert found["axis"]["inertia_kgm2"] == pytest.approx(float(whole.inertia_about_axis((0.1, 0, 0), (0, 0, 1))), rel=1e-12)
    assert found["ledger"][-1]["inertia_kgm2"] == pytest.approx(found["axis"]["inertia_kgm2"], rel=1e-12)


def test_a_damaged_document_is_one_line_and_status_3(run, folder):
    (folder / "bad.masswright").write_bytes(b"PK\x03\x04 and nothing more")
    status, out, err = run("weigh", "bad.masswright")
    assert (status, out) == (3, "")
    assert err.startswith("masswright: ")
    assert "bad.masswright" in err
    assert err.count("\n") == 1


def test_documents_and_meshes_side_by_side_in_two_processes(run):
    paths = ("dial.masswright", "cube.stl", "blank.masswright")
    assert run("weigh", *paths, "--jobs", "2") == run("weigh", *paths)


# handover


@pytest.mark.parametrize(("name", "separator"), [("sheet.csv", ","), ("sheet.tsv", "\t"), ("SHEET.CSV", ",")])
def test_handover_writes_a_table_that_reads_back(run, folder, name, separator):
    assert run("handover", "dial.masswright", "--to", name) == (0, "", "")
    with (folder / name).open(encoding="utf-8-sig", newline="") as file:
        rows = list(csv.reader(file, delimiter=separator))
    mass = next(row for row in rows if row[0] == "Mass")
    assert float(mass[1]) == pytest.approx(float(assembly().total.mass), rel=1e-15)
    assert rows[0][3] == "dial"
    assert {path.name for path in folder.iterdir()} >= {name, "dial.masswright"}
    assert not list(folder.glob("*.part"))


def test_handover_takes_units_and_decimal_mark(run, folder):
    run("handover", "dial.masswright", "--to", "sheet.csv", "--decimal", ",", "--show-units", "in lb lb*in^2")
    with (folder / "sheet.csv").open(encoding="utf-8-sig", newline="") as file:
        rows = list(csv.reader(file, delimiter=";"))
    mass = next(row for row in rows if row[0] == "Mass")
    assert float(mass[1].replace(",", ".")) == pytest.approx(float(assembly().total.mass) / 0.45359237, rel=1e-12)
    assert mass[2] == "lb"


def test_handover_writes_the_same_json_as_weigh(run, folder):
    run("handover", "dial.masswright", "--to", "sheet.json")
    assert (folder / "sheet.json").read_text(encoding="utf-8") == run("weigh", "dial.masswright", "--format", "json")[1]


def test_handover_of_a_document_with_a_failed_check_is_written_with_status_1(run, folder):
    status, _, err = run("handover", "blank.masswright", "--to", "sheet.tsv")
    assert status == 1
    assert "check failed: mass" in err
    assert "Check failed: mass" in (folder / "sheet.tsv").read_text(encoding="utf-8")


@pytest.mark.parametrize(("words", "status", "said"), [
    (("dial.masswright", "--to", "sheet.doc"), 2, "Choose one of .csv, .tsv, .json"),
    (("dial.masswright", "--to", "sheet"), 2, "no ending"),
    (("dial.masswright",), 2, "--to"),
    (("nothing.masswright", "--to", "sheet.csv"), 3, "nothing.masswright"),
    (("cube.stl", "--to", "sheet.csv"), 3, "cube.stl"),
    (("dial.masswright", "--to", "no/such/folder/sheet.csv"), 3, "cannot be written"),
])  # fmt: skip
def test_a_handover_that_cannot_be_is_refused_in_one_line(run, folder, words, status, said):
    before = sorted(folder.rglob("*"))
    got, out, err = run("handover", *words)
    assert (got, out) == (status, "")
    assert said in err
    assert err.count("\n") == 1
    assert sorted(folder.rglob("*")) == before


# The window, or what stands in for it


@pytest.mark.parametrize("name", ["dial.masswright", "cube.stl", "blank.masswright"])
def test_without_a_display_the_sheet_is_printed_and_the_status_is_0(run, monkeypatch, name):
    monkeypatch.setattr("sys.platform", "linux")
    status, out, err = run(name)
    assert status == 0
    assert out == run("weigh", name)[1]
    assert err.startswith(f"masswright: there is no display to open a window on; this is the sheet of {name}\n")


def test_without_a_display_and_a_file_it_says_how_to_get_values(run, monkeypatch):
    monkeypatch.setattr("sys.platform", "linux")
    status, out, err = run()
    assert (status, out) == (0, "")
    assert "masswright weigh" in err


def test_without_a_display_an_unreadable_file_is_still_status_3(run, monkeypatch):
    monkeypatch.setattr("sys.platform", "linux")
    assert run("nothing.stl")[0] == 3


def test_with_a_display_the_window_gets_the_file(run, monkeypatch):
    opened: list[str | None] = []
    window = type("window", (), {"open_window": staticmethod(lambda path: opened.append(path) or 0)})
    monkeypatch.setitem(__import__("sys").modules, "app.window.main", window)
    monkeypatch.setenv("DISPLAY", ":7")
    assert run("dial.masswright")[0] == run()[0] == 0
    assert opened == ["dial.masswright", None]


@pytest.mark.parametrize("words", [("--help",), ("weigh", "--help"), ("handover", "--help")])
def test_help_is_short_and_names_every_option(run, words):
    status, out, err = run(*words)
    assert (status, err) == (0, "")
    assert len(out.splitlines()) < 60
    if words[0] == "weigh":
        for option in ("unit", "material", "density", "mass", "axis", "curved", "about", "products", "show-units"):
            assert f"--{option} " in out
        assert all(f"--{option}" in out for option in ("format", "decimal", "jobs"))


def test_version_is_that_of_the_project(run):
    status, out, _ = run("--version")
    assert status == 0
    assert re.fullmatch(r"masswright (\d+\.\d+\.\d+|\(not installed\))\n", out)


# Small pieces


def test_signs_that_a_terminal_lacks_are_spelled_out():
    assert in_signs_of("−0.5 kg·m² ± 1 °", "ascii") == "-0.5 kg*m^2 +- 1 deg"
    assert in_signs_of("−0.5 kg·m²", "latin-1") == "-0.5 kg·m²"
    assert in_signs_of("Ω", "ascii") == "\\u03a9"
    assert in_signs_of("−0.5 kg·m²", "utf-8") == "−0.5 kg·m²"


def test_the_progress_bar_fills_from_left_to_right():
    assert bar_text("x", 0.0).count("#") == 0
    assert bar_text("x", 1.0).count(".") == 0
    assert " 50 %" in bar_text("x", 0.5)


def test_a_file_named_like_a_command_is_weighed(run, folder):
    Path("weigh").write_bytes((folder / "cube.stl").read_bytes())
    assert run("weigh", "weigh")[0] == 0


@pytest.mark.parametrize("suffix", ["obj", "ply", "off", "glb", "stl", "3mf"])
def test_a_mesh_of_every_format_is_weighed(run, folder, suffix):
    # A box of 0.4 × 0.3 × 0.2 in the file's unit: m where the file can say so.
    path, brick = folder / f"brick.{suffix}", box(0.4, 0.3, 0.2)
    path.write_bytes({
        "obj": lambda: obj_text(("brick", brick)).encode(), "ply": lambda: ply_bytes(brick),
        "off": lambda: off_text(brick).encode(), "glb": lambda: glb_bytes(*glb_scene(brick)),
        "stl": lambda: binary_stl(brick), "3mf": lambda: plain_3mf(brick, unit="meter"),
    }[suffix]())
    status, out, err = run("weigh", path.name, "--unit", "m", "--density", "1000 kg/m^3", "--format", "json")
    assert (status, err) == (0, "")
    assert json.loads(out)["mass_kg"] == pytest.approx(24.0, rel=1e-6)


def test_an_empty_option_is_refused(run):
    for option in ("--density", "--mass", "--material", "--show-units"):
        assert run("weigh", "cube.stl", option, "")[0] == 2, option


@pytest.mark.parametrize("options", [
    ("--mass", "1e308 kg"), ("--density", "1e300 kg/m3"), ("--mass", "1 kg", "--axis", "1e300,0,0;0,0,1"),
])
def test_a_number_too_large_for_any_machine_is_refused_in_one_line(run, options):
    status, out, err = run("weigh", "cube.stl", *options)
    assert (status, out) == (2, "")
    assert "too large for any machine" in err
    assert err.count("\n") == 1


def test_what_is_named_like_a_document_is_read_as_one(run, folder):
    (folder / "fake.masswright").write_text("no archive at all")
    status, _, err = run("weigh", "fake.masswright")
    assert status == 3
    assert "STL" not in err


def test_a_steel_is_found_by_its_number_alone(run):
    assert run("weigh", "cube.stl", "--material", "1.4301")[0] == 0
