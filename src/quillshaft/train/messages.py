"""What a refused row says to the person who wrote it: the key, the value seen, and what would be right."""

from __future__ import annotations

from types import UnionType
from typing import Annotated, Any, Literal, Union, get_args, get_origin

from pydantic import BaseModel

from quillshaft.records import dataclass
from quillshaft.train.duty_rows import WeakestRow
from quillshaft.train.fields import AnyMeasure, Measured, MeasuredPair
from quillshaft.train.gear_rows import EpicyclicRow
from quillshaft.train.problems import did_you_mean
from quillshaft.train.quantity import measure_help

EXAMPLES = {
    "at": "a name from [stations], in quotes",
    "between": 'two names from [stations], such as ["motor-core", "motor-hub"]',
    "gas": '{ indicator = "card.csv" }, or harmonics = "orders.csv", or cycle = { … }',
    "cases": 'a list of names of cases, such as ["hot", "cold"]',
    "cylinders": 'a list of cylinders, such as [{ at = "throw-1", fires-at = "0 deg" }]',
    "contact-ratio": "a number from 1 to 3 without quotes or unit, such as 1.6",
    "diameters": 'the two pitch diameters, such as ["250 mm", "630 mm"]',
    "equivalent": '{ length = "610 mm", diameter = "105 mm" }',
    "keyway": '{ width = "28 mm", depth = "10 mm" }, with length where it is shorter than its piece',
    "section": '{ rectangle = ["80 mm", "50 mm"] } or { square = "60 mm" }',
    "spline": '{ major = "80 mm", minor = "70 mm" }',
    "throw": "{ journal, journal-length, pin, pin-length, web-thickness, web-width, radius }, each with its unit",
    "magnifier": "a number from 2 to 1000 without quotes, such as 40",
    "stress-factor": "a number from 1 without quotes or unit, such as 1.6",
    "safety": "a number from 1 to 10 without quotes or unit, such as 1.5",
    "inertia-torque": "a number above 0 without quotes or unit, such as 2",
    "strength": '{ rule = "endurance", safety = 1.5 }',
    "duty": '{ gear-share = "33 %", gear-reversal = "refused" }',
    "weakest": '{ od = "95 mm", fillet = "4 mm", shoulder = "120 mm" }',
    "running-gear": '{ reciprocating-mass = "9.4 kg", rotating-mass = "6 kg", radius = "95 mm", rod = "350 mm" }',
    "repeat": "a whole number without quotes, such as 6",
    "cuts": "a whole number from 2 to 512 without quotes, such as 16",
    "interharmonics": "a list of pairs of multiples, such as [{ line = 6, out = 6 }]",
    "loss-factor": "a number above 0 without quotes or unit, such as 0.17 (loss-factor = psi / 2π)",
    "compression-ratio": "a number without unit, such as 15.5 (swept and clearance volume over clearance volume)",
    "dead-cylinders": "a list of cylinders by number in file order, such as [3]",
    "history": 'a list, such as [{ revision = "0", date = "2026-11-30", what = "first issue" }]',
    "mode": "the number of the mode, as `screen` lists it",
    "passes": "a list of whole numbers, such as [3, 6]",
    "pieces": 'a list of pieces, such as [{ od = "95 mm", length = "180 mm" }]',
    "planets": "a whole number without quotes, such as 3",
    "poles": "an even whole number without quotes, such as 4",
    "profile-shift": "two numbers from -1 to 2 without quotes, such as [0.2, 0.1]",
    "psi": "a number above 0 and up to 50 without quotes or unit, such as 1.1",
    "spans": "1 or 2, without quotes: how many spans of the belt stay taut",
    "speed-at": "a name from [stations], in quotes",
    "speeds": 'a table of speeds by station, such as { ring = "0 rpm" }',
    "teeth": "one whole number for each station of between, such as [29, 77]",
    "zeta": 'the low and the high value, such as ["1 %", "2 %"]',
}
"""What may stand at a key where its type alone says too little."""

EPICYCLIC = {
    "teeth": "{ sun = 21, ring = 87 }",
    "sun": 'a name from [stations], or "fixed", in quotes',
    "ring": 'a name from [stations], or "fixed", in quotes',
    "carrier": 'a name from [stations], or "fixed", in quotes',
}
"""The same for a row of [gears] with kind = "epicyclic"."""

OF_ROW: dict[Any, dict[str, str]] = {
    EpicyclicRow: EPICYCLIC,
    WeakestRow: dict.fromkeys(("keyway", "spline"), "true or false, without quotes"),
}

PROVENANCE = ("source", "document", "date", "status", "note")


@dataclass(frozen=True)
class Refusal:
    """One refused value: its place below the row, the value (None: not to be shown), and the two sentences."""

    loc: tuple[str | int, ...]
    seen: Any
    message: str
    allowed: str | None


def refusal(error: Any, row: type[BaseModel], system: str) -> Refusal:
    """The refusal behind one error of a row's validation; `system`, "SI" or "US", is for the examples."""
    loc = tuple(part for part in error["loc"] if isinstance(part, (str, int)))
    kind, context, value = error["type"], error.get("ctx", {}), error["input"]
    if kind == "train_file":
        key = context["key"]
        if key is None:
            return Refusal(loc, value if loc else None, context["message"], context["allowed"])
        seen = value.get(key) if isinstance(value, dict) else None
        return Refusal((*loc, key), seen, context["message"], context["allowed"])
    if kind == "extra_forbidden":
        return Refusal(loc, None, *_unknown_key(str(loc[-1]), _row_at(row, loc[:-1])))
    allowed = _allowed(row, loc, system)
    if kind == "missing":
        return Refusal(loc, None, "is missing", allowed)
    if kind == "literal_error":
        message, allowed = _not_one_of(value, _options(row, loc))
    else:
        message = _sentence(kind, context, value, error["msg"])
    return Refusal(loc, value if loc else None, message, allowed)


