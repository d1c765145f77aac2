"""One number of the train file by its path, "stations.impeller.inertia", and the file with another value there."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import Any

from quillshaft.train.document import Document
from quillshaft.train.measures import MEASURES
from quillshaft.train.model import Train
from quillshaft.train.overlay import ALTERNATIVES, KEYED_TABLES, lay_cases
from quillshaft.train.problems import Problem, TrainFileError, did_you_mean, shown
from quillshaft.train.quantity import QuantityError, read_quantity, which_measure
from quillshaft.train.read import train_of

Path = tuple[str | int, ...]
CLOSED = frozenset(("schema", "train", "cases", "sign-off", "dismissals", "excitations-off", "amplitudes"))
"""Tables in which no number moves a frequency or a source."""

_PART = re.compile(r'(?:^|\.)(?:"([^"]*)"|\'([^\']*)\'|([^.\[\]"\']+))|\[([0-9]+)\]')
_VALUE = re.compile(r"\s*([+\-−]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+\-−]?[0-9]+)?)\s*(.*?)\s*", re.DOTALL)


class DatumError(ValueError):
    """A datum, or a value for it, that cannot be used; the text says why and what can."""


@dataclass(frozen=True)
class Datum:
    """A number of the train file: as it was asked for, the way to it, and the tables it stands in, cases laid."""

    name: str
    path: Path
    document: Document


@dataclass(frozen=True)
class Values:
    """Two values in one unit as the file spells it; "" where bare numbers are meant."""

    start: float
    end: float
    unit: str


def find_datum(train: Train, name: str) -> Datum:
    """The datum of this path in a train's file, with the train's cases laid.

    Raises DatumError where there is none, with the nearest, or where what stands there is no number.
    """
    data = lay_cases(train.file, train.cases)
    path = _path(data, name)
    present, value = (False, None) if path is None else _value_at(data, path)
    if path is None or path[0] in CLOSED or not (present or _may_be_added(data, path)):
        known = sorted(dict(numbers(data)))
        hint = did_you_mean(name, known) or f". For example: {', '.join(known[:4])}"
        raise DatumError(f"datum = {name}: there is no such number in the file{hint}")
    if present:
        _check_number(name, value)
    return Datum(name, path, replace(train.file, data=data))


def _may_be_added(data: dict[str, Any], path: Path) -> bool:
    """True for a key that the table it would stand in does not have yet; the reader says whether it may."""
    there, table = _value_at(data, path[:-1])
    return there and isinstance(table, dict) and isinstance(path[-1], str)


def _path(data: dict[str, Any], name: str) -> Path | None:
    """The path that a name spells: list members counted from 1 in brackets, names with dots whole or in quotes."""
    parts: list[str | int] = []
    at = 0
    while at < len(name):
        match = _PART.match(name, at)
        if match is None:
            return None
        text = next((group for group in match.groups()[:3] if group is not None), None)
        parts.append(int(match[4]) - 1 if text is None else text.strip())
        at = match.end()
    if len(parts) < 2 or not isinstance(data.get(str(parts[0])), dict):
        return None
    if parts[0] in KEYED_TABLES:
        return _with_element(data[str(parts[0])], parts)
    return tuple(parts)


def _with_element(rows: dict[str, Any], parts: list[str | int]) -> Path | None:
    """The path with the element's name whole, however many dots it has."""
    for end in range(len(parts), 1, -1):
        name = ".".join(map(str, parts[1:end]))
        if isinstance(rows.get(name), dict):
            return (parts[0], name, *parts[end:])
    return None


def _value_at(data: Any, path: Path) -> tuple[bool, Any]:
    """(True, what stands at a path), or (False, None) where nothing does."""
    for part in path:
        inside = 0 <= part < len(data) if isinstance(data, list) and isinstance(part, int) else None
        if inside is None:
            inside = isinstance(data, dict) and part in data
        if not inside:
            return False, None
        data = data[part]
    return True, data


def _check_number(name: str, value: Any) -> None:
    if isinstance(value, dict):
        inside = ", ".join(key for key, _ in _numbers_in(name, value)) or "it has none"
        raise DatumError(f"datum = {name}: this is a table; name one of its numbers: {inside}")
    if isinstance(value, list):
        raise DatumError(f"datum = {name}: this is a list; name one of its members, such as {name}[1]")
    if not _is_number(value):
        raise DatumError(f"datum = {name}: {shown(value)} is no number")


def _is_number(value: Any) -> bool:
    if isinstance(value, str):
        match = _VALUE.fullmatch(value)
        return match is not None and (not match[2] or which_measure(value, tuple(MEASURES)) is not None)
    return isinstance(value, int | float) and not isinstance(value, bool)


