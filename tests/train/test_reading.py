"""What is said about a mistake in a train file: the whole text as the user reads it, and where it points."""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path

import pytest

from quillshaft.train.document import parse_document
from quillshaft.train.machine_rows import MACHINE_ROWS
from quillshaft.train.messages import keys_of
from quillshaft.train.problems import TrainFileError
from quillshaft.train.read import load, train_of
from quillshaft.train.rows import CouplingRow
from quillshaft.train.shaft_rows import PieceRow
from quillshaft.train.validate import MOST_PROBLEMS, TOP_LEVEL
from train_files import MORE, NAME, TEXT, complaint, edited, screened

JARGON = re.compile(r"input should|valid (string|list|dict|int|bool|num)|instance of|after validation|[a-z]Row\b|'")


@dataclass(frozen=True)
class Mistake:
    """Lines taken out of TEXT and put in, the cases laid over it, and all that is then said."""

    name: str
    cases: tuple[str, ...]
    after: int
    taken: str
    put: str
    said: str

    @property
    def text(self) -> str:
        """The file with the mistake in it."""
        if self.taken:
            return edited(self.taken, self.put)
        lines = TEXT.split("\n")
        return "\n".join([*lines[: self.after], self.put.rstrip("\n"), *lines[self.after :]]) if self.put else TEXT


def _mistake(block: str) -> Mistake:
    """One block of mistakes.txt: ### name | cases, then - lines out, + lines in (after line @), = what is said."""
    head, *lines = block.strip("\n").split("\n")
    name, _, cases = head.partition(" | ")
    out, into, said = ("".join(line[2:] + "\n" for line in lines if line.startswith(mark)) for mark in "-+=")
    after = next((int(line[2:]) for line in lines if line.startswith("@ ")), 0)
    names = tuple(cases.split(", ")) if cases else ()
    return Mistake(name, names, after, out, into, said.rstrip("\n"))


MISTAKES = [_mistake(block) for block in (Path(__file__).parent / "mistakes.txt").read_text("utf-8").split("### ")[1:]]


LISTED = re.compile(
    r"((?:is not a key of this table|there is no table of this name|is not a kind that is known|kind: is missing)"
    r"[^\n]*?[.?])\s+Allowed: [^\n]*"
)


@pytest.mark.parametrize("mistake", MISTAKES, ids=lambda mistake: mistake.name)
def test_a_mistake_is_answered_in_full(mistake):
    """Lists of every key, table or kind stand as "(names)" in mistakes.txt: they grow with the program."""
    assert LISTED.sub(r"\1 Allowed: (names).", complaint(mistake.text, *mistake.cases)) == mistake.said


def test_an_unknown_key_is_answered_with_every_key_of_its_row():
    said = complaint(edited("psi = 1.1", "psii = 1.1"))
    assert f"Allowed: {', '.join(keys_of(CouplingRow))}." in said
    assert 'did you mean "psi"?' in said
    said = complaint(edited("fillet", "filet"))
    assert f"Allowed: {', '.join(keys_of(PieceRow))}." in said


def test_an_unknown_table_or_kind_is_answered_with_all_there_are():
    assert f"Allowed: {', '.join(TOP_LEVEL)}." in complaint(TEXT + "[zzz]\nx = 1\n")
    said = complaint(edited('"induction-motor"', '"inductionmotor"'))
    assert f"Allowed: {' | '.join(MACHINE_ROWS)}." in said
    assert 'did you mean "induction-motor"?' in said


def test_there_are_many_mistakes_and_the_file_without_them_is_sound():
    assert len({mistake.name for mistake in MISTAKES}) == len(MISTAKES) >= 150
    assert complaint(TEXT) == ""
    assert complaint(TEXT + MORE) == ""
    assert complaint(TEXT + MORE, "new-coupling") == ""


@pytest.mark.parametrize("mistake", MISTAKES, ids=lambda mistake: mistake.name)
def test_a_message_has_no_jargon_and_its_line_holds_the_key_or_its_table(mistake):
    lines = mistake.text.split("\n")
    with pytest.raises(TrainFileError) as caught:
        screened(mistake.text, *mistake.cases)
    for problem in caught.value.problems:
        assert not JARGON.search(
            problem.message.replace("cylinder's", "").replace("converter's", "").replace("gear's", "")
        )
        if problem.line is not None and problem.path:
            line = lines[problem.line - 1]
            words = [part for part in problem.path if isinstance(part, str)]
            member = any(isinstance(part, int) for part in problem.path) and line.startswith("    ")
            assert member or any(word in line for word in words), (problem, line)


