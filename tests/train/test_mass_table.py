"""Mass-elastic tables read into train files: headings, units, marks, gears, and what is refused."""

from __future__ import annotations

import math
from fractions import Fraction
from pathlib import Path

import pytest

from quillshaft.assess.screening import screen
from quillshaft.train.document import parse_document
from quillshaft.train.mass_table.cells import MassTableError, read_grids
from quillshaft.train.mass_table.headings import column_of, is_unit
from quillshaft.train.mass_table.reading import read_mass_table
from quillshaft.train.mass_table.writing import nearest_teeth, train_file_text
from quillshaft.train.quantity import QuantityError, read_quantity
from quillshaft.train.read import train_of
from trains import train_text

SI = """\
Station;J [kgm^2];K [MNm/rad];Speed [rpm]
motor;19.6;7.9;1487
hub;0.74;0.145;1487
pinion;0.21;;1487
wheel;3.9;4.35;560.04
impeller;7.13;;560.04
"""


def written(text: str, tmp_path: Path, rated: str | None = None, name: str = "table.csv"):
    path = tmp_path / name
    path.write_text(text, "utf-8")
    return train_file_text(read_mass_table(read_grids(path)), "t", rated)


def train(text: str, tmp_path: Path, rated: str | None = None):
    return train_of(parse_document(written(text, tmp_path, rated).text, "t.toml"), ())


def refused(text: str, tmp_path: Path, rated: str | None = None) -> str:
    with pytest.raises(MassTableError) as caught:
        written(text, tmp_path, rated)
    return str(caught.value)


def hertz(found) -> list[float]:
    return [mode.frequency_hz for mode in screen(found).modes]


def test_a_table_gives_the_modes_of_the_same_train_written_by_hand(tmp_path):
    own = train_text(
        {"motor": 19.6, "hub": 0.74, "pinion": 0.21, "wheel": 3.9, "impeller": 7.13},
        shafts={"a": ("motor", "hub", 7.9e6), "b": ("hub", "pinion", 0.145e6), "c": ("wheel", "impeller", 4.35e6)},
        gears={"g": ("pinion", "wheel", 29, 77)},
        operation={"rated": "1487 rpm"},
    )
    assert hertz(train(SI, tmp_path)) == hertz(train_of(parse_document(own, "own.toml"), ()))


SAME = {
    "decimal comma": SI.replace(".", ","),
    "tabs": SI.replace(";", "\t"),
    "commas": SI.replace(";", ","),
    "sep line": "sep=;\n" + SI,
    "byte order mark": "\ufeff" + SI,
    "title": "Booster B;;;\nrev 2, 2026;;;\n\n" + SI,
    "total": SI + "Total;31.58;;\n",
    "numbered": SI.replace("Station", "No.;Station").replace("motor;", "1;motor;").replace("hub;", "2;hub;")
    .replace("pinion;", "3;pinion;").replace("wheel;", "4;wheel;").replace("impeller;", "5;impeller;"),
    "unit row": SI.replace("Station;J [kgm^2];K [MNm/rad];Speed [rpm]", "Name;J;k;n\n;kg m^2;MNm/rad;[1/min]"),
    "powers": SI.replace("K [MNm/rad]", "Torsional stiffness (10^6 N·m/rad)"),
    "own units": SI.replace(" [MNm/rad]", "").replace("7.9;", "7.9 MNm/rad;").replace("0.145;", "145 kNm/rad;")
    .replace("4.35;", "4.35e6 N m/rad;"),
    "link rows": SI.replace("0.74;0.145;1487", "0.74;;1487\nrubber;;0.145;"),
    "blank speeds": SI.replace("0.74;0.145;1487", "0.74;0.145;").replace("7.13;;560.04", "7.13;;"),
    "rigid words": SI.replace("0.21;;", "0.21;rigid;"),
    "zero at the end": SI.replace("7.13;;", "7.13;0;"),
    "speeds with units": SI.replace("Speed [rpm]", "Speed").replace("1487", "1487rpm").replace("560.04", "560.04 rpm"),
    "ratios": SI.replace("Speed [rpm]", "Speed ratio").replace("1487", "1").replace("560.04", "0.37662338"),
}  # fmt: skip


