"""What the commands print, away from a terminal too, and what they must not import to do it."""

from __future__ import annotations

import json
import re
import subprocess
import sys
from pathlib import Path

import pytest
from commands import command, process

from quillshaft.train.starters import starter_text
from train_files import TEXT

HEAVY = ("matplotlib", "reportlab", "pypdf", "scipy.linalg", "scipy.sparse", "scipy.special", "scipy.optimize")
# The bare package scipy is looked for by pint when it starts; none of its parts may come with it.


@pytest.fixture
def train(tmp_path: Path) -> Path:
    path = tmp_path / "train.toml"
    path.write_text(TEXT, "utf-8")
    return path


def loaded_by(folder: Path, *words: str) -> set[str]:
    """Heavy packages that a command has imported when it ends."""
    script = (
        "import sys\nfrom quillshaft.cli.main import run\n"
        f"sys.argv = ['quillshaft', *{list(words)!r}]\n"
        "try:\n    run()\nexcept SystemExit:\n    pass\n"
        f"sys.stderr.write(' '.join(name for name in {HEAVY!r} if name in sys.modules))\n"
    )
    done = subprocess.run([sys.executable, "-c", script], cwd=folder, capture_output=True, check=True, timeout=60)
    return set(done.stderr.decode().split())


@pytest.mark.parametrize(
    "words", [["--help"], ["check", "train.toml"], ["screen", "train.toml", "--json", "-"]], ids=" ".join
)
def test_help_check_and_screen_import_nothing_heavy(words, train):
    assert loaded_by(train.parent, *words) == set()


def test_help_reads_no_numbers_at_all(tmp_path):
    script = (
        "import sys\nfrom quillshaft.cli.main import run\nsys.argv = ['quillshaft', '--help']\n"
        "try:\n    run()\nexcept SystemExit:\n    pass\nassert 'numpy' not in sys.modules\n"
    )
    subprocess.run([sys.executable, "-c", script], cwd=tmp_path, capture_output=True, check=True, timeout=60)


@pytest.mark.parametrize("words", ["check train.toml", "screen train.toml --json -", "screen train.toml --all"])
def test_a_closed_pipe_is_quiet(words, train):
    line = f"{sys.executable} -m quillshaft.cli.main {words} | true"
    done = subprocess.run(["sh", "-c", line], cwd=train.parent, capture_output=True, check=False, timeout=60)
    assert done.stderr == b""


def test_without_a_terminal_there_are_no_escape_codes(train):
    for words in (["check"], ["screen", "--all"], ["--help"]):
        done = process(*words[:1], *([train.name] if words != ["--help"] else []), *words[1:], folder=train.parent)
        assert b"\x1b" not in done.stdout + done.stderr


@pytest.mark.parametrize("words", [["check"], ["screen", "--all"]])
def test_an_output_that_holds_ascii_only_still_gets_everything(words, train):
    done = process(*words, train.name, folder=train.parent, PYTHONIOENCODING="ascii")
    assert (done.returncode, done.stderr) == (0, b"")
    assert done.stdout.isascii()


def test_json_stays_valid_where_the_output_holds_ascii_only(train):
    train.write_text(TEXT.replace("booster", "電動機 🜁 booster"), "utf-8")
    done = process("screen", train.name, "--json", "-", folder=train.parent, PYTHONIOENCODING="ascii")
    assert json.loads(done.stdout.decode("ascii"))["train"]["title"] == "Raw-water 電動機 🜁 booster, train B"


def renamed(text: str, length: int) -> tuple[str, list[str]]:
    """The train file with its stations and links under names of so many letters."""
    names = [
        *["motor-core", "motor-hub", "gear-hub", "pinion", "wheel", "pump-hub", "impeller", "motor-end", "wheel-shaft"]
    ]
    names += ["pinion-shaft", "flex-block", "reduction"]
    long = []
    for name in names:
        new = (name.replace("-", "") + "x" * length)[:length]
        long.append(new)
        text = re.sub(rf'(?<![\w-]){name}(?![\w-])(?=( 2x)?["\] =])', new, text)
    return text, long


@pytest.mark.parametrize("length", [14, 30, 80])
def test_no_cell_of_a_table_is_cut_however_long_the_names(length, train):
    text, names = renamed(TEXT, length)
    train.write_text(text, "utf-8")
    for words in (["check"], ["screen", "--all"]):
        ended = command(words[0], train, *words[1:])
        assert ended.code == 0, ended.err
        assert "…" not in ended.out
    shown = command("check", train).out
    squeezed = re.sub(r"\s+", "", shown)
    assert all(name in shown for name in names) if length < 20 else all(name[:8] in squeezed for name in names)


def test_the_screen_says_first_what_it_is_about_and_how_it_stands(train):
    lines = command("screen", train).out.split("\n")
    assert lines[0] == "Raw-water booster, train B (BP-310B)"
    assert lines[1].startswith("Judged range: ")
    assert lines[2].startswith("Nominal: ")
    assert lines[3].startswith("Over the tolerances: ")


def test_all_shows_every_pair_of_mode_and_source(train):
    pairs = json.loads(command("screen", train, "--json", "-").out)["interferences"]
    table = command("screen", train, "--all").out.split("All pairs of mode and source")[1]
    assert sum(bool(re.match(r" +[0-9]+ +[0-9.]+ ", line)) for line in table.split("\n")) == len(pairs)


def test_check_lists_every_station_link_source_and_assumption(train):
    result = json.loads(command("screen", train, "--json", "-").out)
    shown = command("check", train).out
    for name in [*result["modes"][0]["shape"], *result["modes"][0]["strain_energy"]]:
        assert re.search(rf"^{name} ", shown, re.MULTILINE), name
    assert all(source["source"] in shown for source in result["sources"])
    assert f"Assumed ({len(result['assumed'])})" in shown


def test_the_version_is_that_of_the_package(tmp_path):
    from importlib.metadata import version

    assert process("--version", folder=tmp_path).stdout.decode() == f"quillshaft {version('quillshaft')}\n"


def test_a_command_alone_shows_the_help():
    ended = command()
    assert "screen" in ended.out
    assert "Traceback" not in ended.out + ended.err


def test_one_of_a_thing_is_not_written_as_many(tmp_path):
    path = tmp_path / "pump.toml"
    path.write_text(starter_text("pump"), "utf-8")
    shown = command("screen", path).out
    assert "1 mode above the highest source is listed and not judged." in shown
    assert not re.search(r"\b1 (modes|values|questions)\b", shown + command("screen", path, "--all").out)
