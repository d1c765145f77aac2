"""`quillshaft respond` as a user asks for it: JSON keys others rely on, exit codes, files, and the report's section."""

from __future__ import annotations

import csv
import json
import re
from pathlib import Path

import pytest
from commands import command

from pdf_texts import page_texts
from trains import train_text

CONTRACT = {
    "speeds_rpm", "links", "stations", "by_order", "findings", "barred_ranges", "cases", "closings", "tolerable",
    "passages", "dead_loads", "gauges", "separation_maps", "assumed", "notes", "verdict", "combination", "unjudged",
}  # fmt: skip
FINDING = {"link", "check", "value", "limit", "unit", "at_speed_rpm", "verdict", "basis"}
FILES = ["alternating", "findings", "mean", "normal", "peak"]


def written(folder: Path, permitted: str = "1.5 kN m", units: str = "SI", **tables: object) -> Path:
    """Three discs; a pulse of order 2 meets the first mode inside the running range. All 1x and 2x are switched off."""
    stub = {"between": ["hub", "fan"], "stiffness": "5 MN m/rad", "permitted-torque": "3 kN m"}
    ring = {
        "between": ["motor", "hub"],
        "stiffness": "60 kN m/rad",
        "psi": 1.0,
        "vibratory-torque": permitted,
        "peak-torque": "9 kN m",
        "reference-frequency": "10 Hz",
    }
    off = {f"{name} {order}x": "balanced" for name in ("motor", "hub") for order in (1, 2)}
    stations = {name: {"inertia": f"{size} kg m^2"} for name, size in (("motor", 2), ("hub", 3), ("fan", 4))}
    known = {
        "couplings": {"ring": ring},
        "shafts": {"stub": stub},
        "excitations": {"pulse": {"at": "fan", "order": 2, "torque": "40 N m"}},
        "excitations_off": off,
        "operation": {"speed-at": "motor", "rated": "1500 rpm", "range": ["600 rpm", "1500 rpm"]},
        "power": {"motor": "60 kW", "fan": "balance"},
    }
    path = folder / "train.toml"
    path.write_text(train_text(stations, units, **{**known, **tables}), encoding="utf-8")
    return path


def result(path: Path, *words: str) -> dict:
    ended = command("respond", path, "--json", "-", *words)
    assert (ended.code, ended.err) == (0, "")
    return json.loads(ended.out)  # nothing else on standard output


def test_json_has_the_keys_others_rely_on(tmp_path: Path) -> None:
    data = result(written(tmp_path))
    assert set(data) >= CONTRACT
    speeds = len(data["speeds_rpm"])
    assert set(data["links"]) == {"ring", "stub"}
    for link in data["links"].values():
        assert len(link["mean_torque_nm"]) == len(link["alternating_torque_nm"]) == speeds
        assert link["stress_mpa"] is None  # no section is given
    assert all(len(station["angle_deg"]) == speeds for station in data["stations"].values())
    orders = data["by_order"]["ring"]
    assert orders["order"] == [2]
    assert orders["source"] == ["pulse"]
    assert [len(row) for row in orders["amplitude_nm"]] == [speeds]
    assert all(set(item) >= FINDING for item in data["findings"])
    assert {item["verdict"] for item in data["findings"]} <= {"pass", "fail", "no limit given"}
    assert all(set(item) >= {"from_rpm", "to_rpm", "because"} for item in data["barred_ranges"])


def test_a_single_source_alternates_as_its_order_says(tmp_path: Path) -> None:
    data = result(written(tmp_path))
    ring, orders = data["links"]["ring"], data["by_order"]["ring"]
    assert ring["alternating_torque_nm"] == pytest.approx(orders["amplitude_nm"][0], rel=2e-5)


def test_an_interference_inside_its_limits_is_cleared_and_strict_passes(tmp_path: Path) -> None:
    path = written(tmp_path)
    assert command("screen", path, "--strict").code == 3
    data = result(path)
    assert {item["status"] for item in data["closings"]} == {"cleared by response"}
    assert all(item["finding"]["verdict"] == "pass" for item in data["closings"])
    assert data["verdict"] == "pass"
    ended = command("respond", path, "--strict")
    assert ended.code == 0
    assert "every open interference is cleared" in ended.out
    assert "[cleared by response] Mode 1" in ended.out


