"""`compare`, `screen --levers` and `check --questions` as a user runs them."""

from __future__ import annotations

import hashlib
import json
import re
from pathlib import Path

import pytest
from commands import command, process

from pdf_texts import page_texts
from quillshaft.present.comparison_words import comparison_title, mode_notes, reapproval_sentences
from quillshaft.present.report.comparison import comparison_pdf
from quillshaft.study.compare import compare, compare_cases
from train_files import TEXT, edited, screened
from trains import screening_of, train_text

HARDER = edited('"0.19 MN m/rad"', '"1.1 MN m/rad"')
LIGHT = '[cases.light]\nbecause = "worn wheel"\nstations.impeller.inertia = "5 kg m^2"\n'


@pytest.fixture
def file(tmp_path: Path) -> Path:
    """A train file with two cases."""
    path = tmp_path / "booster.toml"
    path.write_text(HARDER + LIGHT)
    return path


def test_base_and_cases_stand_side_by_side_with_what_must_be_approved_anew(file: Path):
    ended = command("compare", file, "--case", "new-coupling", "--case", "light")
    assert ended.code == 0
    for words in ("new-coupling: replacement element", "light: worn wheel", "Modes, matched by shape", "wind-up"):
        assert words in ended.out
    assert re.search(r'couplings.flex-block.stiffness +"0.145 MN m/rad" +"1.1 MN m/rad"', ended.out)
    assert "To be approved anew with light" in ended.out


def test_json_has_the_keys_that_others_rely_on(file: Path):
    ended = command("compare", file, "--case", "new-coupling", "--json", "-")
    data = json.loads(ended.out)
    screenings = [
        json.loads(command("screen", file, *more, "--json", "-").out) for more in ([], ["--case", "new-coupling"])
    ]
    assert data["base"] == screenings[0]
    assert data["cases"] == {"new-coupling": screenings[1]}
    assert set(data["matched"][0]) >= {"case", "mode_base", "mode_case", "similarity", "from_hz", "to_hz"}
    assert len(data["matched"]) == len(data["base"]["modes"])
    verdicts = [{(p["source"], p["mode"]): p["verdict"] for p in s["interferences"]} for s in screenings]
    now = {item["mode_base"]: item["mode_case"] for item in data["matched"]}
    assert data["verdict_changes"]
    for item in data["verdict_changes"]:
        assert set(item) >= {"case", "source", "mode", "from", "to"}
        assert item["from"] == verdicts[0].get((item["source"], item["mode"]), "clear")
        assert item["to"] == verdicts[1].get((item["source"], now[item["mode"]]), "clear")
        assert item["from"] != item["to"]


def test_json_and_files_together_and_nothing_else_on_standard_output(file: Path, tmp_path: Path):
    sheet, charts = tmp_path / "sheet.pdf", tmp_path / "charts"
    ended = command("compare", file, "--case", "light", "--json", "-", "--out", sheet, "--charts", charts)
    assert ended.code == 0
    json.loads(ended.out)
    assert sheet.read_bytes().startswith(b"%PDF")
    assert [path.name for path in charts.iterdir()] == ["compare-light.pdf"]
    assert "Wrote" in ended.err


@pytest.mark.parametrize(
    ("options", "said"),
    [
        ([], "this file has new-coupling, light"),
        (["--case", "lite"], 'did you mean "light"'),
        (["--case", "light", "--case", "light"], "named twice"),
        (["--case", "light", "--out", "nowhere/sheet.pdf"], "no folder"),
        (["--case", "light", "--out", "booster.toml"], "this is the train file"),
    ],
)
def test_bad_input_ends_with_two_and_writes_nothing(file: Path, options, said, monkeypatch):
    monkeypatch.chdir(file.parent)
    ended = command("compare", file, *options)
    assert ended.code == 2
    assert said in ended.err
    assert ended.out == ""
    assert [path.name for path in file.parent.iterdir()] == ["booster.toml"]


def test_a_file_without_cases_is_told_how_to_write_one(tmp_path: Path):
    path = tmp_path / "plain.toml"
    path.write_text(train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", 1e5)}))
    ended = command("compare", path)
    assert ended.code == 2
    assert "write [cases.NAME]" in ended.err


def test_a_case_that_changes_nothing_is_refused(tmp_path: Path):
    path = tmp_path / "same.toml"
    path.write_text(TEXT + '[cases.same]\nstations.pinion.inertia = "0.21 kg m^2"\n')
    ended = command("compare", path, "--case", "same")
    assert ended.code == 2
    assert "changes nothing" in ended.err


def test_the_sheet_has_both_columns_cautions_and_lines_to_sign():
    found = compare_cases(screened(HARDER + LIGHT), ("new-coupling",))
    pages = page_texts(comparison_pdf(found))
    text = " ".join(pages)
    assert "Before After new-coupling" in pages[0]
    for words in ('"0.145 MN m/rad" "1.1 MN m/rad"', "To be approved anew", "Cautions", "Signature", "Approved"):
        assert words in text
    assert text.index("Cautions") < text.index("Signature")
    for line in reapproval_sentences(found.cases[0]):
        assert re.sub(r"\s+", "", line) in re.sub(r"\s+", "", text)


def test_the_same_input_gives_the_same_bytes_in_another_process(file: Path, tmp_path: Path):
    made = comparison_pdf(compare_cases(screened(HARDER + LIGHT), ("new-coupling", "light")))
    options = ("--case", "new-coupling", "--case", "light", "--out", "other.pdf")
    process("compare", file, *options, folder=tmp_path, PYTHONHASHSEED="77", TZ="Pacific/Auckland")
    other = (tmp_path / "other.pdf").read_bytes()
    assert hashlib.sha256(other).hexdigest() == hashlib.sha256(made).hexdigest()


def test_crossed_numbers_and_doubtful_matches_are_said():
    def at(k_a: float, outer: float):
        stations = {"hub": 1e4, "a1": 1.0, "a2": 1.0, "b": 1.0}
        shafts = {"inner": ("hub", "a1", k_a), "outer": ("a1", "a2", outer), "to-b": ("hub", "b", 0.3e6)}
        return screening_of(train_text(stations, shafts=shafts))

    case = compare(at(1e6, 0.05e6), {"stiff": at(1e6, 5e6)}).cases[0]
    notes = " ".join(mode_notes(case))
    assert "Mode 1 of the base is mode 2 of the case" in notes
    assert "Mode 2 of the base is mode 1 of the case" in notes
    assert "the match says little" in notes
    assert comparison_title(case).startswith("stiff: mode 1 rises most")


def test_levers_are_shown_and_in_the_json_only_when_asked_for(file: Path):
    plain, asked = command("screen", file), command("screen", file, "--levers")
    assert "Ways out for mode" in asked.out
    assert "Ways out for mode" not in plain.out
    data = json.loads(command("screen", file, "--levers", "--json", "-").out)
    assert "levers" not in json.loads(command("screen", file, "--json", "-").out)
    wanted = [
        p for p in data["interferences"] if p["dismissed"] is None and {p["verdict"], p["worst_verdict"]} != {"clear"}
    ]
    assert {(w["source"], w["mode"]) for w in data["levers"]} == {(p["source"], p["mode"]) for p in wanted}
    assert all(way["factor"] > 0 for item in data["levers"] for way in item["ways"])


def test_check_shows_only_the_questions_when_asked_for(file: Path):
    ended = command("check", file, "--questions")
    assert ended.code == 0
    assert ended.out.startswith("Supplier not named") or ended.out.startswith("To ")
    assert "Sources" not in ended.out
