"""Exit codes, what goes to which stream, and files written whole or not at all."""

from __future__ import annotations

import json
import os
import stat
import threading
from pathlib import Path

import pytest
from commands import command, process

from quillshaft.cli.output import write_whole
from quillshaft.train.starters import KINDS, schema_text, starter_text
from train_files import TEXT, edited

KEYS = {
    "schema", "version", "input_sha256", "train", "modes", "sources", "interferences", "assumed", "verdict",
    "worst_verdict",
}  # fmt: skip
MODE_KEYS = {
    "mode", "frequency_hz", "omega_rad_s", "cycles_per_min", "damping_ratio", "shape", "strain_energy",
    "kinetic_energy", "bounds_hz", "frequency_along", "proof",
}  # fmt: skip
SOURCE_KEYS = {"source", "at", "order", "frequency_hz", "speed_ratio", "when"}
PAIR_KEYS = {
    "source", "mode", "critical_speed_rpm", "critical_speeds_rpm", "margin", "worst_margin", "required",
    "excitability", "verdict", "worst_verdict", "dismissed",
}  # fmt: skip


@pytest.fixture
def train(tmp_path: Path) -> Path:
    path = tmp_path / "train.toml"
    path.write_text(TEXT, "utf-8")
    return path


@pytest.fixture
def clear(tmp_path: Path) -> Path:
    path = tmp_path / "clear.toml"
    path.write_text(starter_text("pump"), "utf-8")
    return path


def test_a_screening_ends_with_0_whatever_its_verdict_and_with_3_only_where_asked(train, clear):
    assert command("screen", train).code == 0
    assert command("screen", train, "--strict").code == 3
    assert command("screen", clear, "--strict").code == 0


def test_strict_still_prints_and_writes_everything(train, tmp_path):
    ended = command("screen", train, "--strict", "--json", tmp_path / "out.json")
    assert ended.code == 3
    assert ended.out == command("screen", train).out
    assert json.loads((tmp_path / "out.json").read_text("utf-8"))["worst_verdict"] != "clear"


def test_bad_input_ends_with_2_says_all_on_standard_error_and_prints_nothing(train):
    train.write_text(edited('"0.74 kg m^2"', '"0,74 kg m^2"', edited("[29, 77]", "[29]")), "utf-8")
    for name in ("check", "screen", "report"):
        ended = command(name, train)
        assert (ended.code, ended.out) == (2, "")
        assert [line.split(":")[1] for line in ended.err.split("\n") if line.startswith("train.toml:")] == ["14", "35"]
    assert [path.name for path in train.parent.iterdir()] == ["train.toml"]


@pytest.mark.parametrize(
    "words", [["screen"], ["screen", "x.toml", "--fast"], ["paint"], ["new", "x.toml", "--kind", "pumpp"]]
)
def test_a_wrong_call_ends_with_2_and_says_so_on_standard_error(words, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    ended = command(*words)
    assert (ended.code, ended.out) == (2, "")
    assert ended.err
    assert list(tmp_path.iterdir()) == []


def test_a_misspelt_kind_of_starter_names_the_nearest():
    said = command("new", "x.toml", "--kind", "pumpp").err
    assert said == '--kind pumpp: there is no such kind; did you mean "pump"? Allowed: pump | generator-set | fan.\n'
    assert "no such kind. Allowed" in command("new", "x.toml", "--kind", "zzz").err


def test_json_on_standard_output_stands_alone_there(train):
    ended = command("screen", train, "--json", "-", "--all")
    assert ended.err == ""
    assert json.loads(ended.out, parse_constant=pytest.fail)["train"]["title"] == "Raw-water booster, train B"


def test_json_has_the_keys_that_others_rely_on(train):
    result = json.loads(command("screen", train, "--json", "-").out)
    assert set(result) >= KEYS
    assert all(set(mode) >= MODE_KEYS for mode in result["modes"])
    assert all(set(source) >= SOURCE_KEYS for source in result["sources"])
    assert all(set(pair) >= PAIR_KEYS for pair in result["interferences"])
    assert all(set(item) == {"element", "key", "value", "why"} for item in result["assumed"])
    assert all(set(mode["proof"]) >= {"below", "above", "relative_width"} for mode in result["modes"])
    assert result["schema"] == 1
    assert len(result["input_sha256"]) == 64
    assert {pair["verdict"] for pair in result["interferences"]} <= {"clear", "close", "crossing", "barred"}


def test_json_in_a_file_and_on_standard_output_are_the_same(train, tmp_path):
    command("screen", train, "--json", tmp_path / "out.json")
    assert (tmp_path / "out.json").read_text("utf-8") == command("screen", train, "--json", "-").out


def test_several_cases_are_laid_in_turn(train):
    train.write_text(TEXT + '[cases.hot]\ncouplings.flex-block = { stiffness = "0.1 MN m/rad" }\n', "utf-8")
    both = json.loads(command("screen", train, "--case", "new-coupling", "--case", "hot", "--json", "-").out)
    turned = json.loads(command("screen", train, "--case", "hot", "--case", "new-coupling", "--json", "-").out)
    assert both["modes"][0]["frequency_hz"] < turned["modes"][0]["frequency_hz"]
    assert "case new-coupling + hot" in command("screen", train, "--case", "new-coupling", "--case", "hot").out
    assert command("screen", train, "--case", "hott").err.endswith('did you mean "hot"? Allowed: new-coupling, hot.\n')


def test_check_looks_into_every_case(train):
    train.write_text(edited("psi = 0.9", "psi = -0.9"), "utf-8")
    ended = command("check", train)
    assert (ended.code, ended.out) == (2, "")
    assert ended.err.startswith("In case new-coupling:\ntrain.toml:58: [cases.new-coupling]")
    assert command("screen", train).code == 0


@pytest.mark.parametrize(
    ("target", "said"),
    [
        ("missing/out.json", "there is no folder"),
        ("folder", "this is a folder; name a file"),
        ("train.toml", "this is the train file; name another file"),
        ("link.toml", "this is the train file; name another file"),
        ("n" * 300 + ".pdf", "cannot be written"),
    ],
)
@pytest.mark.parametrize("words", [["screen", "--json"], ["report", "--out"], ["report", "--json"]])
def test_a_place_that_cannot_be_written_is_refused_and_nothing_is_written(
    train, tmp_path, monkeypatch, words, target, said
):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "folder").mkdir()
    (tmp_path / "link.toml").symlink_to(train)
    if words[0] == "report":
        monkeypatch.setattr("quillshaft.cli.work.report_bytes", lambda *_: b"%PDF")
    before = sorted(path.name for path in tmp_path.rglob("*"))
    ended = command(words[0], train, words[1], target)
    assert ended.code == 2
    assert said in ended.err
    assert train.read_text("utf-8") == TEXT
    left = {path.name for path in tmp_path.rglob("*")} - set(before)
    assert left <= ({"reports", "TA-0417-rev-0.pdf"} if words == ["report", "--json"] and len(target) == 300 else set())