def test_every_problem_of_a_file_is_said_at_once_in_the_order_of_the_lines():
    text = edited('rated = "1487 rpm"', 'rated = "1487"')
    for old, new in (
        ('"19.6 kg m^2"', '"19,6 kg m^2"'),
        ('"wheel", "pump-hub"', '"whel", "pump-hub"'),
        ('id = "30 mm"', 'id = "300 mm"'),
        ("teeth = [29, 77]", "teeth = [29]"),
        ('kind = "induction-motor"', 'kind = "induction"'),
        ("order = 2", 'order = "2x"'),
        ('status = "draft"', 'status = "final"'),
        ('separation = "10 %"', "separation = 10"),
        ("[cases.new-coupling]", "[foo]\n[cases.new-coupling]"),
    ):
        text = edited(old, new, text)
    said = complaint(text)
    lines = [int(line) for line in re.findall(rf"^{NAME}:(\d+):", said, re.MULTILINE)]
    assert lines == sorted(lines) == [13, 22, 29, 35, 37, 40, 45, 53, 56]


def test_a_file_of_very_many_problems_says_that_some_are_left_out():
    rows = "".join(f"m{number} = {{ inertai = 1 }}\n" for number in range(300))
    said = complaint(edited("[shafts]\n", rows + "[shafts]\n"))
    assert f"there are more than {MOST_PROBLEMS} problems; the others are not listed" in said
    assert said.count("is not a key") <= MOST_PROBLEMS


@pytest.mark.parametrize(
    ("name", "said"),
    [("n" * 81, "a name of 81 characters"), ("a\\u202eb", "characters that do not print"), (" ", "an empty name")],
)
def test_a_name_must_be_readable(name, said):
    assert said in complaint(edited("motor-hub  =", f'"{name}" ='))


@pytest.mark.parametrize("name", ["motor hub", "motor.hub", "Motorkupplung ø 95", 'the "hub"', "電動機", "n" * 80])
def test_a_name_may_hold_spaces_dots_quotes_and_letters_of_any_script(name):
    quoted = '"' + name.replace('"', '\\"') + '"'
    text = TEXT.replace('"motor-hub"', quoted).replace("motor-hub  =", f"{quoted} =")
    assert screened(text).verdict == screened(TEXT).verdict
    assert name in [station.name for station in train_of(parse_document(text, NAME)).stations]


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ('"Raw-water booster, train B"', '"a\\u001b[31mb"'),
        ('"motor data sheet"', '"a\\u0007b"'),
        ('"BP-310B"', '"a\\nb"'),
    ],
)
def test_text_that_would_steer_a_terminal_or_break_a_line_is_refused(old, new):
    assert "holds a" in complaint(edited(old, new))


def test_a_toml_date_may_stand_for_a_date_in_quotes():
    written = train_of(parse_document(edited('date = "2026-11-30"\nstatus', "date = 2026-11-30\nstatus"), NAME))
    assert written.sign_off.date == "2026-11-30"


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ('"0.74 kg m^2"', '"1e-13 kg m^2"', "is smaller than any part of a train. Allowed: 0 or 1e-12 kg m^2 and more"),
        ('"610 mm"', '"0.01 mm"', '= "0.01 mm": is smaller than any part of a train. Allowed: 0.0001 m and more'),
        ('"1.5 %"', '"1,5 %"', '= "1,5 %": a comma in a number. Allowed: "15 %" (share) or "10 kN m" (torque)'),
        ('"10 %"', '{ line = "200 %" }', '[criteria] separation.line = "200 %": a separation of 200% is out of range'),
    ],
)  # fmt: skip
def test_bounds_and_numbers_are_explained(old, new, said):
    assert said in complaint(edited(old, new))


@pytest.mark.parametrize(
    ("name", "content", "said"),
    [
        ("utf16.toml", TEXT.encode("utf-16"), "the file is saved as UTF-16"),
        ("latin.toml", TEXT.replace("booster", "Förderpumpe").encode("latin-1", "replace"), "is not UTF-8"),
        ("empty.toml", b"", "the file is empty"),
        ("comment.toml", b"# nothing\n", "the file is empty"),
        ("zip.toml", b"PK\x03\x04\x00\x00", "the file is binary"),
    ],
)
def test_a_file_that_is_no_text_is_refused_by_what_it_is(tmp_path, name, content, said):
    (tmp_path / name).write_bytes(content)
    with pytest.raises(TrainFileError, match=said):
        load(tmp_path / name)


def test_a_byte_order_mark_and_windows_line_ends_change_nothing(tmp_path):
    plain, dressed = tmp_path / "plain.toml", tmp_path / "dressed.toml"
    plain.write_bytes(TEXT.encode())
    dressed.write_bytes(b"\xef\xbb\xbf" + TEXT.replace("\n", "\r\n").encode())
    assert load(plain).stations == load(dressed).stations


def test_a_missing_file_and_a_folder_are_named(tmp_path):
    with pytest.raises(TrainFileError, match=r"^nothing\.toml: there is no such file\.$"):
        load(tmp_path / "nothing.toml")
    with pytest.raises(TrainFileError, match="this is a directory, not a file"):
        load(tmp_path)
