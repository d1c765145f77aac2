"""The rooms of the package import one way only, and nothing imports in a circle."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parents[1]
LINT = "from importlinter.cli import lint_imports; import sys; sys.exit(lint_imports(config_filename='pyproject.toml'))"


def test_rooms_import_one_way_and_never_in_a_circle() -> None:
    done = subprocess.run(
        [sys.executable, "-c", LINT], cwd=ROOT, capture_output=True, text=True, check=False, timeout=120
    )
    assert done.returncode == 0, done.stdout + done.stderr
    assert "Contracts: 3 kept, 0 broken." in done.stdout


def test_top_level_holds_what_the_readme_describes_and_nothing_else() -> None:
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=False).stdout
    names = {line.split("/")[0] for line in listed.splitlines()}
    wanted = {"README.md", "DEVELOPERS.md", "pyproject.toml", "src", "tests", "examples", "reports"}
    assert {name for name in names if not name.startswith(".")} <= wanted
