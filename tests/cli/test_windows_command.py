"""`quillshaft windows`: what it prints, the keys of its JSON, and bad input with exit code 2."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from typer.testing import CliRunner

from quillshaft.cli.main import application
from quillshaft.present.units import SHOWN
from trains import train_text

ROOT = Path(__file__).resolve().parents[2]
PUMP = str(ROOT / "examples" / "sluice-pump.toml")
GENERATOR = str(ROOT / "examples" / "dairy-generator.toml")


def run(*arguments: str):
    return CliRunner().invoke(application(["windows"]), ["windows", *arguments])


def test_says_first_whether_the_nominal_stiffness_is_allowed_and_what_is_recommended():
    done = run(PUMP, "--link", "rubber-blocks")
    assert done.exit_code == 0
    lines = done.stdout.splitlines()
    assert lines[2].startswith("The nominal stiffness of rubber-blocks, 0.125")
    assert "is allowed: down to 0.1175" in lines[2]
    assert lines[3].startswith("Recommended nominal stiffness, with its ±15 %")
    assert "Forbidden as fitted, all else nominal" in done.stdout
    assert "dismissed by name" in done.stdout


def test_names_what_no_stiffness_clears_and_the_links_that_could():
    done = run(GENERATOR, "--link", "ring")
    text = " ".join(done.stdout.split())
    assert done.exit_code == 0
    assert "clears engine order-6 (mode 2) and engine order-6.5 (mode 2)" in text
    assert "crank-56 could clear engine order-6, engine order-6.5" in text


def test_json_holds_the_keys_that_others_rely_on():
    done = run(GENERATOR, "--link", "ring", "--orders", "major", "--json", "-")
    data = json.loads(done.stdout)
    keys = {"link", "nominal_nm_rad", "tolerance", "search_nm_rad", "forbidden", "allowed", "recommended"}
    assert keys | {"nominal_verdict", "cannot_clear"} <= set(data)
    assert data["nominal_nm_rad"] == 62000.0
    assert data["search_nm_rad"] == [3100.0, 1240000.0]
    assert set(data["forbidden"][0]) == {"from_nm_rad", "to_nm_rad", "because"}
    assert {"source": "pulley 1x", "mode": 1} in data["forbidden"][0]["because"]
    assert all(set(reach) == {"from_nm_rad", "to_nm_rad"} for reach in data["allowed"] + data["recommended"])


def test_a_range_without_an_upper_end_ends_in_null():
    data = json.loads(run(PUMP, "--link", "rubber-blocks", "--json", "-").stdout)
    assert data["forbidden"][-1]["to_nm_rad"] is None
    assert data["forbidden"][0]["from_nm_rad"] == 0.0


def test_two_links_give_a_map_with_proven_boxes(tmp_path):
    target = tmp_path / "map.json"
    done = run(PUMP, "--link", "rubber-blocks", "--link", "slow-gear", "--points", "25", "--json", str(target))
    assert done.exit_code == 0
    assert "proven by counting modes at its corners" in " ".join(done.stdout.split())
    data = json.loads(target.read_text())
    assert data["links"] == ["rubber-blocks", "slow-gear"]
    assert len(data["lines"]) >= 25
    assert set(data["boxes"][0]) == {"first_nm_rad", "second_nm_rad", "recommended"}


def test_charts_are_written(tmp_path):
    assert run(PUMP, "--link", "rubber-blocks", "--charts", str(tmp_path)).exit_code == 0
    pair = ("--link", "rubber-blocks", "--link", "slow-gear", "--points", "9")
    assert run(PUMP, *pair, "--charts", str(tmp_path)).exit_code == 0
    assert sorted(path.name for path in tmp_path.iterdir()) == [
        "windows-rubber-blocks-slow-gear.pdf",
        "windows-rubber-blocks.pdf",
    ]
    assert all(path.read_bytes().startswith(b"%PDF") for path in tmp_path.iterdir())


def test_a_case_is_laid_over_the_file():
    data = json.loads(run(PUMP, "--link", "rubber-blocks", "--case", "hard-blocks", "--json", "-").stdout)
    assert data["nominal_nm_rad"] == 190000.0
    assert data["nominal_verdict"] != "clear"


def test_search_ends_are_read_with_their_units():
    more = ("--from", "50 kN m/rad", "--to", "0.3 MN m/rad", "--json", "-")
    data = json.loads(run(PUMP, "--link", "rubber-blocks", *more).stdout)
    assert data["search_nm_rad"] == [50000.0, 300000.0]


def test_a_us_file_is_shown_in_its_units_and_bare_numbers_count_in_them(tmp_path):
    path = tmp_path / "us.toml"
    path.write_text(train_text({"a": 400.0, "b": 400.0}, "US", couplings={"link": ("a", "b", 4e6)}))
    done = run(str(path), "--link", "link", "--from", "1e6", "--to", "8e6")
    assert done.exit_code == 0
    assert SHOWN["US"].stiffness in done.stdout
    data = json.loads(run(str(path), "--link", "link", "--from", "1e6", "--to", "8e6", "--json", "-").stdout)
    assert data["search_nm_rad"] == pytest.approx([1e6 * 0.1129848290276167, 8e6 * 0.1129848290276167], rel=1e-12)


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        ((), "--link: name the link to ask about, or two for a map of both"),
        (("--link", "rubber-block"), '--link rubber-block: there is none of this name; did you mean "rubber-blocks"?'),
        (("--link", "slow-gear", "--from", "9 MN m/rad", "--to", "2 MN m/rad"), "the range must start above zero"),
        (("--link", "slow-gear", "--from", "3 mm"), '--from 3 mm: "mm" is a length, a stiffness is wanted'),
        (("--link", "slow-gear", "--from", "1", "--from", "2"), "--from: given 2 times for 1 link"),
        (("--link", "slow-gear", "--source", "vane"), "source vane: there is none of this name"),
        (("--link", "slow-gear", "--mode", "0"), "mode 0: there is no such mode; this train has modes 1 to 7"),
        (("--link", "slow-gear", "--orders", "mayor"), "--orders mayor: this is neither major nor all"),
        (("--link", "slow-gear", "--factors", "1.2", "0.8"), "factors 1.2 to 0.8: they must be above zero"),
        (("--link", "slow-gear", "--link", "reduction", "--points", "0"), "0 points: a map needs two at least"),
        (("--link", "slow-gear", "--json", "nowhere/out.json"), "there is no folder nowhere"),
    ],
)
def test_bad_input_leaves_with_exit_code_2_and_says_why(arguments, said):
    done = run(PUMP, *arguments)
    assert done.exit_code == 2
    assert said in done.stderr
    assert done.stdout == ""


def test_a_rigid_mesh_is_refused_as_no_spring(tmp_path):
    path = tmp_path / "rigid.toml"
    tables = {"shafts": {"s": ("a", "b", 1e5)}, "gears": {"g": ("b", "c", 20, 40)}}
    path.write_text(train_text({"a": 1.0, "b": 2.0, "c": 3.0}, **tables))
    done = run(str(path), "--link", "g")
    assert done.exit_code == 2
    assert "link g: this gear mesh is rigid, not a spring" in done.stderr