def keys_of(row: type[BaseModel]) -> list[str]:
    """Keys of a row as the file spells them, its own first and where the numbers come from last."""
    keys = [item.alias or name for name, item in row.model_fields.items()]
    return [key for key in keys if key not in PROVENANCE] + [key for key in keys if key in PROVENANCE]


def _unknown_key(key: str, row: type[BaseModel] | None) -> tuple[str, str | None]:
    if key == "omit":
        return "leaves an element out, and only a case can do that", "omit = true under [cases.NAME]"
    if row is None:
        return "is not a key of this table", None
    known = keys_of(row)
    return f"is not a key of this table{did_you_mean(key, known)}", ", ".join(known)


def _not_one_of(value: Any, options: list[Any]) -> tuple[str, str]:
    allowed = " | ".join(str(option) for option in options)
    words = [option for option in options if isinstance(option, str)]
    if isinstance(value, str) and value in [str(option) for option in options]:
        return "is in quotes", f"{allowed}, without quotes"
    if not words:
        return "is not one of the numbers allowed here", allowed
    hint = did_you_mean(value, words) if isinstance(value, str) else ""
    return f"is not one of the words allowed here{hint}", allowed


def _sentence(kind: str, context: dict[str, Any], value: Any, fallback: str) -> str:
    """A validation error of pydantic, by its kind, in the words of someone who edits a train file."""
    if kind in _KINDS:
        return _KINDS[kind]
    if kind in ("too_short", "too_long") and not isinstance(value, str):
        count = context.get("actual_length", len(value) if isinstance(value, list) else 0)
        return "has no members" if count == 0 else f"has {count} member{'s' if count != 1 else ''}"
    if kind.endswith("too_short"):
        return "says too little" if value else "is empty"
    if kind.endswith("too_long"):
        return f"is too long: {len(value)} characters, and at most {context['max_length']} are read"
    for name, words in (("gt", "above"), ("ge", "at least"), ("lt", "below"), ("le", "at most")):
        if name in context:
            return f"must be {words} {context[name]:g}"
    return fallback[0].lower() + fallback[1:]


_KINDS = {
    "string_type": "is not text",
    "list_type": "is not a list",
    "dict_type": "is not a table",
    "model_type": "is not a table",
    "model_attributes_type": "is not a table",
    "float_type": "is not a plain number",
    "finite_number": "is not a finite number",
    "int_type": "is not a whole number",
    "int_from_float": "is not a whole number",
    "int_parsing_size": "is a whole number of too many digits",
    "bool_type": "is neither true nor false",
    "multiple_of": "is an odd number",
}


def _allowed(row: type[BaseModel], loc: tuple[str | int, ...], system: str) -> str | None:
    """What may stand at a place below a row, from its key or its type."""
    keys = [part for part in loc if isinstance(part, str)]
    if not keys:
        return ", ".join(keys_of(row))
    parent, key = _row_at(row, loc[: loc.index(keys[-1])]), keys[-1]
    field = _field(parent, key)
    if key in OF_ROW.get(parent, {}):
        return OF_ROW[parent][key]
    for item in field[1]:
        if isinstance(item, Measured):
            return measure_help(item.measure, system)
        if isinstance(item, MeasuredPair):
            help_text = measure_help(item.item.measure, system)
            return f"{help_text}; or a list of two" if item.alone else f"a list of two, each {help_text}"
        if isinstance(item, AnyMeasure):
            return item.help
    if key in EXAMPLES:
        return EXAMPLES[key]
    if options := _options(row, loc):
        return " | ".join(str(option) for option in options)
    return {
        str: "text in quotes",
        int: "a whole number without quotes",
        float: "a number without quotes or unit",
        bool: "true or false, without quotes",
    }.get(field[0])


def _options(row: type[BaseModel], loc: tuple[str | int, ...]) -> list[Any]:
    keys = [part for part in loc if isinstance(part, str)]
    kind, _ = _field(_row_at(row, loc[: loc.index(keys[-1])]), keys[-1]) if keys else (None, [])
    return list(get_args(kind)) if get_origin(kind) is Literal else []


def _field(row: type[BaseModel] | None, key: str) -> tuple[Any, list[Any]]:
    """The bare type of a key and what is annotated to it."""
    for name, item in row.model_fields.items() if row is not None else ():
        if key == (item.alias or name):
            kind, notes = _bare(item.annotation)
            return kind, [*item.metadata, *notes]
    return None, []


def _bare(annotation: Any) -> tuple[Any, list[Any]]:
    """A type without Annotated and without "or None", and its annotations."""
    notes: list[Any] = []
    while get_origin(annotation) in (Annotated, Union, UnionType):
        inner, *rest = get_args(annotation)
        if get_origin(annotation) is Annotated:
            notes += rest
        annotation = inner
    return annotation, notes


def _row_at(row: type[BaseModel], loc: tuple[str | int, ...]) -> type[BaseModel] | None:
    """The row class that holds the keys at a place below `row`; None where no row stands there."""
    found: type[BaseModel] | None = row
    for part in loc:
        if isinstance(part, int):
            continue
        kind, _ = _field(found, part)
        while get_origin(kind) is list:
            kind, _ = _bare(get_args(kind)[0])
        found = kind if isinstance(kind, type) and issubclass(kind, BaseModel) else None
    return found
