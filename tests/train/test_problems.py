"""Problems of an input file: their sentences, their order, and the nearest known name."""

from __future__ import annotations

import pytest

from quillshaft.train.problems import Problem, TrainFileError, describe, did_you_mean, nearest, shown


def problem(path: tuple[str | int, ...], seen: str | None = None, line: int | None = 14) -> Problem:
    return Problem("bp-310b.toml", line, path, seen, "a comma in a number", None)


def test_a_problem_reads_as_one_sentence_with_file_line_table_key_value_and_what_is_allowed():
    allowed = 'a number with a unit of inertia, for example "19.6 kg m^2"'
    path = ("stations", "motor-core", "inertia")
    text = describe(Problem("bp-310b.toml", 14, path, '"19,6 kg m^2"', "a comma in a number", allowed))
    assert text == (
        'bp-310b.toml:14: [stations.motor-core] inertia = "19,6 kg m^2": a comma in a number. '
        'Allowed: a number with a unit of inertia, for example "19.6 kg m^2".'
    )


@pytest.mark.parametrize(
    ("path", "seen", "place"),
    [
        (("operation", "rated"), "5", "[operation] rated = 5"),
        (("operation", "speeds", "ring"), "5", "[operation] speeds.ring = 5"),
        (("shafts", "pinion-shaft", "pieces", 1, "od"), "5", "[shafts.pinion-shaft] pieces[2].od = 5"),
        (("shafts", "pinion-shaft"), None, "[shafts.pinion-shaft]"),
        (("shafts", "pinion-shaft"), "5", "[shafts] pinion-shaft = 5"),
        (("shafts",), None, "[shafts]"),
        (("shafts",), "5", "shafts = 5"),
        (("schema",), "2", "schema = 2"),
        (("schema",), None, "schema"),
        (("cases", "new-coupling", "couplings", "flex-block", "psi"), "5",
         "[cases.new-coupling] couplings.flex-block.psi = 5"),
        (("excitations-off", "pump-hub 2x"), "5", '[excitations-off] "pump-hub 2x" = 5'),
        (("couplings", "ring", "stiffness", "5 kN m"), None, '[couplings.ring] stiffness."5 kN m"'),
    ],
)  # fmt: skip
def test_the_place_is_the_table_in_brackets_then_the_key_path(path, seen, place):
    assert describe(problem(path, seen)) == f"bp-310b.toml:14: {place}: a comma in a number."


def test_a_problem_without_line_and_path_names_the_file_only():
    assert describe(problem((), line=None)) == "bp-310b.toml: a comma in a number."


def test_a_long_problem_takes_a_second_line_for_what_is_allowed():
    long = Problem("a.toml", 1, ("shafts", "x", "od"), None, "is " + "very " * 20 + "long", "short " * 20 + "ones")
    first, second = describe(long).split("\n")
    assert first.endswith("long.")
    assert second.startswith("    Allowed: short")


def test_the_error_lists_its_problems_by_line_with_those_of_the_whole_file_first():
    lines = (30, None, 4, 12)
    error = TrainFileError([problem(("power", "motor"), line=line) for line in lines])
    assert [p.line for p in error.problems] == list(lines)
    starts = [text.split(" ")[0] for text in str(error).split("\n")]
    assert starts == ["bp-310b.toml:", "bp-310b.toml:4:", "bp-310b.toml:12:", "bp-310b.toml:30:"]


@pytest.mark.parametrize(
    ("value", "text"),
    [
        ("3,5 m", '"3,5 m"'),
        ('say "x"\n', '"say \\"x\\"\\n"'),
        (True, "true"),
        (1.5, "1.5"),
        ({"a": 1}, "a table"),
        ([1, "a"], '[1, "a"]'),
        (list(range(9)), "[0, 1, 2, 3, 4, 5, 6, 7, …]"),
        ("\x1b[31m", '"\\u001b[31m"'),
    ],
)
def test_a_value_is_shown_as_toml_writes_it_on_one_line(value, text):
    assert shown(value) == text


def test_a_long_value_is_cut_and_a_number_too_long_to_write_is_described():
    assert len(shown("x" * 500)) == 80
    assert shown(10**5000) == "a number of very many digits"


def test_the_nearest_name_is_found_despite_slips_and_letter_case():
    known = ("inertia", "tolerance", "MPa")
    assert nearest("intertia", known) == "inertia"
    assert nearest("Tolerance", known) == "tolerance"
    assert nearest("mpa", known) == "MPa"
    assert nearest("voltage", known) is None
    assert nearest("inertia" * 1000, known) is None


def test_a_suggestion_ends_a_message_or_is_nothing():
    assert did_you_mean("intertia", ["inertia"]) == '; did you mean "inertia"?'
    assert did_you_mean("voltage", ["inertia"]) == ""
