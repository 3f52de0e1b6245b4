"""Open the sample machine in Masswright, setting up what that needs: python3 .dev/run.py."""

import os
import subprocess
import sys

import environment

SAMPLE = "sample_parts/indexing_dial.masswright"


def main() -> int:
    """Set up the environment, then hand over to the program; return its exit status."""
    if os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"):
        missing = environment.missing_packages(environment.WINDOW_PACKAGES)
        if missing:  # another system may bring the same under another name, so the program may try
            environment.say(environment.how_to_install(missing))
    environment.prepare(environment.PROGRAM, ["-e", "."], "app, core, numpy, pydantic, PySide6")
    program = environment.PROGRAM / "bin" / "masswright"
    return subprocess.run([program, SAMPLE, *sys.argv[1:]], cwd=environment.ROOT, check=False).returncode


if __name__ == "__main__":
    sys.exit(main())