def test_a_limit_that_is_exceeded_ends_with_3_where_strict(tmp_path: Path) -> None:
    path = written(tmp_path, permitted="20 N m")
    ended = command("respond", path, "--strict")
    assert ended.code == 3
    assert "Does not pass" in ended.out
    assert "[NOT CLEARED] Mode 1" in ended.out
    assert re.search(r"^ring +vibratory torque +.*FAIL", ended.out, re.MULTILINE)
    assert command("respond", path).code == 0
    assert result(path)["verdict"] == "fail"


def test_a_source_without_amplitude_stays_open(tmp_path: Path) -> None:
    more = {"pulse": {"at": "fan", "order": 2, "torque": "40 N m"}, "hum": {"at": "fan", "order": 2.1}}
    path = written(tmp_path, excitations=more)
    ended = command("respond", path, "--strict")
    assert ended.code == 3
    assert "NOT JUDGED, no amplitude" in ended.out
    assert "Not in the response, as the file gives no amplitude: hum." in ended.out
    data = result(path)
    assert (data["verdict"], data["unjudged"]) == ("not judged", ["hum"])


def test_long_tables_keep_to_the_links_asked_for(tmp_path: Path) -> None:
    path = written(tmp_path)
    assert re.search(r"^stub +normal", command("respond", path).out, re.MULTILINE)
    ended = command("respond", path, "--link", "ring")
    assert not re.search(r"^stub +normal", ended.out, re.MULTILINE)
    assert re.search(r"^ring +normal", ended.out, re.MULTILINE)
    wrong = command("respond", path, "--link", "rink")
    assert wrong.code == 2
    assert "ring" in wrong.err


def test_all_shows_what_the_figures_rest_on(tmp_path: Path) -> None:
    ended = command("respond", written(tmp_path), "--all")
    for words in ("Cases", "Amplitudes", "Limits", "Where to measure", "Low and high damping", "±40 N·m"):
        assert words in ended.out, words
    assert "may be off by a factor of two" in ended.out


def test_us_units_are_printed_where_the_file_asks_for_them(tmp_path: Path) -> None:
    path = written(tmp_path, units="US")
    ended = command("respond", path, "--all")
    assert ended.code == 0, ended.err
    assert "lbf·in" in ended.out
    assert "±354 lbf·in" in ended.out
    largest = max(result(path)["links"]["ring"]["alternating_torque_nm"])
    path.write_text(path.read_text(encoding="utf-8").replace('"US"', '"SI"'), encoding="utf-8")
    assert max(result(path)["links"]["ring"]["alternating_torque_nm"]) == largest


def test_tables_and_charts_are_written(tmp_path: Path) -> None:
    tables, charts = tmp_path / "tables", tmp_path / "charts"
    ended = command("respond", written(tmp_path), "--csv", tables, "--charts", charts)
    assert ended.code == 0
    assert sorted(path.name for path in tables.iterdir()) == [f"response-{name}.csv" for name in FILES]
    with (tables / "response-alternating.csv").open(encoding="utf-8") as stream:
        rows = list(csv.DictReader(stream))
    assert {row["case"] for row in rows} >= {"normal"}
    assert float(rows[0]["ring [N m]"]) >= 0
    assert (charts / "response-torque-1.pdf").read_bytes().startswith(b"%PDF")


def test_what_cannot_be_worked_out_ends_with_2_and_writes_nothing(tmp_path: Path) -> None:
    path = written(tmp_path, excitations={"hum": {"at": "fan", "order": 2}})
    out = tmp_path / "out.json"
    ended = command("respond", path, "--json", out)
    assert ended.code == 2
    assert "no source of this train has an amplitude" in ended.err
    assert not out.exists()
    assert command("respond", path, "--json", path).code == 2


def test_the_report_closes_the_loop_only_where_asked(tmp_path: Path) -> None:
    path, out = written(tmp_path), tmp_path / "report.pdf"

    def pages(*words: str) -> list[str]:
        assert command("report", path, "--out", out, *words).code == 0
        return page_texts(out)

    plain = pages()
    assert "NOT CLEAR" in plain[0]
    assert not any("Forced response" in page or "Measurement plan" in page for page in plain)
    asked = pages("--response")
    assert "PASS" in asked[0]
    assert "NOT CLEAR" not in asked[0]
    assert "Cleared by response: Mode 1" in asked[0]
    text = " ".join(asked)
    for title in ("Forced response", "Operating restrictions", "Measurement plan", "Amplitudes used"):
        assert title in text, title
    assert command("report", path, "--out", out, "--strict").code == 3
    assert command("report", path, "--out", out, "--response", "--strict").code == 0
