from __future__ import annotations

import csv
import io
import json
import os
import signal
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from mesh_files import ascii_stl, binary_stl, box

from app.cli import main
from core.handover.answer import KEYS

ROOT = Path(__file__).parents[2]
SLOW = """
import signal, sys, time
import app.cli, app.weigh

def slow(path, task, progress=None):
    print("working", flush=True)
    time.sleep(60)

if __name__ == "__main__":
    # A shell starts what runs in its background with Ctrl-C ignored.
    signal.signal(signal.SIGINT, signal.default_int_handler)
    app.weigh.outcome_of = slow
    sys.exit(app.cli.main(["weigh", "cube.stl", "cube.stl", "--jobs", "2"]))
"""
STEEL_CUBE_KG = 7850 * 0.02**3
TETRAHEDRON = np.array([[0, 0, 0], [5, 0, 0], [0, 4, 0], [0, 0, 3]], float)[[[0, 2, 1], [0, 1, 3], [0, 3, 2], [1, 2, 3]]]


@pytest.fixture
def folder(tmp_path, monkeypatch):
    """Meshes in the working directory: a cube of side 20, the same open and inside out, the 5-4-3 tetrahedron."""
    monkeypatch.chdir(tmp_path)
    cube = box(20, 20, 20)
    for name, triangles in (
        ("cube.stl", cube), ("open.stl", cube[2:]), ("inside.stl", cube[:, ::-1]), ("tetra.stl", TETRAHEDRON),
        ("a part (2).stl", cube),
    ):
        Path(name).write_bytes(binary_stl(triangles))
    Path("text.stl").write_text(ascii_stl(cube))
    Path("cut.stl").write_bytes(binary_stl(cube)[:-7])
    return tmp_path


@pytest.fixture
def run(folder, capsys):  # noqa: ARG001  (it makes the files)
    """Run the command in this process; returns status, standard output, standard error."""

    def call(*words: str) -> tuple[int, str, str]:
        status = main(words)
        out, err = capsys.readouterr()
        return status, out, err

    return call


@pytest.fixture
def answer(run):
    """Run weigh with JSON and return the answer of a run that was sound."""

    def call(*words: str) -> dict:
        status, out, err = run("weigh", *words, "--format", "json")
        assert (status, err) == (0, "")
        return json.loads(out)

    return call


def process(*words: str, **settings: str) -> subprocess.CompletedProcess[bytes]:
    environment = {"PATH": "/usr/bin:/bin", "PYTHONPATH": str(ROOT), **settings}
    return subprocess.run([sys.executable, "-m", "app", *words], capture_output=True, env=environment, check=False)


def symbols(text: str) -> dict[str, str]:
    """Symbol and value of every line of a text sheet."""
    pairs = [line.split()[:2] for line in text.splitlines() if line.startswith("  ") and len(line.split()) > 2]
    return dict(pairs)


# Values of bodies that are known in closed form


def test_a_steel_cube_of_20_mm_weighs_62_8_g_and_has_a_sixth_of_m_a_squared(answer):
    found = answer("cube.stl", "--material", "steel")
    assert found["mass_kg"] == pytest.approx(0.0628, rel=1e-12)
    np.testing.assert_allclose(found["inertia_kgm2"], np.eye(3) * STEEL_CUBE_KG * 0.02**2 / 6, rtol=1e-12, atol=1e-20)
    assert found["centre_m"] == pytest.approx([0.01] * 3, rel=1e-12)
    assert found["principal_kgm2"] == pytest.approx([STEEL_CUBE_KG * 0.02**2 / 6] * 3, rel=1e-12)
    assert found["radii_m"] == pytest.approx([0.02 / 6**0.5] * 3, rel=1e-12)
    assert found["volume_m3"] == pytest.approx(8e-6, rel=1e-12)
    assert found["area_m2"] == pytest.approx(24e-4, rel=1e-12)


def test_the_answer_has_the_documented_keys_and_no_others(answer):
    found = answer("cube.stl", "--axis", "0,0,0;0,0,1")
    assert tuple(found) == KEYS
    assert set(found["axis"]) == {"inertia_kgm2", "offset_m", "radius_of_gyration_m"}
    assert all(set(check) == {"name", "ok", "text"} for check in found["checks"])
    assert found | {"path": "cube.stl", "triangles": 12, "unit": "mm", "verdict": "closed", "closed": True} == found
    assert (found["open_edges"], found["shells"], found["basis"]) == (0, 1, "computed")