@pytest.mark.parametrize("variant", SAME)
def test_the_same_table_in_other_spellings_gives_the_same_modes(variant, tmp_path):
    rated = "1487 rpm" if variant == "ratios" else None
    assert hertz(train(SAME[variant], tmp_path, rated)) == pytest.approx(hertz(train(SI, tmp_path)), rel=1e-14)


def test_what_was_understood_is_said(tmp_path):
    said = "\n".join(written(SAME["decimal comma"] + "Total;32;;\n", tmp_path).said)
    for words in (
        "semicolon",
        "decimal comma",
        "'J [kgm^2]': inertia in kgm^2",
        "MNm/rad",
        "total",
        "29 : 77 (ASSUMED",
    ):
        assert words in said


HEADINGS = [
    ("J [kgm^2]", "inertia", "1", 1.0),
    ("Polar inertia, lb-in-s2", "inertia", "1", 0.1129848290276167),
    ("WR2 (lb-ft2)", "wr2", "1", 0.0421401100938048),
    ("WK² [lb in²]", "wr2", "1", 0.0421401100938048 / 144.0),
    ("GD2 [kg m2]", "gd2", "1", 0.25),
    ("GD² (kgf·m²)", "gd2", "1", 0.25),
    ("k [Nm/rad]", "stiffness", "1", 1.0),
    ("K [kNm/rad]", "stiffness", "1", 1e3),
    ("Stiffness to next (MNm/rad)", "stiffness", "1", 1e6),
    ("K (10^6 lbf-in/rad)", "stiffness", "1", 1e6 * 0.1129848290276167),
    ("K [x 1e6 in-lb/rad]", "stiffness", "1", 1e6 * 0.1129848290276167),
    ("C (10⁶ N·m/rad)", "stiffness", "1", 1e6),
    ("Flexibility [10^-9 rad/(N m)]", "flexibility", "1", 1e-9),
    ("n [1/min]", "speed", "60", 2.0 * math.pi),
    ("RPM", "speed", "60", 2.0 * math.pi),
]


@pytest.mark.parametrize(("heading", "role", "number", "si"), HEADINGS)
def test_headings_and_units_in_the_usual_spellings(heading, role, number, si):
    # Factors from the exact pound (0.45359237 kg), inch (25.4 mm) and standard gravity; GD² = 4 J (common practice).
    column = column_of(heading, 0)
    assert column is not None
    assert column.role == role
    text = f"{number}e{column.exponent} {column.unit}"
    assert read_quantity(text, role, "SI").value == pytest.approx(si, rel=1e-12)


def test_a_heading_that_is_not_known_is_none_and_a_wrong_unit_is_refused():
    assert column_of("Remarkable", 0) is None
    with pytest.raises(QuantityError):
        column_of("J [kNm/rad]", 0)
    assert is_unit("[MNm/rad]", "stiffness")
    assert not is_unit("7.9", "stiffness")


@pytest.mark.parametrize("heading", ["Mass [kg]", "c [N m s/rad]", "E [GPa]", "Shaft [mm]"])
def test_columns_of_other_quantities_are_left_out_and_said(heading, tmp_path):
    lines = SI.replace("\n", ";12\n").replace("Speed [rpm];12", f"Speed [rpm];{heading}")
    found = written(lines, tmp_path)
    assert f"Column {heading!r} is not known and is left out." in found.said
    assert hertz(train_of(parse_document(found.text, "t.toml"), ())) == hertz(train(SI, tmp_path))


def test_digits_of_the_table_stand_in_the_train_file_as_they_were(tmp_path):
    text = written(SI.replace("K [MNm/rad]", "K [10^6 Nm/rad]").replace("7.9", "7.9000"), tmp_path).text
    assert 'stiffness = "7.9000e6 Nm/rad"' in text
    assert 'inertia = "19.6 kgm^2"' in text


def test_connections_named_couplings_become_couplings(tmp_path):
    table = SI.replace("Speed [rpm]", "Speed [rpm];Connection").replace("0.145;1487", "0.145;1487;flexible coupling")
    found = train(table, tmp_path)
    assert [coupling.name for coupling in found.couplings] == ["flexible coupling"]
    remarks = SI.replace("Speed [rpm]", "Speed [rpm];Remarks").replace("0.145;1487", "0.145;1487;rubber coupling")
    assert [coupling.name for coupling in train(remarks, tmp_path).couplings] == ["hub to pinion"]


