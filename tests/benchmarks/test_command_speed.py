"""Whole commands against a process that only imports what they stand on, measured in pairs."""

from __future__ import annotations

import os
import statistics
import subprocess
import sys
import time
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
BARE = "import numpy; from pydantic import BaseModel; import pint, typer, rich.table, rich.console"
PAIRS = 9


def environment(cache: Path) -> dict[str, str]:
    """Compiled modules are kept, as after an ordinary installation."""
    kept = {name: value for name, value in os.environ.items() if name != "PYTHONDONTWRITEBYTECODE"}
    return {**kept, "PYTHONPYCACHEPREFIX": str(cache)}


def seconds(command: list[str], env: dict[str, str]) -> float:
    """Wall time of a whole process."""
    start = time.perf_counter()
    subprocess.run(command, check=True, capture_output=True, env=env)
    return time.perf_counter() - start


def twelve_stations(folder: Path) -> Path:
    """The generator set with a fan on its nose: twelve stations."""
    text = (ROOT / "examples" / "dairy-generator.toml").read_text()
    text = text.replace("[stations]\n", '[stations]\nfan = { inertia = "0.12 kg m^2" }\n')
    text = text.replace(
        "[shafts]\n", '[shafts]\nfan-drive = { between = ["fan", "pulley"], stiffness = "0.9 MN m/rad" }\n'
    )
    path = folder / "twelve.toml"
    path.write_text(text)
    return path


@pytest.mark.benchmark
def test_screening_costs_at_most_1_6_times_its_imports(tmp_path: Path) -> None:
    env = environment(tmp_path / "cache")
    screen = [sys.executable, "-m", "quillshaft.cli.main", "screen", str(twelve_stations(tmp_path))]
    bare = [sys.executable, "-c", BARE]
    seconds(screen, env), seconds(bare, env)
    pairs = [(seconds(screen, env), seconds(bare, env)) for _ in range(PAIRS)]
    ratios = sorted(whole / imports for whole, imports in pairs)
    print(
        f"\nscreen, 12 stations: {statistics.median(p[0] for p in pairs):.3f} s; imports alone "
        f"{statistics.median(p[1] for p in pairs):.3f} s; ratio median {statistics.median(ratios):.2f} "
        f"({ratios[0]:.2f} to {ratios[-1]:.2f})"
    )
    assert statistics.median(ratios) <= 1.6


@pytest.mark.benchmark
def test_report_of_the_pump_example_takes_under_three_seconds(tmp_path: Path) -> None:
    env = environment(tmp_path / "cache")
    out = tmp_path / "report.pdf"
    command = [sys.executable, "-m", "quillshaft.cli.main", "report", str(ROOT / "examples" / "sluice-pump.toml")]
    command += ["--out", str(out)]
    seconds(command, env)
    times = sorted(seconds(command, env) for _ in range(5))
    print(f"\nreport of the pump example: median {statistics.median(times):.2f} s ({times[0]:.2f} to {times[-1]:.2f})")
    assert statistics.median(times) < 3.0
