"""The README promises two commands; each must be one line that names a script which is there."""

from __future__ import annotations

import re
from pathlib import Path

ROOT = Path(__file__).parents[2]


def test_the_first_two_blocks_of_the_readme_are_the_two_commands_and_nothing_else() -> None:
    blocks = re.findall(r"^```\w*\n(.*?)^```$", (ROOT / "README.md").read_text(encoding="utf-8"), re.DOTALL | re.MULTILINE)
    assert blocks[:2] == ["python3 .dev/run.py\n", "python3 .dev/test.py\n"]
    for block in blocks[:2]:
        assert (ROOT / block.split()[1]).is_file()
