"""`quillshaft damped` and the section of the report as a user asks for them."""

from __future__ import annotations

import json
import re
from pathlib import Path

import pytest
from commands import command

from pdf_texts import page_texts
from trains import train_text

KEYS = {
    "mode", "undamped_mode", "undamped_hz", "frequency_hz", "natural_hz", "decay_1_s", "damping_ratio",
    "log_decrement", "unstable", "shape", "phase_deg", "energy_lost", "residual", "verified",
}  # fmt: skip
CASE = '[cases.old-oil]\nbecause = "half the damping"\ncouplings.k = { viscous = 10.0 }\n'


@pytest.fixture
def file(tmp_path: Path) -> Path:
    """Two discs on a viscous coupling and a third that feeds energy in, slower than it is lost."""
    text = train_text(
        {"a": {"inertia": 2.0, "viscous": -0.1, "viscous-because": "falling curve"}, "b": 3.0, "c": 1.0},
        couplings={"k": {"between": ["a", "b"], "stiffness": 1e5, "viscous": 20.0}},
        shafts={"s": ("b", "c", 2e6)},
        excitations={"hum": {"at": "a", "frequency": "400 Hz"}},
    )
    path = tmp_path / "train.toml"
    path.write_text(text + CASE, encoding="utf-8")
    return path


def test_json_has_the_keys_others_rely_on(file: Path) -> None:
    ended = command("damped", file, "--json", "-")
    assert ended.code == 0
    data = json.loads(ended.out)
    assert set(data["modes"][0]) == KEYS
    assert (data["default_links"], data["zeta"], data["all_verified"]) == (["s"], 0.01, True)
    assert not data["stable"]  # the whole train runs away
    assert [item["unstable"] for item in data["modes"]] == [False, False]
    assert [item["unstable"] for item in data["aperiodic"]] == [True]
    lost = data["modes"][0]["energy_lost"]
    assert set(lost) == {"k", "s", "a to ground"}
    assert sum(share for share in lost.values() if share > 0) == pytest.approx(1.0, rel=1e-12)


def test_a_case_has_its_own_damping(file: Path) -> None:
    ratio = [
        json.loads(command("damped", file, *words, "--json", "-").out)["modes"][0]["damping_ratio"]
        for words in ([], ["--case", "old-oil"])
    ]
    assert ratio[1] == pytest.approx(ratio[0] / 2, rel=0.02)


def test_the_high_value_of_zeta_is_taken_where_asked(file: Path) -> None:
    data = json.loads(command("damped", file, "--high", "--json", "-").out)
    assert data["zeta"] == 0.02


def test_the_table_says_what_grows_and_where_the_energy_goes(file: Path) -> None:
    ended = command("damped", file)
    assert ended.code == 0
    assert "UNSTABLE: a motion that does not oscillate grows" in ended.out
    assert "Energy comes in at a to ground (falling curve)." in ended.out
    assert "Damped modes" in ended.out
    assert "Motions that do not oscillate" in ended.out
    assert "all verified: torques balance to below 1e-9" in ended.out
    assert re.search(r"^k +99", ended.out, re.MULTILINE)


def test_check_lists_viscous_damping(file: Path) -> None:
    ended = command("check", file)
    assert ended.code == 0
    assert re.search(r"^k +20 N·m·s/rad", ended.out, re.MULTILINE)
    assert re.search(r"^a to ground +−0.1 N·m·s/rad +– +falling curve", ended.out, re.MULTILINE)


def test_a_bad_file_ends_with_code_2(tmp_path: Path) -> None:
    path = tmp_path / "train.toml"
    path.write_text("schema = 1\n", encoding="utf-8")
    ended = command("damped", path)
    assert ended.code == 2
    assert "train.toml" in ended.err


def test_damping_that_cancels_on_a_massless_station_is_refused(tmp_path: Path) -> None:
    path = tmp_path / "train.toml"
    path.write_text(
        train_text(
            {"a": 2.0, "m": {"inertia": 0.0, "viscous": -20.0, "viscous-because": "slope"}, "b": 3.0},
            couplings={"k": {"between": ["a", "m"], "stiffness": 1e5, "viscous": 20.0}},
            shafts={"s": ("m", "b", 1e5)},
        ),
        encoding="utf-8",
    )
    ended = command("damped", path)
    assert ended.code == 2
    assert "negative damping to ground that cancels" in ended.err


def test_the_report_holds_the_section_only_where_asked_and_the_same_bytes_each_time(file: Path, tmp_path: Path) -> None:
    def text(*words: str) -> tuple[str, bytes]:
        out = tmp_path / "report.pdf"
        assert command("report", file, "--out", out, *words).code == 0
        data = out.read_bytes()
        return " ".join(page_texts(data)), data

    asked, first = text("--damped")
    assert "Damped modes" in asked
    assert "Energy lost in a cycle" in asked
    assert "viscous to ground −0.1 N·m·s/rad (falling curve)" in asked
    assert "viscous 20 N·m·s/rad" in asked
    assert "stated: 20 N·m·s/rad" in asked
    assert text("--damped")[1] == first
    assert "Damped modes" not in text()[0]
