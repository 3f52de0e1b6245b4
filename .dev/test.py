"""Run the whole test suite, GUI and OpenGL tests included: python3 .dev/test.py [pytest's arguments].

The tests see a display of their own (Xvfb) and Mesa's software OpenGL, so they need no graphics card and
disturb no desktop. How many GUI tests ran is held against tests/gui_count.json; --record writes it anew.
"""

import contextlib
import os
import select
import subprocess
import sys
from collections.abc import Iterator

import environment

XVFB = ["Xvfb", "-screen", "0", "1400x900x24", "+extension", "GLX", "-nolisten", "tcp"]
SECONDS_TO_ANSWER = 30.0


@contextlib.contextmanager
def virtual_display() -> Iterator[str]:
    """Run Xvfb on a free display for the time of the block, and give that display's name."""
    ready, answer = os.pipe()
    command = [*XVFB, "-displayfd", str(answer)]
    quiet = subprocess.DEVNULL
    server = subprocess.Popen(command, pass_fds=[answer], stdin=quiet, stdout=quiet, stderr=quiet)
    os.close(answer)
    try:
        # Xvfb writes the display's number once it takes clients; it closes the pipe when it cannot start.
        answered = select.select([ready], [], [], SECONDS_TO_ANSWER)[0]
        number = os.read(ready, 16).decode().strip() if answered else ""
        if not number:
            sys.exit(f"Xvfb gave no display; to see why, run: {' '.join(XVFB)} -displayfd 1")
        yield f":{number}"
    finally:
        os.close(ready)
        server.terminate()
        server.wait()


def main() -> int:
    """Set up, run pytest on its own display, and return its exit status."""
    arguments = sys.argv[1:]
    count = "record" if "--record" in arguments else "check"
    missing = environment.missing_packages(environment.TEST_PACKAGES)
    if missing:
        sys.exit(environment.how_to_install(missing))
    requirements = ["-e", ".", *environment.declared()[1]]
    imports = "app, core, numpy, pydantic, PySide6, pytest, pytestqt"
    python = environment.prepare(environment.PROGRAM, requirements, imports)
    command = [python, "-m", "pytest", f"--gui-count={count}", *(a for a in arguments if a != "--record")]
    with virtual_display() as display:
        settings = {"DISPLAY": display, "QT_QPA_PLATFORM": "xcb", "LIBGL_ALWAYS_SOFTWARE": "1"}
        inherited = {name: value for name, value in os.environ.items() if name != "WAYLAND_DISPLAY"}
        return subprocess.run(command, cwd=environment.ROOT, env=inherited | settings, check=False).returncode


if __name__ == "__main__":
    sys.exit(main())
