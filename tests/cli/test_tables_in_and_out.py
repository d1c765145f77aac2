"""`new --from`: a table in, the same modes; `screen --csv`: numbers out, the same numbers read back."""

from __future__ import annotations

import csv
import math
from pathlib import Path

import pytest
from commands import command

from quillshaft.assess.screening import screen
from quillshaft.present.results_csv import csv_text
from quillshaft.train.read import load
from train_files import TEXT

NAMES = {"modes.csv", "shapes.csv", "interferences.csv", "sources.csv", "stations.csv", "links.csv"}
TABLE = """\
Station;J [kgm²];K [10^6 N m/rad];Speed [rpm]
motor;19,6;0,145;1487
pinion;0,21;;1487
wheel;3,9;4,35;560,04
impeller;7,13;;
"""


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "masses.csv").write_text(TABLE, "utf-8")
    (tmp_path / "train.toml").write_text(TEXT, "utf-8")
    return tmp_path


def rows(path: Path) -> list[dict[str, str]]:
    with path.open(encoding="utf-8", newline="") as stream:
        return list(csv.DictReader(stream))


def test_a_table_becomes_a_train_file_after_saying_what_was_understood(folder):
    ended = command("new", folder / "out.toml", "--from", folder / "masses.csv")
    assert (ended.code, ended.err) == (0, "")
    for words in ("semicolon", "decimal comma", "times 10^6", "29 : 77", "Wrote"):
        assert words in ended.out
    assert ended.out.index("29 : 77") < ended.out.index("Wrote")
    assert command("check", folder / "out.toml").code == 0
    assert len(screen(load(folder / "out.toml")).modes) == 2


def test_a_bad_table_ends_with_2_and_writes_nothing(folder):
    (folder / "bad.csv").write_text(TABLE.replace("19,6", "x"), "utf-8")
    ended = command("new", folder / "out.toml", "--from", folder / "bad.csv")
    assert (ended.code, ended.out) == (2, "")
    assert "row 2, column 'J [kgm²]': 'x'" in ended.err
    assert not (folder / "out.toml").exists()


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["out.toml", "--from", "none.csv"], "cannot be read"),
        (["masses.csv", "--from", "masses.csv", "--force"], "name another file"),
        (["out.toml", "--rated", "1487 rpm"], "--from"),
        (["out.toml", "--from", "masses.csv", "--rated", "1487"], None),
        (["out.toml", "--from", "masses.csv", "--rated", "1487 Hz"], "speed"),
        (["train.toml", "--from", "masses.csv"], "--force replaces it"),
    ],
)
def test_what_new_refuses(folder, monkeypatch, words, said):
    monkeypatch.chdir(folder)
    before = (folder / "masses.csv").read_bytes()
    ended = command("new", *words)
    assert ended.code == (0 if said is None else 2)
    assert said is None or said in ended.err
    assert (folder / "masses.csv").read_bytes() == before


def test_every_number_of_the_tables_reads_back_as_it_was(folder):
    ended = command("screen", folder / "train.toml", "--csv", folder / "tables")
    assert ended.code == 0
    assert {path.name for path in (folder / "tables").iterdir()} == NAMES
    found = screen(load(folder / "train.toml"))
    modes = rows(folder / "tables" / "modes.csv")
    assert [float(row["frequency [Hz]"]) for row in modes] == [mode.frequency_hz for mode in found.modes]
    assert [(float(row["lowest [Hz]"]), float(row["highest [Hz]"])) for row in modes] == [
        mode.bounds_hz for mode in found.modes
    ]
    assert [float(row["damping ratio [1]"]) for row in modes] == [mode.damping_ratio for mode in found.modes]
    shapes = rows(folder / "tables" / "shapes.csv")
    for mode in found.modes:
        own = [row for row in shapes if int(row["mode"]) == mode.mode]
        stations = {row["element"]: float(row["angle [1]"]) for row in own if row["kind"] == "station"}
        links = {row["element"]: float(row["strain energy share [1]"]) for row in own if row["kind"] == "link"}
        assert stations == mode.shape
        assert links == mode.strain_energy
    pairs = rows(folder / "tables" / "interferences.csv")
    assert len(pairs) == len(found.interferences)
    for row, pair in zip(pairs, found.interferences, strict=True):
        assert (row["source"], int(row["mode"]), row["verdict"]) == (pair.source, pair.mode, pair.verdict)
        assert float(row["margin [1]"]) == pair.margin
        assert float(row["worst margin [1]"]) == pair.worst_margin
        assert [float(text) for text in row["critical speeds [rpm]"].split()] == list(pair.critical_speeds_rpm)
        assert row["critical speed [rpm]"] == ("" if pair.critical_speed_rpm is None else repr(pair.critical_speed_rpm))


