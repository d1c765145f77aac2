"""Problems of a train file: where, what was seen, what is allowed, and the sentence that says so."""

from __future__ import annotations

import re
from collections.abc import Iterable

from quillshaft.records import dataclass

NAMED_TABLES = frozenset(
    {
        "stations", "shafts", "couplings", "gears", "belts", "joints", "ties", "dampers", "machines",
        "excitations", "dismissals", "materials", "amplitudes", "events", "cases",
    }
)  # fmt: skip
"""Tables whose keys are names the user chose; every other table holds fixed keys."""

TOP_KEYS = frozenset({"schema"})
"""Keys that stand at the top of the file, under no table."""

_LONGEST_LINE = 200
_LONGEST_SEEN = 80
_LONGEST_NAME = 100
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")


@dataclass(frozen=True)
class Problem:
    """One problem of an input file.

    `file` is the base name, `line` counts from 1 (None: not known), `path` is the way through the tables
    with list positions counted from 0, `seen` is the value as TOML writes it (see `shown`; None: nothing to
    show), `message` says what is wrong and `allowed` what may stand there instead.
    """

    file: str
    line: int | None
    path: tuple[str | int, ...]
    seen: str | None
    message: str
    allowed: str | None


class TrainFileError(Exception):
    """Everything found wrong in an input, as one exception."""

    def __init__(self, problems: Iterable[Problem]) -> None:
        self.problems: tuple[Problem, ...] = tuple(problems)
        super().__init__(self.problems)

    def __str__(self) -> str:
        """One description a problem, in the order of their lines; those without a line come first."""
        return "\n".join(describe(problem) for problem in sorted(self.problems, key=_line_key))


def describe(problem: Problem) -> str:
    """The problem as one readable line, or two where one would grow too long.

    List positions, counted from 0 in the path, are shown counted from 1: `pieces[2].od` is the second piece.
    """
    where = problem.file if problem.line is None else f"{problem.file}:{problem.line}"
    place = _place(problem)
    head = f"{where}: {place}: " if place else f"{where}: "
    first = head + _sentence(problem.message)
    if not problem.allowed:
        return first
    second = "Allowed: " + _sentence(problem.allowed)
    joint = " " if len(first) + len(second) < _LONGEST_LINE else "\n    "
    return first + joint + second


def shown(value: object) -> str:
    """A value as TOML writes it, on one line and cut where it is long: the `seen` of a Problem."""
    if isinstance(value, bool):
        text = "true" if value else "false"
    elif isinstance(value, str):
        text = _quoted(value)
    elif isinstance(value, dict):
        text = "a table"
    elif isinstance(value, list | tuple):
        text = "[" + ", ".join(shown(item) for item in value[:8]) + (", …]" if len(value) > 8 else "]")
    else:
        text = _plain(value)
    return text if len(text) <= _LONGEST_SEEN else text[: _LONGEST_SEEN - 1] + "…"


def nearest(name: str, known: Iterable[str]) -> str | None:
    """The known name closest to `name`, letter case aside; None where nothing comes close."""
    if len(name) > _LONGEST_NAME:
        return None
    from difflib import get_close_matches

    by_lower: dict[str, str] = {}
    for candidate in known:
        by_lower.setdefault(candidate.lower(), candidate)
    matches = get_close_matches(name.lower(), by_lower, n=1, cutoff=0.6)
    return by_lower[matches[0]] if matches else None


def did_you_mean(name: str, known: Iterable[str]) -> str:
    """`; did you mean "…"?`, to be put at the end of a message, or nothing."""
    match = nearest(name, known)
    return "" if match is None else f'; did you mean "{match}"?'


def _line_key(problem: Problem) -> int:
    return problem.line or 0


def _sentence(text: str) -> str:
    return text if text.endswith((".", "?", "!")) else text + "."


def _place(problem: Problem) -> str:
    """The table in brackets, then the key path, then the value seen."""
    path, seen = problem.path, problem.seen
    if not path:
        return seen or ""
    depth = 2 if path[0] in NAMED_TABLES else 1
    if path[0] in TOP_KEYS or (len(path) == 1 and seen is not None):
        depth = 0
    elif len(path) == depth == 2 and seen is not None:
        depth = 1
    table = f"[{_dotted(path[:depth])}]" if depth else ""
    place = " ".join(part for part in (table, _dotted(path[depth:])) if part)
    return place if seen is None else f"{place} = {seen}"


def _dotted(path: tuple[str | int, ...]) -> str:
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part + 1}]"
        else:
            text += ("." if text else "") + (part if _BARE_KEY.fullmatch(part) else _quoted(part))
    return text


def _quoted(text: str) -> str:
    """The text in double quotes, with what does not print escaped."""
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return '"' + "".join(c if c.isprintable() else _escape(c) for c in escaped) + '"'


def _escape(character: str) -> str:
    plain = {"\n": "\\n", "\t": "\\t", "\r": "\\r"}.get(character)
    return plain or f"\\u{ord(character):04x}"


def _plain(value: object) -> str:
    try:
        return str(value)
    except ValueError:  # an integer of more digits than Python writes
        return "a number of very many digits"