@pytest.mark.parametrize(("unit", "metres"), [("mm", 1e-3), ("cm", 1e-2), ("m", 1.0), ("in", 0.0254), ("ft", 0.3048)])
def test_the_unit_is_that_of_the_file(answer, unit, metres):
    found = answer("cube.stl", "--unit", unit, "--density", "1000 kg/m^3")
    assert found["unit"] == unit
    assert found["mass_kg"] == pytest.approx(1000 * (20 * metres) ** 3, rel=1e-12)
    assert found["principal_kgm2"][0] == pytest.approx(1000 * (20 * metres) ** 5 / 6, rel=1e-12)


def test_about_an_axis_through_a_corner_the_transfer_term_is_added(answer):
    found = answer("cube.stl", "--material", "steel", "--axis", "0,0,0;0,0,7")["axis"]
    # 2/3 m a² about an edge of a cube (checks: a²/6 + a²/2).
    assert found["inertia_kgm2"] == pytest.approx(STEEL_CUBE_KG * 0.02**2 * 2 / 3, rel=1e-12)
    assert found["offset_m"] == pytest.approx(0.02 / 2**0.5, rel=1e-12)


def test_the_axis_point_is_in_the_unit_of_the_file_and_may_be_negative(answer):
    found = answer("cube.stl", "--unit", "in", "--axis", "-10,10,0;0,0,-1")["axis"]
    # A cube of 20 in: k² = a²/6 + d².
    assert found == {
        "inertia_kgm2": None, "offset_m": pytest.approx(20 * 0.0254, rel=1e-12),
        "radius_of_gyration_m": pytest.approx((20**2 / 6 + 20**2) ** 0.5 * 0.0254, rel=1e-12),
    }


def test_the_axis_asked_about_is_named_in_every_label(run):
    _, out, _ = run("weigh", "cube.stl", "--material", "steel", "--axis", "0,0,1 in;0,2,0")
    assert "Moment of inertia about the axis through (0; 0; 25.4) mm along (0; 2; 0)\n" in out


def test_a_weighed_mass_gives_the_same_shape_of_tensor(answer):
    found = answer("cube.stl", "--mass", "0.06 kg")
    assert found["mass_kg"] == 0.06
    assert found["principal_kgm2"] == pytest.approx([0.06 * 0.02**2 / 6] * 3, rel=1e-12)


def test_products_of_the_5_4_3_tetrahedron_are_tensor_elements(answer):
    # About the centre at unit density, from the published polyhedron checks: 9.375 12.75 15.375, 2.5 1.875 1.5.
    found = answer("tetra.stl", "--unit", "m", "--density", "100 kg/m^3")
    expected = 100 * np.array([[9.375, 2.5, 1.875], [2.5, 12.75, 1.5], [1.875, 1.5, 15.375]])
    np.testing.assert_allclose(found["inertia_kgm2"], expected, rtol=1e-12)
    axes = np.array(found["principal_axes"])
    np.testing.assert_allclose(axes @ expected @ axes.T, np.diag(found["principal_kgm2"]), atol=1e-9)
    assert np.linalg.det(axes) == pytest.approx(1)


@pytest.mark.parametrize(("about", "products", "expected"), [
    ("centre", "tensor", {"Ixx": "9.37500", "Ixy": "2.50000", "Iyz": "1.50000"}),
    ("centre", "integral", {"Ixx": "9.37500", "Pxy": "-2.50000", "Pyz": "-1.50000"}),
    ("origin", "tensor", {"Ixx": "25.0000", "Izz": "41.0000", "Ixy": "-10.0000", "Iyz": "-6.00000"}),
    ("origin", "integral", {"Ixx": "25.0000", "Pxy": "10.0000", "Pxz": "7.50000"}),
    ("0,0,0", "tensor", {"Ixx": "25.0000", "Ixy": "-10.0000"}),
    ("-1,0,0", "tensor", {"Ixx": "25.0000", "Ixy": "-20.0000", "Izz": "76.0000"}),
])  # fmt: skip
def test_the_shown_tensor_follows_point_and_convention(run, about, products, expected):
    status, out, _ = run(
        "weigh", "tetra.stl", "--unit", "m", "--mass", "10 kg", "--about", about, "--products", products,
        "--show-units", "SI",
    )  # fmt: skip
    assert status == 1  # 1 kg/m³ is the density of no solid, and that is said
    assert symbols(out) | expected == symbols(out)


def test_values_are_shown_in_the_units_asked_for(run):
    _, out, _ = run("weigh", "cube.stl", "--unit", "in", "--mass", "6 lb", "--show-units", "in lb lb*in^2")
    assert symbols(out) | {"m": "6.00000", "Ixx": "400.000", "x_c": "10.0000"} == symbols(out)
    assert "lb·in²" in out


def test_the_curved_values_count_only_when_asked(run):
    flange = str(ROOT / "tests" / "facets" / "flange_coarse.stl")
    plain, counted = (json.loads(run("weigh", flange, *more, "--format", "json")[1]) for more in ((), ("--curved",)))
    assert plain["volume_m3"] < plain["curved"]["volume_m3"]
    assert counted["volume_m3"] == counted["curved"]["volume_m3"] == plain["curved"]["volume_m3"]
    assert plain["curved"]["mass_kg"] is None


