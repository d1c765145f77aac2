"""Reading the train file: what is refused and in which words, and the line of every path."""

from __future__ import annotations

import hashlib
import time
import tomllib

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from quillshaft.train.document import Document, line_of, parse_document, read_document
from quillshaft.train.problems import TrainFileError


def refusal(text: str):
    with pytest.raises(TrainFileError) as caught:
        parse_document(text, "t.toml")
    (problem,) = caught.value.problems
    return problem


SLIPS = [
    ("[shafts]\na = 1\n[power]\n[shafts]\n", 4, "a second header"),
    ("[a]\nb = { x = 1 }\n[a.b]\ny = 1\n", 3, "a second header"),
    ("[[a]]\n[a]\n", 2, "a second header"),
    ("a = 1\na = 2\n", 2, "a key given twice"),
    ("a = { x = 1, x = 2 }\n", 1, "a key given twice"),
    ("a.b = 1\na = 2\n", 2, "a key given twice"),
    ("\na = { x = 1,\n  y = 2 }\n", 2, "an inline table over two lines"),
    ("\r\na = { x = 1\r\n}\r\n", 2, "an inline table over two lines"),
    ("a = {\n", 1, "an inline table over two lines"),
    ("a = { x = 1, # more below\n y = 2 }", 1, "an inline table over two lines"),
    ("a = [\n { x = 1,\n y = 2 }]", 2, "an inline table over two lines"),
    ("a = { x = 1, }\n", 1, "a comma after the last entry"),
    ("a = 19.6 kg m^2\n", 1, "text without quotes"),
    ("a = { x = 19.6 kg m^2 }\n", 1, "text without quotes"),
    ("a = [1 kg, 2]\n", 1, "text without quotes"),
    ("a = Raw water\n", 1, "text without quotes"),
    ("a = “Raw”\n", 1, "typographic quotes"),
    ('a = "abc\nb = 1\n', 1, "without its closing quote"),
    ("a = 'it's'\n", 1, "after the closing quote"),
    ('b = 1\na = """abc\n\n', 2, "a long text that is never closed"),
    ('a = "C:\\dir"\n', 1, "a backslash"),
    ("a = 3,5\n", 1, "a comma in a number"),
    ("a = .5\n", 1, "without a digit before its point"),
    ("a = 5.\n", 1, "ends in its point"),
    ("a = 05\n", 1, "begins with 0"),
    ("a = True\n", 1, "small letters"),
    ("a : 5\n", 1, "a colon after a key"),
    ("motor core = 5\n", 1, "a name with a space"),
    ("motor\n", 1, "a key without ="),
    ("a =\n", 1, "a key without a value"),
    ("a = 1 b = 2\n", 1, "two entries on one line"),
    ("a = { x = 1 y = 2 }\n", 1, "two entries without a comma"),
    ("[a\nb = 1\n", 1, "a header without its closing bracket"),
    ("b = 1\na = [1,\n2\n", 2, "a bracket [ that is never closed"),
    ("a = [1,\nb = 2\n", 2, "a bracket [ that is not closed"),
    ("[[a]\nb = 1\n", 1, "a header without its closing bracket"),
    ("= 1\n", 1, "not valid TOML"),
    ("b = 1\na = " + "9" * 5000, 2, "too many digits"),
    ("a = " + "[" * 20000, None, "nested too deeply"),
    ("b = 1\na = 1\0", 2, "a NUL character"),
    ("  \n# only a comment\n", None, "the file is empty"),
    ("", None, "the file is empty"),
]


@pytest.mark.parametrize(("text", "line", "words"), SLIPS)
def test_each_usual_slip_is_named_in_plain_words_with_its_line(text, line, words):
    problem = refusal(text)
    assert words in problem.message
    assert (problem.file, problem.line) == ("t.toml", line)


def test_the_line_seen_is_shown_without_control_characters():
    assert refusal("a = 1 \x1b kg\n").seen == "`a = 1   kg`"


@given(st.text(alphabet="ab=[]{}\"'\\#,.0-:\n\r \t\0é", max_size=40))
@settings(max_examples=250, deadline=None)
def test_broken_text_gives_a_document_or_one_located_problem_and_line_of_never_raises(text):
    try:
        document = parse_document(text, "t.toml")
        found = ()
    except TrainFileError as error:
        document, found = Document("t.toml", text, {}, ""), error.problems
    assert [problem.file for problem in found] == ["t.toml"] * (not document.data)
    assert line_of(document, ("a", 0, "b")) in {None, *range(1, text.count("\n") + 2)}


