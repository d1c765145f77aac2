"""What is wrong with a text that is not TOML, in the words of someone who edits a train file."""

from __future__ import annotations

import re

from quillshaft.records import dataclass
from quillshaft.train.problems import Problem

TOKEN = re.compile(
    r"""
      \#[^\n]*                                          # a comment
    | \"{3} (?:\\.|[^\\])*? (?P<basic>\"{3,5}|\Z)       # a text over several lines, perhaps not closed
    | '{3} .*? (?P<literal>'{3,5}|\Z)
    | \" (?:\\.|[^\"\\\n])* \"?                         # a text on one line
    | ' [^'\n]* '?
    | [\[\]{}\n]
    """,
    re.VERBOSE | re.DOTALL,
)
"""What opens and closes brackets and texts: a text that does is not read for brackets."""


def left_open(text: str) -> list[tuple[str, int]]:
    """Brackets and long texts that are open at the end of the text, outermost first, with their offsets."""
    stack: list[tuple[str, int]] = []
    for match in TOKEN.finditer(text):
        token = match[0]
        if token in ("[", "{"):
            stack.append((token, match.start()))
        elif token in ("]", "}"):
            del stack[-1:]
        elif "" in (match["basic"], match["literal"]):
            stack.append((token[:3], match.start()))
    return stack


@dataclass(frozen=True)
class _Slip:
    """A usual slip: patterns on tomllib's message, the bracket around, the line before and after it."""

    error: str
    inside: str
    before: str
    after: str
    message: str
    allowed: str


_ONE_LINE = "an inline table on one line; a longer element takes its own header, such as [shafts.pinion-shaft]"
_QUOTES = 'text, and a number with its unit, in quotes, such as "19.6 kg m^2"'
_ENTRY = "key = value"
_END = r"\s*(?:#.*)?$"
_SLIPS = (
    _Slip("Cannot declare", "", "", "",
          "a second header of this name", "one header a table, with the lines of both under it"),
    _Slip("Cannot|Duplicate", "", "", "",
          "a key given twice, or once as a value and once as a table", "each key once"),
    _Slip("Unescaped", "", "", "",
          "a backslash in a text", "/ in file names, or the text in single quotes"),
    _Slip(r"Illegal character '\\n'", "", "", "",
          "a text without its closing quote", _QUOTES),
    _Slip('Unterminated|Expected ["\']{3}', "", "", "",
          "a long text that is never closed", "three quotes at both ends"),
    _Slip(r"Expected '\]", "", "", "",
          "a header without its closing bracket", "[table] or [table.name]"),
    _Slip("initial character", "{", r",\s*$", r"\}",
          "a comma after the last entry of an inline table", "commas between entries only"),
    _Slip("", "{", "", _END,
          "an inline table over two lines", _ONE_LINE),
    _Slip("Expected '='", "", "", ":",
          "a colon after a key", _ENTRY),
    _Slip("Expected '='", "", "", '[\\w\\"\']',
          "a name with a space in it, or no = after the key", 'a name with spaces in quotes: "pump 2x" = …'),
    _Slip("Expected '='", "", "", "",
          "a key without = and a value", _ENTRY),
    _Slip("at end of document", r"\[", "", "",
          "a bracket [ that is never closed", "] after the last member"),
    _Slip("Invalid value", r"\[", "", r"[\w-]+\s*=",
          "a bracket [ that is not closed before the next key", "] after the last member"),
    _Slip("Invalid value", "", "", _END,
          "a key without a value", _ENTRY),
    _Slip("Invalid value", "", "", "[“”„‘’]",
          "typographic quotes", 'straight quotes: "…"'),
    _Slip("Invalid value", "", "", r"[+-]?\.\d",
          "a number without a digit before its point", "0.5, not .5"),
    _Slip("Invalid value", "", "", r"(?i:true|false)\b",
          "true or false not in small letters", "true or false"),
    _Slip("Expected newline", "", r"\d$", r",\d",
          "a comma in a number", "a point as the decimal sign, and no grouping"),
    _Slip("Expected newline|Unclosed", "", r"\b0$", r"\d",
          "a number that begins with 0", "the number without leading zeros"),
    _Slip("Expected newline|Unclosed", "", r"\d$", r"\.(?!\d)",
          "a number that ends in its point", "5.0 or 5, not 5."),
    _Slip("Unclosed", "", "", r"\s*[\w-]+\s*=",
          "two entries without a comma between them", "commas between entries"),
    _Slip("Expected newline", "", "", r"\s*[\w-]+\s*=",
          "two entries on one line", "each entry on its own line"),
    _Slip("Expected newline|Unclosed", "", '[\\"\']\\s*$', "",
          "something after the closing quote", _QUOTES),
    _Slip("Invalid value|Expected newline|Unclosed", "", "", r"\s*\S",
          "text without quotes", _QUOTES),
)  # fmt: skip


def syntax_problem(name: str, text: str, error: str) -> Problem:
    """The problem behind a message of tomllib, with the advice of the first slip that fits."""
    text = text.replace("\r\n", "\n")
    line, column = _position(text, error)
    lines = text.split("\n")
    source = lines[line - 1]
    before, after = source[: column - 1], source[column - 1 :]
    opened = left_open("\n".join([*lines[: line - 1], before]))
    inside = opened[-1][0] if opened else ""
    if "at end of document" in error:
        inside, after = after[:1], after[1:]
    slip = next((slip for slip in _SLIPS if _fits(slip, error, inside, before, after)), None)
    seen = "`" + "".join(c if c.isprintable() else " " for c in source.strip()[:80]) + "`"
    if slip is None:
        plain = re.sub(r"\s*\(at .*\)$", "", error)
        return Problem(name, line, (), seen, f"not valid TOML: {plain}", None)
    return Problem(name, line, (), seen, slip.message, slip.allowed)


def _fits(slip: _Slip, error: str, inside: str, before: str, after: str) -> bool:
    anywhere = re.search(slip.error, error) and re.search(slip.before, before)
    return bool(anywhere and re.match(slip.inside, inside) and re.match(slip.after, after))


def _position(text: str, error: str) -> tuple[int, int]:
    """Line and column, from 1, that tomllib names; at the end of the file, those of what was left open."""
    match = re.search(r"\(at line (\d+), column (\d+)\)", error)
    if match:
        return int(match[1]), int(match[2])
    opened = left_open(text)
    start = opened[-1][1] if opened else len(text.rstrip())
    return text.count("\n", 0, start) + 1, start - text.rfind("\n", 0, start)