# What is missing, and what is wrong


def test_without_a_mass_the_sheet_says_which_option_gives_it_and_the_status_is_0(run):
    status, out, err = run("weigh", "cube.stl")
    assert (status, err) == (0, "")
    assert "no mass: give --material, --density or --mass" in out
    assert symbols(out) | {"m": "–", "Ixx": "–", "I1": "–", "V": "8.00000"} == symbols(out)
    assert "mm was assumed" in out
    assert "responsible engineer" in out


def test_an_open_mesh_is_answered_named_and_status_1(run):
    status, out, err = run("weigh", "open.stl", "--material", "steel")
    assert status == 1
    assert symbols(out)["m"] == "0.0628000"
    assert "estimated: holes closed flat" in out
    assert err.startswith("masswright: check failed: mesh: open.stl: the mesh is open, with 4 open edges")
    assert err.count("\n") == 1


def test_an_inside_out_mesh_is_turned_and_says_so(run):
    status, out, _ = run("weigh", "inside.stl", "--material", "steel")
    assert status == 0
    assert symbols(out)["m"] == "0.0628000"
    assert "inside out" in out
    assert "turned" in out


def test_an_impossible_density_fails_a_check(run):
    status, _, err = run("weigh", "cube.stl", "--mass", "12 kg")
    assert status == 1
    assert "check failed: density" in err


@pytest.mark.parametrize("words", [
    ("nothing.stl",), ("cut.stl",), (".",),
])  # fmt: skip
def test_a_file_that_cannot_be_read_is_one_line_and_status_3(run, words):
    status, out, err = run("weigh", *words)
    assert (status, out) == (3, "")
    assert err.startswith(f"masswright: {words[0]}")
    assert err.count("\n") == 1


@pytest.mark.parametrize("words", [
    (), ("cube.stl", "--unit", "furlong"), ("cube.stl", "--material", "unobtainium"), ("cube.stl", "--density", "7850"),
    ("cube.stl", "--density", "7850 kg"), ("cube.stl", "--mass", "-1 kg"), ("cube.stl", "--axis", "0,0,0"),
    ("cube.stl", "--axis", "0,0,0;0,0,0"), ("cube.stl", "--about", "1,2"), ("cube.stl", "--jobs", "0"),
    ("cube.stl", "--show-units", "mm mm"), ("cube.stl", "--material", "steel", "--mass", "1 kg"),
    ("cube.stl", "--format", "xml"), ("cube.stl", "--colour"),
])  # fmt: skip
def test_wrong_usage_is_one_line_and_status_2(run, words):
    status, out, err = run("weigh", *words)
    assert (status, out) == (2, "")
    assert err.startswith("masswright: ")
    assert err.count("\n") == 1


def test_one_bad_file_does_not_stop_the_others_and_the_highest_status_counts(run):
    status, out, err = run("weigh", "open.stl", "cut.stl", "cube.stl", "--format", "json")
    found = json.loads(out)
    assert status == 3
    assert [item["path"] for item in found] == ["open.stl", "cut.stl", "cube.stl"]
    assert set(found[1]) == {"path", "error"}
    assert [item.get("verdict") for item in found] == ["open", None, "closed"]
    assert [line.split(":")[1].strip() for line in err.splitlines()] == ["check failed", "cut.stl"]


def test_a_single_path_is_an_object_and_several_are_a_list(run):
    assert isinstance(json.loads(run("weigh", "cube.stl", "--format", "json")[1]), dict)
    assert isinstance(json.loads(run("weigh", "cube.stl", "cube.stl", "--format", "json")[1]), list)
    assert json.loads(run("weigh", "cut.stl", "--format", "json")[1])["error"].startswith("cut.stl")


# Forms of output


@pytest.mark.parametrize(("form", "mark", "separator"), [
    ("tsv", ".", "\t"), ("tsv", ",", "\t"), ("csv", ".", ","), ("csv", ",", ";"),
])  # fmt: skip
def test_tables_hold_the_value_of_the_answer_in_a_cell_of_its_own(run, form, mark, separator):
    _, out, _ = run("weigh", "cube.stl", "--material", "steel", "--format", form, "--decimal", mark)
    rows = {row[0]: row[1:3] for row in csv.reader(io.StringIO(out), delimiter=separator)}
    assert rows["Mass"][1] == "kg"
    assert mark in rows["Mass"][0]
    assert float(rows["Mass"][0].replace(",", ".")) == pytest.approx(0.0628, rel=1e-12)


def test_decimal_comma_in_text(run):
    assert symbols(run("weigh", "cube.stl", "--material", "steel", "--decimal", ",")[1])["m"] == "0,0628000"