@pytest.mark.skipif(os.geteuid() == 0, reason="the superuser may write anywhere")
def test_a_folder_without_write_permission_is_refused(train, tmp_path):
    closed = tmp_path / "closed"
    closed.mkdir()
    closed.chmod(0o500)
    assert "cannot be written to" in command("screen", train, "--json", closed / "out.json").err


def test_an_existing_file_stays_whole_where_writing_fails(tmp_path, monkeypatch):
    target = tmp_path / "out.json"
    target.write_bytes(b"yesterday")

    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("quillshaft.cli.output.os.replace", full)
    with pytest.raises(Exception, match="2"):
        write_whole(target, b"today")
    assert target.read_bytes() == b"yesterday"
    assert [path.name for path in tmp_path.iterdir()] == ["out.json"]


def test_a_file_that_is_replaced_keeps_its_permissions_and_a_link_stays_a_link(tmp_path):
    target, link = tmp_path / "out.json", tmp_path / "link.json"
    target.write_bytes(b"yesterday")
    target.chmod(0o640)
    link.symlink_to(target)
    write_whole(link, b"today")
    assert link.is_symlink()
    assert target.read_bytes() == b"today"
    assert stat.S_IMODE(target.stat().st_mode) == 0o640


def test_a_pipe_is_written_to_and_never_replaced(train, tmp_path):
    pipe, got = tmp_path / "pipe", []
    os.mkfifo(pipe)
    reader = threading.Thread(target=lambda: got.append(pipe.read_bytes()))
    reader.start()
    assert command("screen", train, "--json", pipe).code == 0
    reader.join(timeout=10)
    assert stat.S_ISFIFO(pipe.stat().st_mode)
    assert json.loads(got[0])["schema"] == 1


@pytest.mark.parametrize("kind", KINDS)
def test_new_writes_a_starter_that_checks_and_screens(kind, tmp_path):
    path = tmp_path / "mine.toml"
    assert command("new", path, "--kind", kind).code == 0
    assert path.read_text("utf-8") == starter_text(kind)
    assert command("check", path).code == 0
    assert command("screen", path).code == 0


def test_new_keeps_an_existing_file_unless_forced_and_writes_the_schema_beside_it(tmp_path):
    path, schema = tmp_path / "mine.toml", tmp_path / "mine.schema.json"
    path.write_text("mine", "utf-8")
    ended = command("new", path, "--schema", schema)
    assert ended.code == 2
    assert "exists already; --force replaces it" in ended.err
    assert path.read_text("utf-8") == "mine"
    assert not schema.exists()
    assert command("new", path, "--schema", schema, "--force").code == 0
    assert schema.read_text("utf-8") == schema_text()
    assert "need two files" in command("new", path, "--schema", path, "--force").err


def test_charts_go_into_a_folder_and_never_over_a_file(train, tmp_path):
    (tmp_path / "file").write_text("mine", "utf-8")
    ended = command("screen", train, "--charts", tmp_path / "file")
    assert (ended.code, ended.out) == (2, "")
    assert "this is a file; name a folder" in ended.err
    assert "there is no folder" in command("screen", train, "--charts", tmp_path / "no" / "charts").err


def test_charts_and_report_are_written_as_pdf(clear, tmp_path):
    command("screen", clear, "--charts", tmp_path / "charts", "--json", "-")
    charts = list((tmp_path / "charts").iterdir())
    assert charts
    assert all(path.read_bytes().startswith(b"%PDF") for path in charts)
    ended = command("report", clear, "--out", tmp_path / "report.pdf")
    assert ended.code == 0
    assert ended.out.endswith(f"Wrote {tmp_path / 'report.pdf'}\n")
    assert (tmp_path / "report.pdf").read_bytes().startswith(b"%PDF")


def test_a_report_without_a_name_is_named_after_document_revision_and_cases(train, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    monkeypatch.setattr("quillshaft.cli.work.report_bytes", lambda *_: b"%PDF")
    assert command("report", train, "--case", "new-coupling").code == 0
    assert (tmp_path / "reports" / "TA-0417-rev-0-new-coupling.pdf").read_bytes() == b"%PDF"


def test_a_real_process_keeps_the_streams_apart(train):
    done = process("screen", train.name, "--json", "-", folder=train.parent)
    assert (done.returncode, done.stderr) == (0, b"")
    assert json.loads(done.stdout)["verdict"] in ("clear", "close", "crossing", "barred")
