"""When the two commands reuse, complete or remake the local environment, and what they say is missing."""

from __future__ import annotations

import importlib.util
import json
import sys
from pathlib import Path

import pytest

SOURCE = Path(__file__).parents[2] / ".dev" / "environment.py"
RUN, TEST = ["-e", "."], ["-e", ".", "pytest"]


class Checkout:
    """A checkout in a temporary folder; what would be made or installed there is only noted."""

    def __init__(self, root: Path, monkeypatch: pytest.MonkeyPatch) -> None:
        spec = importlib.util.spec_from_file_location("environment", SOURCE)
        self.scripts = importlib.util.module_from_spec(spec)
        spec.loader.exec_module(self.scripts)
        self.root, self.folder = root, root / ".venv"
        self.project = root / "pyproject.toml"
        self.project.write_text("[project]\n")
        self.done: list[str] = []
        monkeypatch.setattr(self.scripts, "ROOT", root)
        monkeypatch.setattr(self.scripts, "create", self.create)
        monkeypatch.setattr(self.scripts, "install", lambda *_: self.done.append("install"))

    def create(self, folder: Path) -> None:
        self.done.append("create")
        (folder / "bin").mkdir(parents=True, exist_ok=True)
        python = folder / "bin" / "python"
        python.unlink(missing_ok=True)
        python.symlink_to(sys.executable)

    def prepare(self, requirements: list[str], imports: str = "json") -> list[str]:
        self.done.clear()
        self.scripts.prepare(self.folder, requirements, imports)
        return list(self.done)


@pytest.fixture
def checkout(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Checkout:
    return Checkout(tmp_path, monkeypatch)


def test_a_ready_environment_is_reused_and_one_for_tests_also_serves_to_run(checkout: Checkout) -> None:
    assert checkout.prepare(TEST) == ["create", "install"]
    assert checkout.prepare(TEST) == []
    assert checkout.prepare(RUN) == []


def test_an_environment_to_run_is_completed_for_the_tests(checkout: Checkout) -> None:
    checkout.prepare(RUN)
    assert checkout.prepare(TEST) == ["install"]


def test_a_changed_pyproject_is_installed_again_into_the_same_environment(checkout: Checkout) -> None:
    checkout.prepare(RUN)
    checkout.project.write_text("[project]\nversion = '2'\n")
    assert checkout.prepare(RUN) == ["install"]
    assert checkout.prepare(RUN) == []


def test_an_environment_whose_making_was_cut_short_is_made_anew(checkout: Checkout) -> None:
    checkout.prepare(RUN)
    (checkout.folder / checkout.scripts.STAMP).write_text("{}")
    assert checkout.prepare(RUN) == ["create", "install"]


def test_an_environment_of_another_python_is_made_anew(checkout: Checkout) -> None:
    checkout.prepare(RUN)
    stamp = checkout.folder / checkout.scripts.STAMP
    stamp.write_text(json.dumps({**json.loads(stamp.read_text()), "made_by": "Python 3.99"}))
    assert checkout.prepare(RUN) == ["create", "install"]


@pytest.mark.parametrize("damage", ["python", "package"])
def test_an_environment_that_lost_its_python_or_a_package_is_made_anew(checkout: Checkout, damage: str) -> None:
    checkout.prepare(RUN)
    if damage == "python":
        (checkout.folder / "bin" / "python").unlink()
    wanted = "json" if damage == "python" else "a_package_that_went_away"
    assert checkout.prepare(RUN, wanted) == ["create", "install"]


def test_an_environment_made_by_hand_is_completed_and_not_thrown_away(checkout: Checkout) -> None:
    checkout.create(checkout.folder)
    assert checkout.prepare(RUN) == ["install"]


def test_without_a_pip_of_its_own_the_environment_is_filled_by_the_pip_outside(
    checkout: Checkout, monkeypatch: pytest.MonkeyPatch
) -> None:
    inside, outside = checkout.folder / "bin" / "python", Path(checkout.scripts.base_python())
    monkeypatch.setattr(checkout.scripts, "runs", lambda python, _code: python == outside)
    assert checkout.scripts.pip_for(inside) == [str(outside), "-m", "pip", "--python", str(inside)]
    monkeypatch.setattr(checkout.scripts, "runs", lambda *_: False)
    with pytest.raises(SystemExit, match=r"neither ensurepip nor pip 22\.3 .* apt-get install python3-venv"):
        checkout.scripts.pip_for(inside)


def test_missing_system_packages_are_named_where_they_may_not_be_installed(
    checkout: Checkout, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(checkout.scripts, "apt_get", lambda: None)
    packages = {"dash": "sh", "libnothing9": "libnothing.so.9", "nothing": "no-such-program"}
    missing = checkout.scripts.missing_packages(packages)
    assert missing == ["libnothing9", "nothing"]
    assert checkout.scripts.how_to_install(missing).endswith("libnothing9 nothing")


def test_the_environment_without_qt_leaves_out_every_package_that_needs_it(
    checkout: Checkout, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setitem(sys.modules, "environment", checkout.scripts)
    spec = importlib.util.spec_from_file_location("core_without_qt", SOURCE.with_name("core_without_qt.py"))
    script = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(script)
    monkeypatch.setattr(checkout.scripts, "ROOT", SOURCE.parents[1])
    own, dev = checkout.scripts.declared()
    left_out = {script.name_of(r) for r in [*own, *dev]} & script.WINDOW
    assert left_out == script.WINDOW