def test_a_change_of_speed_is_a_gear_with_assumed_teeth_listed_and_its_mesh_switched_off(tmp_path):
    found = train(SI, tmp_path)
    assert found.gears[0].teeth == (29, 77)
    assert any(item.element == "gears.pinion / wheel" and item.key == "status" for item in found.assumed)
    assert [source.name for source, _ in screen(found).sources_off] == ["pinion / wheel mesh"]


def test_teeth_in_the_table_are_taken_and_their_mesh_stays_on(tmp_path):
    table = (
        SI.replace("Speed [rpm]", "Speed [rpm];z")
        .replace("0.21;;1487", "0.21;;1487;58")
        .replace("3.9;4.35;560.04", "3.9;4.35;560.04;154")
    )
    found = train(table, tmp_path)
    assert found.gears[0].teeth == (58, 154)
    assert not found.excitations_off


def test_a_stiffness_at_a_change_of_speed_is_that_of_the_mesh(tmp_path):
    found = train(SI.replace("0.21;;1487", "0.21;12;1487"), tmp_path)
    assert found.gears[0].mesh_nm_rad == pytest.approx(12e6)


@pytest.mark.parametrize(
    ("one", "two", "teeth"),
    [("1500", "500", (17, 51)), ("1000", "2500", (45, 18)), ("1487", "560.04", (29, 77)), ("980", "1960", (34, 17))],
)
def test_nearest_teeth_give_the_speeds_within_their_last_digits(one, two, teeth, tmp_path):
    # An external pair: the speed of the second over the first is z1/z2.
    table = f"J [kg m2],k [Nm/rad],n [rpm]\n1,,{one}\n2,,{two}\n"
    found = train(table, tmp_path)
    assert found.gears[0].teeth == teeth
    assert abs(float(Fraction(*teeth)) * float(one) - float(two)) <= 0.5 + 0.5 * teeth[0] / teeth[1]


def test_no_teeth_are_invented_for_a_speed_that_none_give():
    # π rounded to eight digits lies between no two ratios of up to 200 teeth.
    assert nearest_teeth(3.1415927, 1e-8, 1e-8) is None
    assert nearest_teeth(1e-4, 0.1, 0.1) is None


REFUSED = [
    (SI.replace("560.04", "560.0312345").replace("1487", "1487.00000"), "column of teeth"),
    (SI.replace("Speed [rpm]", "Speed ratio").replace("1487", "1").replace("560.04", "0.4"), "--rated"),
    (SI.replace("0.145;", ";"), "no stiffness and no change of speed"),
    (SI.replace("7.13;;", "7.13;3;"), "the last station has a stiffness"),
    (SI.replace("0.74;", "abc;"), "row 3, column 'J [kgm^2]': 'abc'"),
    (SI.replace("0.74;", "-0.74;"), "out of bounds"),
    (SI.replace("0.74;0.145", ";"), "row 3"),
    (SI.replace("J [kgm^2]", "J"), "no unit"),
    (SI.replace("K [MNm/rad]", "K [MNm]"), "the angle is missing"),
    (SI.replace("K [MNm/rad]", "K x 10^6 [Nm/rad]"), "stands outside the unit"),
    (SI.replace("J [kgm^2]", "J ref. [kgm^2]"), "referred values"),
    (SI.replace("J [kgm^2]", "J [kgf m^2]"), "gd2"),
    (SI.replace("Speed [rpm]", "J [kgm^2]"), "both hold inertia"),
    (SI.replace("Speed [rpm]", "GD2 [kgm^2]"), "both give the inertia"),
    (SI.replace("0.145", "0,145"), "decimal mark"),
    (SI.replace("1487", "1,487.5"), "speed"),
    ("a;b;c\n1;2;3\n", "no row of headings is recognised"),
    ("", "empty"),
    ("Station;J [kg m2];k [Nm/rad];n [rpm]\nmotor;1;;1000\n", "needs two or more"),
    (SI.replace("560.04", "0"), "stands still"),
    (SI.replace("motor;19.6;7.9;1487", "motor;19.6;7.9;"), "speed of the first station is blank"),
]