def numbers(data: dict[str, Any]) -> Iterator[tuple[str, Any]]:
    """Every number of the open tables with its path as a user writes it."""
    for table, rows in data.items():
        if table not in CLOSED:
            yield from _numbers_in(table, rows)


def _numbers_in(name: str, value: Any) -> Iterator[tuple[str, Any]]:
    if isinstance(value, dict):
        for key, member in value.items():
            part = key if re.fullmatch(r"[\w-]+", key) else f'"{key}"'
            yield from _numbers_in(f"{name}.{part}", member)
    elif isinstance(value, list):
        for index, member in enumerate(value, start=1):
            yield from _numbers_in(f"{name}[{index}]", member)
    elif _is_number(value):
        yield name, value


def train_at(datum: Datum, value: object) -> Train:
    """The train with another value of the datum, as the file would spell it; other spellings of it give way.

    Raises TrainFileError when the reader does not take it.
    """
    data = _put(datum.document.data, datum.path, value)
    return train_of(replace(datum.document, data=data))


def _put(data: Any, path: Path, value: object, depth: int = 0) -> Any:
    """A copy of the tables with one value replaced; what is not on the way to it is shared."""
    if depth == len(path):
        return value
    part = path[depth]
    if isinstance(data, list) and isinstance(part, int):
        if not 0 <= part < len(data):
            return data
        return [*data[:part], _put(data[part], path, value, depth + 1), *data[part + 1 :]]
    kept = dict(data) if isinstance(data, dict) else {}
    if depth == len(path) - 1:
        for group in ALTERNATIVES:
            if part in group:
                kept = {key: member for key, member in kept.items() if key not in group}
    return {**kept, str(part): _put(kept.get(str(part)), path, value, depth + 1)}


def read_values(datum: Datum, start: str | float, end: str | float) -> Values:
    """Both ends of a sweep in the unit of the first, each checked by the reader of the file.

    Raises DatumError where one is no number, has the wrong unit, is refused by the reader, or both are equal.
    """
    for option, typed in (("from", start), ("to", end)):
        spelled = _spelled(option, typed)
        try:
            train_at(datum, spelled)
        except TrainFileError as error:
            raise DatumError(_refused(datum, option, typed, error)) from None
    (first, unit), (last, other) = _parts("from", start), _parts("to", end)
    if bool(unit) != bool(other):
        raise DatumError(f"from = {start}, to = {end}: give both in the same unit")
    if unit != other:
        last = _converted(str(start), str(end), unit)
    if first == last:
        raise DatumError(f"from = {start}, to = {end}: both are the same value; nothing would change")
    return Values(first, last, unit)


def _parts(option: str, typed: str | float) -> tuple[float, str]:
    match = _VALUE.fullmatch(str(typed))
    if match is None:
        raise DatumError(f"{option} = {typed}: does not begin with a number")
    return float(match[1].replace("−", "-")), match[2]


def _spelled(option: str, typed: str | float) -> object:
    """A typed value as the file would hold it: a bare number as a number."""
    number, unit = _parts(option, typed)
    return str(typed) if unit else number


def spelled(value: float, unit: str) -> object:
    """A value in a unit as the file would hold it."""
    return f"{value!r} {unit}" if unit else value


def _converted(start: str, end: str, unit: str) -> float:
    """The second value in the unit of the first."""
    names = tuple(name for name in MEASURES if name not in ("number", "temperature"))
    measure = which_measure(start, names)
    try:
        if measure is None:
            raise QuantityError("", "")
        one = read_quantity(f"1 {unit}", measure, "SI").value
        return read_quantity(end, measure, "SI").value / one
    except QuantityError:
        raise DatumError(f"from = {start}, to = {end}: give both in the same unit") from None


def _refused(datum: Datum, option: str, typed: object, error: TrainFileError) -> str:
    """Why the reader does not take a value, in terms of what was asked for."""
    own = [problem for problem in error.problems if _ends_at(problem, datum.path)]
    if not own:
        return f"{option} = {typed}: the file cannot be read with this value of {datum.name}:\n{error}"
    problem = own[0]
    message = problem.message if problem.message.endswith(("?", ".")) else f"{problem.message}."
    allowed = f" Allowed: {problem.allowed}." if problem.allowed else ""
    if message.startswith("is not a key"):
        return f"datum = {datum.name}: {problem.path[-1]} {message}{allowed}"
    if "whole number" in message:
        return f"datum = {datum.name}: this counts whole things; a sweep needs a number that can lie between two others"
    return f"{option} = {typed}: {datum.name} {_as_clause(message)}{allowed}"


def _as_clause(message: str) -> str:
    return message if message.startswith(("is ", "must ", "has ")) else f"cannot be this: {message}"


def _ends_at(problem: Problem, path: Path) -> bool:
    tail = problem.path[-len(path) :]
    return tail == path or (len(problem.path) < len(path) and path[: len(problem.path)] == problem.path)
