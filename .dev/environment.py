"""What run.py and test.py share: a local Python environment, and the system packages of the window.

Only the standard library, since nothing else is there yet. Nothing outside the checkout is changed, except
that Debian packages are installed where root (or sudo without a password) and apt-get are at hand.
"""

import sys

if sys.version_info < (3, 11):  # noqa: UP036  an older Python must get a sentence, not a traceback
    sys.exit(f"Masswright needs Python 3.11 or newer; {sys.executable} is {sys.version.split()[0]}.")

import ctypes
import hashlib
import json
import os
import shutil
import subprocess
import tomllib
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
PROGRAM = ROOT / ".venv"
STAMP = "masswright-stamp.json"

# Debian package: what proves that it is there: a library that loads, a program, or (None) dpkg's word.
WINDOW_PACKAGES = {
    "libglib2.0-0": "libglib-2.0.so.0",
    "libegl1": "libEGL.so.1",
    "libgl1": "libGL.so.1",
    "libglx-mesa0": "libGLX_mesa.so.0",
    "libgl1-mesa-dri": None,
    "libxkbcommon-x11-0": "libxkbcommon-x11.so.0",
    "libxcb-cursor0": "libxcb-cursor.so.0",
    "libxcb-icccm4": "libxcb-icccm.so.4",
    "libxcb-image0": "libxcb-image.so.0",
    "libxcb-keysyms1": "libxcb-keysyms.so.1",
    "libxcb-randr0": "libxcb-randr.so.0",
    "libxcb-render-util0": "libxcb-render-util.so.0",
    "libxcb-shape0": "libxcb-shape.so.0",
    "libxcb-sync1": "libxcb-sync.so.1",
    "libxcb-xfixes0": "libxcb-xfixes.so.0",
    "libxcb-xinerama0": "libxcb-xinerama.so.0",
    "libxcb-xkb1": "libxcb-xkb.so.1",
    "libdbus-1-3": "libdbus-1.so.3",
    "libfontconfig1": "libfontconfig.so.1",
    "fonts-dejavu-core": None,
}
TEST_PACKAGES = WINDOW_PACKAGES | {"xvfb": "Xvfb"}


def say(text: str) -> None:
    """Tell what is going on, on standard error: standard output belongs to the program that is started."""
    print(text, file=sys.stderr, flush=True)


def succeeds(command: list[object], folder: Path = ROOT) -> bool:
    """Run a command out of sight and say whether it ended well."""
    return subprocess.run(command, cwd=folder, capture_output=True, check=False).returncode == 0


def base_python() -> str:
    """Return the interpreter behind any environment: one that stands in .venv cannot make .venv anew."""
    return getattr(sys, "_base_executable", None) or sys.executable


def declared() -> tuple[list[str], list[str]]:
    """Return the requirements in pyproject.toml: the program's own, and those for work on it."""
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    return project["dependencies"], project["optional-dependencies"]["dev"]


def prepare(folder: Path, requirements: list[str], imports: str) -> Path:
    """Make, mend or reuse the environment in `folder`; return its Python.

    It is reused when its stamp names this Python, this place, this pyproject.toml and these requirements, and
    `imports` can be imported. An environment whose making was cut short is made anew. One without a stamp was
    made by hand: it is completed, and made anew only if its Python does not run.
    """
    python, stamp = folder / "bin" / "python", folder / STAMP
    made_by = f"Python {sys.version} in {folder}"
    project = hashlib.sha256((ROOT / "pyproject.toml").read_bytes()).hexdigest()
    before = read_stamp(stamp)
    same_base = before.get("made_by") == made_by and runs(python, "")
    up_to_date = before.get("project") == project and set(requirements) <= set(before["requirements"])
    if same_base and up_to_date:
        if runs(python, f"import {imports}"):
            return python
        same_base = False
    by_hand = not stamp.exists() and runs(python, "")
    if not same_base and not by_hand:
        create(folder)
    install(python, requirements, None if by_hand else stamp)
    stamp.write_text(json.dumps({"made_by": made_by, "project": project, "requirements": requirements}))
    return python