@pytest.mark.parametrize(("text", "said"), REFUSED, ids=[said for _, said in REFUSED])
def test_a_table_that_would_be_read_wrongly_is_refused(text, said, tmp_path):
    assert said in refused(text, tmp_path)


def test_every_problem_of_a_table_is_listed_at_once(tmp_path):
    found = refused(SI.replace("19.6", "x").replace("3.9;", "y;"), tmp_path)
    assert "row 2" in found
    assert "row 5" in found


def test_teeth_that_contradict_the_speeds_are_refused(tmp_path):
    table = (
        SI.replace("Speed [rpm]", "Speed [rpm];z")
        .replace("0.21;;1487", "0.21;;1487;29")
        .replace("3.9;4.35;560.04", "3.9;4.35;560.04;70")
    )
    assert "agree within 0.5 %" in refused(table, tmp_path)


def test_names_that_stand_twice_or_are_reserved_are_made_unique_and_said(tmp_path):
    table = SI.replace("hub;", "motor;").replace("wheel;", "fixed;").replace("impeller;", 'say "so" = [x];')
    found = written(table, tmp_path)
    names = [station.name for station in train_of(parse_document(found.text, "t.toml"), ()).stations]
    assert names == ["motor", "motor 2", "pinion", "fixed 1", 'say "so" = [x]']
    assert any("motor 2" in sentence for sentence in found.said)


def test_letters_of_an_old_file_are_read_as_windows_1252_and_said(tmp_path):
    path = tmp_path / "old.csv"
    path.write_bytes(SI.replace("hub", "Kupplungsnäbe").encode("cp1252"))
    table = read_mass_table(read_grids(path))
    assert table.entries[1].station == "Kupplungsnäbe"
    assert any("Windows-1252" in sentence for sentence in table.said)


def test_bytes_that_are_no_text_are_refused(tmp_path):
    path = tmp_path / "table.csv"
    path.write_bytes(b"PK\x03\x04\0\0")
    with pytest.raises(MassTableError, match="no text"):
        read_grids(path)


def workbook(path: Path, rows, title="Masses") -> None:
    openpyxl = pytest.importorskip("openpyxl")
    book = openpyxl.Workbook()
    book.active.title = "Cover"
    book.active.append(["Booster train B"])
    sheet = book.create_sheet(title)
    for row in rows:
        sheet.append(row)
    book.save(path)
    book.close()


ROWS = [
    ["Station", "J [kgm^2]", "K [MNm/rad]", "Speed\n[rpm]"],
    ["motor", 19.6, 7.9, 1487],
    ["hub", 0.74, 0.145, 1487],
    ["pinion", 0.21, None, 1487],
    ["wheel", 3.9, 4.35, 560.04],
    ["impeller", 7.13, None, 560.04],
]


def test_a_spreadsheet_gives_the_same_modes_as_the_text_table(tmp_path):
    workbook(tmp_path / "table.xlsx", ROWS)
    found = train_file_text(read_mass_table(read_grids(tmp_path / "table.xlsx")), "t")
    assert hertz(train_of(parse_document(found.text, "t.toml"), ())) == hertz(train(SI, tmp_path))
    assert any("sheet read is Masses" in sentence for sentence in found.said)


def test_a_file_that_only_bears_the_name_of_a_spreadsheet_is_refused(tmp_path):
    pytest.importorskip("openpyxl")
    (tmp_path / "table.xlsx").write_text(SI, "utf-8")
    with pytest.raises(MassTableError, match="cannot be read as a spreadsheet"):
        read_grids(tmp_path / "table.xlsx")


def test_without_the_library_a_spreadsheet_says_what_to_install(tmp_path, monkeypatch):
    monkeypatch.setitem(__import__("sys").modules, "openpyxl", None)
    (tmp_path / "table.xlsx").write_bytes(b"PK")
    with pytest.raises(MassTableError, match=r"quillshaft\[xlsx\]"):
        read_grids(tmp_path / "table.xlsx")