def read_refusal(path) -> str:
    with pytest.raises(TrainFileError) as caught:
        read_document(path)
    return str(caught.value)


def test_files_that_cannot_be_opened_are_refused_by_their_base_name(tmp_path, monkeypatch):
    assert read_refusal(tmp_path / "no.toml") == "no.toml: there is no such file."
    assert "is a directory" in read_refusal(tmp_path)
    assert "not a name" in read_refusal("a\0b.toml")

    def denied(_path):
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr("pathlib.Path.read_bytes", denied)
    assert read_refusal(tmp_path / "no.toml") == "no.toml: no permission to read the file."


@pytest.mark.parametrize(
    ("raw", "start"),
    [
        (b"a = 1\nb = 'caf\xe9'\n", "t.toml:2: byte 0xe9 is not UTF-8"),
        (b"a = 1\n\x00\x01", "t.toml:2: a NUL byte: the file is binary"),
        ("a = 1".encode("utf-16"), "t.toml: the file is saved as UTF-16"),
        (b"", "t.toml: the file is empty"),
    ],
)
def test_files_that_are_not_utf8_text_say_so(tmp_path, raw, start):
    path = tmp_path / "t.toml"
    path.write_bytes(raw)
    assert read_refusal(path).startswith(start)


def test_a_byte_order_mark_changes_nothing_and_the_digest_is_that_of_the_text(tmp_path):
    raw = "title = 'Überholt'\r\nday = 2026-11-30\n".encode()
    (tmp_path / "plain.toml").write_bytes(raw)
    (tmp_path / "marked.toml").write_bytes(b"\xef\xbb\xbf" + raw)
    plain, marked = read_document(tmp_path / "plain.toml"), read_document(str(tmp_path / "marked.toml"))
    assert plain.sha256 == marked.sha256 == hashlib.sha256(raw).hexdigest()
    assert plain.data == marked.data == tomllib.loads(raw.decode())
    assert parse_document(plain.text, "plain.toml") == plain
    assert marked.name == "marked.toml"


SAMPLE = '''\
schema = 1
# a comment with [ and "
[train]
title = """
two [ lines
"""
note = \'\'\'a """ inside
\'\'\'

[shafts]
first = { between = ["a", "b"], stiffness = "1" }
[shafts.second] # [x]
pieces = [
    { od = "95 mm", length = ["1", [
        2,
      ]] },
    # a comment

    { od = 1 },
]
deep.er = { a = [
  1,
], b = 2 }
[[steps]]
at = 1
[[steps.parts]]
x = 1
[[steps.parts]]
x = 2
[[steps]]
[steps.more]
y = "\\"] # no"
'''


def paths_of(value, start=()):
    members = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    for key, member in members:
        yield (*start, key)
        yield from paths_of(member, (*start, key))


@pytest.mark.parametrize("ending", ["\n", "\r\n"])
def test_the_line_of_every_path_of_a_file_with_all_kinds_of_statement(ending):
    document = parse_document(SAMPLE.replace("\n", ending), "t.toml")
    expected = {
        ("schema",): 1, ("train",): 3, ("train", "title"): 4, ("train", "note"): 7,
        ("shafts",): 10, ("shafts", "first"): 11, ("shafts", "first", "between", 1): 11,
        ("shafts", "first", "stiffness"): 11, ("shafts", "second"): 12,
        ("shafts", "second", "pieces"): 13, ("shafts", "second", "pieces", 0, "od"): 14,
        ("shafts", "second", "pieces", 0, "length", 1): 14,
        ("shafts", "second", "pieces", 0, "length", 1, 0): 15,
        ("shafts", "second", "pieces", 1): 19, ("shafts", "second", "pieces", 1, "od"): 19,
        ("shafts", "second", "deep"): 21, ("shafts", "second", "deep", "er", "a"): 21,
        ("shafts", "second", "deep", "er", "a", 0): 22, ("shafts", "second", "deep", "er", "b"): 23,
        ("steps",): 24, ("steps", 0, "at"): 25, ("steps", 0, "parts", 0, "x"): 27,
        ("steps", 0, "parts", 1): 28, ("steps", 0, "parts", 1, "x"): 29, ("steps", 1): 30,
        ("steps", 1, "more"): 31, ("steps", 1, "more", "y"): 32,
    }  # fmt: skip
    assert {path: line_of(document, path) for path in expected} == expected
    assert set(expected) <= set(paths_of(document.data))


