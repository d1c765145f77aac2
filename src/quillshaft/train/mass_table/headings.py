"""Headings of a mass-elastic table: what a column holds and in what unit, in the usual spellings."""

from __future__ import annotations

import re
import unicodedata
from typing import Literal, cast

from quillshaft.records import dataclass
from quillshaft.train.quantity import QuantityError, read_quantity

Role = Literal[
    "number",
    "station",
    "inertia",
    "wr2",
    "gd2",
    "stiffness",
    "flexibility",
    "speed",
    "ratio",
    "teeth",
    "link",
    "remark",
]
_WORDS = """
number      | no; nr; #; number; station no; mass no; pos; position; index; item no
station     | station; name; mass; disc; disk; node; item; component; description; station name; mass name; part; rotor
station     | designation; lumped mass; inertia name
inertia     | j; i; ip; jp; theta; inertia; polar inertia; moment of inertia; mass moment of inertia; mass inertia
inertia     | polar moment of inertia; polar mass moment of inertia; rotational inertia
wr2         | wr2; wk2; mk2; mr2
gd2         | gd2; pd2
stiffness   | k; kt; c; ct; stiffness; torsional stiffness; stiffness to next; torsional stiffness to next; spring rate
stiffness   | torsional spring rate; spring constant; spring stiffness; torsional rigidity; rigidity; k to next
stiffness   | stiffness to next station; dynamic stiffness
flexibility | flexibility; compliance; torsional flexibility; flexibility to next; 1/k; e
speed       | speed; n; rpm; rotational speed; shaft speed; rated speed; r/min; rev/min
ratio       | ratio; speed ratio; relative speed; n/n1; gear ratio
teeth       | teeth; z; number of teeth; no of teeth; tooth number
remark      | remark; remarks; type; kind; comment; note; notes
link        | link; shaft; connection; to next; element; spring; shaft name; link name
"""
_TABLE = [[cell.strip() for cell in line.split("|")] for line in _WORDS.strip().splitlines()]
ROLE_OF_WORDS: dict[str, Role] = {word.strip(): cast(Role, role) for role, words in _TABLE for word in words.split(";")}
"""What a column holds, by its heading in small letters without the unit."""

OFTEN_ELSE = frozenset(("c", "ct", "e", "i", "n", "theta"))
"""Letters that stand for other quantities too (damping, modulus, current): without a fitting unit they are not read."""

MEASURE = {
    "inertia": "inertia",
    "wr2": "wr2",
    "gd2": "gd2",
    "stiffness": "stiffness",
    "flexibility": "flexibility",
    "speed": "speed",
}
"""The kind of quantity in a column, for the columns that have a unit."""
_SMALL = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
_POWER = re.compile(
    r"\(?\s*(?:[x×*·]\s*)?(?:10\s*(?:\^|\*\*)?\s*\(?([+-]?[0-9]{1,2})\)?|1?[eE]([+-]?[0-9]{1,2}))\s*\)?\s*[x×*·]?\s*(?=\D)"
)
_COUNTED = re.compile(r"(?:1\s*/\s*min|min\s*\^?\s*-1|/\s*min)", re.IGNORECASE)


@dataclass(frozen=True)
class Column:
    """One column that is used.

    role       what it holds; `index` its place in the row; `heading` as the file has it
    unit       of its numbers, as the train file takes it; None where cells carry their own, or it has none
    exponent   power of ten that multiplies every number of the column
    """

    role: Role
    index: int
    heading: str
    unit: str | None = None
    exponent: int = 0


def _plain(text: str) -> str:
    """A heading in small letters, its squares as ^2 joined, without marks that mean nothing."""
    folded = unicodedata.normalize("NFKC", text.translate(_SMALL)).lower().replace("_", " ").replace("²", "2")
    folded = re.sub(r"\bno\.|\bnr\.", lambda found: found[0][:-1], folded)
    folded = re.sub(r"\s*\^\s*2", "2", folded)
    return " ".join(folded.strip(" .:*").replace("-", " ").split())


def split_heading(heading: str) -> tuple[str, str | None]:
    """(words, unit text) of a heading: the unit stands in brackets, or after a comma or "in"."""
    text = " ".join(heading.split())
    found = re.search(r"\[([^\]]*)\]\s*$", text) or re.search(r"\((.*)\)\s*$", text)
    if found:
        return text[: found.start()].strip(), found[1].strip() or None
    words, mark, unit = text.partition(",")
    if mark and unit.strip():
        return words.strip(), unit.strip()
    return text, None


def role_of(words: str) -> Role | None:
    """What a column of this heading (without its unit) holds; None where it is not known."""
    plain = _plain(words)
    core = re.sub(
        r"\bref(?:erred)?\b\.?(?: to .*)?|\b(?:dry|total|lumped|rated|dynamic|nominal|station|shaft|actual)\b",
        "",
        plain,
    )
    return ROLE_OF_WORDS.get(plain) or ROLE_OF_WORDS.get(" ".join(core.split()))


def split_power(unit: str) -> tuple[int, str]:
    """(exponent, unit) of a unit such as "10^6 lbf-in/rad", "x 1e6 Nm/rad" or "10⁶ N·m/rad"."""
    text = unit.translate(_SMALL)
    found = _POWER.match(text)
    if not found:
        return 0, unit
    return int(found[1] or found[2]), text[found.end() :].strip()


def column_of(heading: str, index: int, below: str = "") -> Column | None:
    """The column under a heading; `below` is the cell of a row of units, where the table has one.

    None where the heading is not known. Raises QuantityError when its unit is not one of what it names.
    """
    words, unit = split_heading(heading)
    role = role_of(words) or role_of(heading)
    if role is None:
        return None
    if role not in MEASURE:
        of_something_else = unit is not None and role in ("station", "link", "remark")
        return None if of_something_else else Column(role, index, heading)
    unit = unit or (split_heading(f"x {below}")[1] or below or None)
    if unit is None and role == "speed":
        counts = re.search(r"rpm|r/min|rev/min", heading.lower())
        return Column(role, index, heading, "rpm" if counts else None)
    if unit is None:
        return Column(role, index, heading)
    exponent, unit = split_power(unit)
    if role == "speed" and _COUNTED.fullmatch(unit):
        unit = "rpm"
    try:
        read_quantity(f"1 {unit}", MEASURE[role], "SI")
    except QuantityError:
        if _plain(words) in OFTEN_ELSE:
            return None
        raise
    return Column(role, index, heading, unit, exponent)


def misplaced_power(heading: str) -> str | None:
    """The power of ten that stands outside the brackets of a heading, where its sense is open; None for none."""
    found = re.search(
        r"[x×*·/]?\s*10\s*(?:\^|\*\*)\s*-?[0-9]+|[x×/]\s*1?[eE][0-9]+|10[⁻⁰-⁹]+", split_heading(heading)[0]
    )
    return found[0].strip() if found else None


def is_unit(text: str, role: Role) -> bool:
    """Whether a cell is the unit of a column: the row of units under the headings."""
    text = split_heading(f"x {text}")[1] or text
    _, unit = split_power(text)
    try:
        read_quantity(f"1 {unit}", MEASURE[role], "SI")
    except (QuantityError, KeyError):
        return False
    return bool(unit) and not unit[0].isdigit()