def test_a_path_that_looks_like_a_formula_stays_text_in_a_table(run, folder):
    (folder / "=1+1.stl").write_bytes((folder / "cube.stl").read_bytes())
    assert run("weigh", "=1+1.stl", "--format", "csv")[1].startswith("Sheet,,,'=1+1.stl\n")


def test_several_jobs_give_the_same_output_in_the_same_order(run):
    paths = ("tetra.stl", "open.stl", "cut.stl", "cube.stl", "text.stl", "a part (2).stl")
    for form in ("text", "json"):
        alone = run("weigh", *paths, "--material", "steel", "--format", form)
        together = run("weigh", *paths, "--material", "steel", "--format", form, "--jobs", "2")
        assert together == alone


def test_ascii_and_binary_files_with_any_name_give_the_same_values(answer):
    one, other = (answer(path, "--material", "steel") for path in ("text.stl", "a part (2).stl"))
    differ = {key for key in one if one[key] != other[key]} - {"path", "checks"}
    assert differ == set()


# As a process


@pytest.mark.usefixtures("folder")
def test_streams_that_know_ascii_only_get_spellings_of_units():
    done = process("weigh", "cube.stl", "--material", "steel", PYTHONIOENCODING="ascii", LC_ALL="C")
    assert (done.returncode, done.stderr) == (0, b"")
    assert b"kg*m^2" in done.stdout
    assert b"\\x" not in done.stdout


@pytest.mark.usefixtures("folder")
def test_a_name_that_is_not_utf8_is_read_and_shown_escaped():
    name = b"caf\xe9.stl"
    try:
        Path(name.decode("utf-8", "surrogateescape")).write_bytes(Path("cube.stl").read_bytes())
    except OSError:
        pytest.skip("this file system takes no such name")
    words = [sys.executable, "-m", "app", "weigh", name]
    done = subprocess.run(words, capture_output=True, env={"PYTHONPATH": str(ROOT), "LC_ALL": "C.UTF-8"}, check=False)
    assert (done.returncode, done.stderr) == (0, b"")
    assert done.stdout.startswith(b"caf")


@pytest.mark.usefixtures("folder")
def test_a_closed_pipe_ends_it_without_a_word():
    words = [sys.executable, "-m", "app", "weigh", *["cube.stl"] * 200]
    with subprocess.Popen(
        words, stdout=subprocess.PIPE, stderr=subprocess.PIPE, env={"PYTHONPATH": str(ROOT)}
    ) as running:
        running.stdout.readline()
        running.stdout.close()
        assert running.stderr.read() == b""
        assert running.wait() == 141


def test_ctrl_c_ends_it_quietly_with_status_130(monkeypatch, run):
    def interrupted(*_: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr("app.weigh.outcome_of", interrupted)
    assert run("weigh", "cube.stl") == (130, "", "")


@pytest.mark.usefixtures("folder")
def test_weighing_a_small_mesh_loads_no_heavy_library():
    heavy = ("pint", "pydantic", "trimesh", "scipy", "PySide6", "pyqtgraph", "OpenGL", "shapely", "core.assembly")
    script = (
        "import sys; from app.cli import main; "
        "status = main(['weigh', 'cube.stl', '--material', 'steel', '--unit', 'in', '--curved']); "
        f"print('LOADED', [name for name in {heavy!r} if name in sys.modules], status)"
    )
    done = subprocess.run(
        [sys.executable, "-c", script], capture_output=True, text=True, env={"PYTHONPATH": str(ROOT)}, check=False
    )
    assert done.stdout.splitlines()[-1] == "LOADED [] 0"


def test_a_worker_that_is_killed_is_told_and_does_not_hang_the_others(run, monkeypatch):
    def killed(*_: object) -> None:
        os.kill(os.getpid(), signal.SIGKILL)

    monkeypatch.setattr("app.weigh._mesh", killed)  # the workers are forked with it
    status, out, err = run("weigh", "cube.stl", "tetra.stl", "--jobs", "2")
    assert (status, out) == (3, "")
    assert [line.split(": ")[1] for line in err.splitlines()] == ["cube.stl", "tetra.stl"]
    assert "--jobs 1" in err


def test_ctrl_c_ends_its_workers_too(folder):
    (folder / "slow.py").write_text(SLOW)
    with subprocess.Popen(
        [sys.executable, "slow.py"], stdout=subprocess.PIPE, stderr=subprocess.PIPE, env={"PYTHONPATH": str(ROOT)}
    ) as running:
        assert running.stdout.readline() == b"working\n"
        running.send_signal(signal.SIGINT)
        out, err = running.communicate(timeout=20)
    assert (running.returncode, out.replace(b"working\n", b""), err) == (130, b"", b"")
