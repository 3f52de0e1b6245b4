"""Run the core's tests where no Qt exists: python3 .dev/core_without_qt.py [pytest's arguments].

The import contract says that core knows no window; this shows it.
"""

import re
import subprocess
import sys

import environment

WINDOW = {"pyside6-essentials", "pyqtgraph", "pyopengl", "pytest-qt"}
TOOLS = {"ruff", "mypy", "import-linter"}
TESTS = ["tests/core", "tests/outside"]


def name_of(requirement: str) -> str:
    """Return the package a requirement asks for, in lower case."""
    found = re.match(r"[\w.-]+", requirement)
    return found.group().lower() if found else ""


def main() -> int:
    """Set up an environment without the window's packages, prove it, and run the core's tests there."""
    own, dev = environment.declared()
    requirements = [r for r in [*own, *dev] if name_of(r) not in WINDOW | TOOLS]
    python = environment.prepare(environment.ROOT / ".venv-noqt", requirements, "numpy, pydantic, pytest")
    for package in ("PySide6", "pyqtgraph", "OpenGL"):
        if environment.runs(python, f"import {package}"):
            sys.exit(f"{package} can be imported in .venv-noqt, so this run would prove nothing.")
    command = [python, "-m", "pytest", *TESTS, *sys.argv[1:]]
    return subprocess.run(command, cwd=environment.ROOT, check=False).returncode


if __name__ == "__main__":
    sys.exit(main())