def install(python: Path, requirements: list[str], stamp: Path | None) -> None:
    """Let pip install the requirements; meanwhile the stamp says "not ready", so that a kill is noticed."""
    say(f"Installing into {python.parent.parent.name} ...")
    before = stamp.read_text() if stamp else ""
    if stamp:
        stamp.write_text("{}")
    command = [*pip_for(python), "install", *requirements]
    if subprocess.run(command, cwd=ROOT, stdout=sys.stderr, check=False).returncode:
        if stamp:
            stamp.write_text(before)  # pip fetches everything before it changes anything
        sys.exit(
            "The Python packages could not be installed; pip's own message stands above. "
            "If it speaks of the connection, check the network and run the same command again."
        )


def read_stamp(stamp: Path) -> dict[str, object]:
    """Return what the stamp says; an empty dict when there is none or it is not readable as one."""
    try:
        said = json.loads(stamp.read_text())
    except (OSError, ValueError):
        return {}
    return said if isinstance(said, dict) else {}


def runs(python: Path, code: str) -> bool:
    """Say whether this Python exists, is new enough and runs the code, started away from the checkout."""
    if not python.exists():
        return False
    code = f"import sys; assert sys.version_info >= (3, 11)\n{code}"
    return succeeds([python, "-c", code], Path("/"))


def create(folder: Path) -> None:
    """Make an empty environment; without its own pip where Debian's python3-venv is not installed."""
    say(f"Making the environment {folder.name} ...")
    shutil.rmtree(folder, ignore_errors=True)
    folder.mkdir()
    (folder / STAMP).write_text("{}")  # not ready: if this is cut short, the next start begins again
    make = [base_python(), "-m", "venv", str(folder)]
    if succeeds(make):
        return
    if subprocess.run([*make, "--without-pip"], stdout=sys.stderr, check=False).returncode:
        sys.exit(f"{base_python()} cannot make an environment; its own message stands above.")


def pip_for(python: Path) -> list[str]:
    """Return the command for the environment's own pip, or for this Python's pip aimed at the environment."""
    if runs(python, "import pip"):
        return [str(python), "-m", "pip"]
    can_aim = "import pip; assert tuple(map(int, pip.__version__.split('.')[:2])) >= (22, 3)"
    if not runs(Path(base_python()), can_aim):
        sys.exit(
            f"{base_python()} has neither ensurepip nor pip 22.3 or newer; one of them is needed. "
            "On Debian: apt-get install python3-venv"
        )
    return [base_python(), "-m", "pip", "--python", str(python)]


def missing_packages(packages: dict[str, str | None]) -> list[str]:
    """Return the system packages whose proof is not there, installing them first where that is allowed."""
    missing = [name for name, proof in packages.items() if not is_there(name, proof)]
    apt = apt_get()
    if not missing or apt is None:
        return missing
    say("Installing system packages: " + " ".join(missing))
    for step in (["update"], ["install", "-y", "--no-install-recommends", *missing]):
        subprocess.run([*apt, "-q", *step], stdin=subprocess.DEVNULL, stdout=sys.stderr, check=False)
    return [name for name in missing if not is_there(name, packages[name])]


def is_there(package: str, proof: str | None) -> bool:
    """Say whether a system package, or what it would bring, is on this machine."""
    if proof is None:
        if shutil.which("dpkg") is None:  # not a Debian: no way to ask, and no reason to refuse
            return True
        return succeeds(["dpkg", "-s", package])
    if ".so" not in proof:
        return shutil.which(proof) is not None
    try:
        ctypes.CDLL(proof)
    except OSError:
        return False
    return True


def apt_get() -> list[str] | None:
    """Return the command that installs Debian packages without asking; None where that is not possible."""
    if shutil.which("apt-get") is None:
        return None
    command = ["env", "DEBIAN_FRONTEND=noninteractive", "apt-get"]
    if os.geteuid() == 0:
        return command
    if shutil.which("sudo") and succeeds(["sudo", "-n", "true"]):
        return ["sudo", "-n", *command]
    return None


def how_to_install(missing: list[str]) -> str:
    """Return the sentence that names the missing system packages and the command that brings them."""
    names = " ".join(missing)
    return f"System packages are missing. On Debian:\n  sudo apt-get install --no-install-recommends {names}"