def test_a_missing_key_gives_the_line_of_the_longest_part_that_stands():
    document = parse_document(SAMPLE, "t.toml")
    assert line_of(document, ("shafts", "second", "missing")) == 12
    assert line_of(document, ("shafts", "second", "pieces", 7, "od")) == 13
    assert line_of(document, ("train", "title", "x")) == 4
    assert line_of(document, ("nowhere",)) is None
    assert line_of(document, ()) is None


VALUES = st.sampled_from(['"a # [ b"', "1", "true", "'x'", "2026-11-30", '"\\""', "[]", "{}", "[[1], [2, 3]]"])
NAMES = st.sampled_from(["a", "b-1", '"c d"', '"e.[f"', "g"])


class Builder:
    """A document written line by line, with the line of every path noted as it is written."""

    def __init__(self, draw):
        self.draw, self.lines, self.truth = draw, [], {}

    def note(self, *path):
        self.truth.setdefault(path, len(self.lines) + 1)

    def value(self, path, text):
        for inner in paths_of(tomllib.loads(f"v = {text}")["v"], path):
            self.note(*inner)

    def key(self, table, name):
        path = (*table, tomllib.loads(f"{name} = 1").popitem()[0])
        self.note(*path)
        kind = self.draw(st.sampled_from(["plain", "inline", "array", "long", "comment"]))
        if kind == "array":
            self.array(path, name)
            return
        if kind == "long":
            self.lines += [
                f'{name} = """ [',
                "a = {",
                self.draw(st.sampled_from(['"""', '\\""" """', '""""'])),
            ]
            return
        text = self.draw(VALUES)
        if kind == "inline":
            text = f"{{ x = {text}, y = {{ z = 1 }} }}"
        self.value(path, text)
        self.lines.append(f"{name} = {text}" + (' # [ { "' if kind == "comment" else ""))

    def array(self, path, name):
        self.lines.append(f"{name} = [")
        for index in range(self.draw(st.integers(0, 4))):
            if self.draw(st.booleans()):
                self.lines.append(self.draw(st.sampled_from(["", "  # ] comment", "\t"])))
            text = self.draw(st.one_of(VALUES, st.just('{ od = "1 mm", at = [1, 2] }')))
            self.note(*path, index)
            self.value((*path, index), text)
            self.lines.append(f"  {text},")
        self.lines.append("]")


@st.composite
def documents(draw):
    builder = Builder(draw)
    for table in draw(st.lists(NAMES, min_size=1, max_size=4, unique=True)):
        parsed = tomllib.loads(f"{table} = 1").popitem()[0]
        copies = draw(st.integers(0, 2))
        for copy in range(max(copies, 1)):
            builder.note(parsed)
            path = (parsed, copy) if copies else (parsed,)
            builder.note(*path)
            builder.lines.append(f"[[{table}]]" if copies else f" [{table}] # table")
            for name in draw(st.lists(NAMES, max_size=4, unique=True)):
                builder.key(path, name)
            if draw(st.booleans()):
                builder.note(*path, "sub")
                builder.lines.append(f"[{table}.sub]")
                builder.key((*path, "sub"), draw(NAMES))
    return "\n".join(builder.lines), builder.truth


@given(documents())
@settings(max_examples=200, deadline=None)
def test_the_line_of_every_path_of_a_document_built_line_by_line(built):
    text, truth = built
    document = parse_document(text, "t.toml")
    assert set(truth) == set(paths_of(document.data))
    assert {path: line_of(document, path) for path in truth} == truth


def test_many_errors_in_a_long_file_cost_little():
    rows = [f'st-{i} = {{ inertia = "1 kg m^2" }}' for i in range(2000)]
    pieces = [f'  {{ od = "{i} mm" }},' for i in range(300)]
    document = parse_document("\n".join(["[stations]", *rows, "[shafts]", "x = [", *pieces, "]"]), "t.toml")
    began = time.process_time()
    lines = [line_of(document, ("stations", f"st-{i}", "inertia")) for i in range(2000)]
    lines += [line_of(document, ("shafts", "x", i, "od")) for i in range(300)]
    assert lines == [*range(2, 2002), *range(2004, 2304)]
    assert time.process_time() - began < 5.0  # about 0.5 s where this was written