def test_stations_and_links_read_back_as_the_graph_holds_them(folder):
    command("screen", folder / "train.toml", "--csv", folder / "tables")
    found = screen(load(folder / "train.toml"))
    stations = rows(folder / "tables" / "stations.csv")
    assert [row["station"] for row in stations] == list(found.graph.stations)
    assert [float(row["inertia [kg m^2]"]) for row in stations] == found.graph.inertia_kgm2.tolist()
    assert float(stations[0]["rated speed [rpm]"]) == pytest.approx(1487.0, rel=1e-14)
    links = rows(folder / "tables" / "links.csv")
    for row, link, duty in zip(links, found.graph.links, found.duties, strict=True):
        assert row["link"] == link.name
        stiffness = row["stiffness [N m/rad]"]
        assert (float(stiffness) if stiffness else None) == link.stiffness_nm_rad
        assert float(row["mean torque [N m]"]) == duty.mean_torque_nm
    sources = rows(folder / "tables" / "sources.csv")
    assert len(sources) == len(found.sources) + len(found.sources_off)


def test_tables_written_out_make_a_table_that_reads_in_again(folder):
    # Stations and links of a chain without gears, joined by hand to one table: the same modes to the last digit.
    chain = TABLE.replace("pinion;0,21;;1487", "hub;0,21;0,3;1487").replace("560,04", "1487")
    (folder / "masses.csv").write_text(chain, "utf-8")
    command("new", folder / "out.toml", "--from", folder / "masses.csv")
    command("screen", folder / "out.toml", "--csv", folder / "tables")
    stations, links = (rows(folder / "tables" / f"{name}.csv") for name in ("stations", "links"))
    stiffness = [row["stiffness [N m/rad]"] for row in links] + [""]
    lines = ["station,inertia [kg m^2],stiffness [N m/rad],rated speed [rpm]"]
    lines += [
        f"{row['station']},{row['inertia [kg m^2]']},{value},{row['rated speed [rpm]']}"
        for row, value in zip(stations, stiffness, strict=True)
    ]
    (folder / "again.csv").write_text("\n".join(lines), "utf-8")
    assert command("new", folder / "again.toml", "--from", folder / "again.csv").code == 0
    first, second = (screen(load(folder / name)).modes for name in ("out.toml", "again.toml"))
    assert [mode.frequency_hz for mode in second] == [mode.frequency_hz for mode in first]


@pytest.mark.parametrize("value", [0.1 + 0.2, 1e-300, 123456789.12345678, -0.0, 5e-324, math.pi])
def test_a_number_is_written_with_every_digit_that_it_holds(value):
    assert float(csv_text([(value,)])) == value


def test_what_is_no_number_is_a_blank_cell_and_text_keeps_its_marks():
    line = csv_text([('say "so", twice', None, math.nan, math.inf, True, 3)])
    assert next(csv.reader([line])) == ['say "so", twice', "", "", "", "yes", "3"]


def test_a_bad_train_or_a_bad_place_writes_no_table(folder):
    (folder / "broken.toml").write_text(TEXT.replace("schema = 1", "schema = 9"), "utf-8")
    assert command("screen", folder / "broken.toml", "--csv", folder / "tables").code == 2
    assert not (folder / "tables").exists()
    assert command("screen", folder / "train.toml", "--csv", folder / "masses.csv").code == 2
    assert command("screen", folder / "train.toml", "--csv", folder / "no" / "such").code == 2
    (folder / "tables").mkdir()
    (folder / "tables" / "stations.csv").mkdir()
    ended = command("screen", folder / "train.toml", "--csv", folder / "tables")
    assert (ended.code, ended.out) == (2, "")
    assert [path.name for path in (folder / "tables").iterdir()] == ["stations.csv"]
