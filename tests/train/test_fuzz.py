"""Train files made at random from the keys that exist: every one is refused in words or screened soundly."""

from __future__ import annotations

import copy
import json
import math
import re
import tomllib
import warnings
from collections.abc import Iterator
from typing import Any

from hypothesis import given, settings
from hypothesis import strategies as st

from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen
from quillshaft.present.results_json import screening_json
from quillshaft.train.document import parse_document
from quillshaft.train.machine_rows import MACHINE_ROWS
from quillshaft.train.messages import keys_of
from quillshaft.train.overlay import case_names
from quillshaft.train.problems import TrainFileError
from quillshaft.train.read import train_of
from quillshaft.train.starters import KINDS, starter_text
from quillshaft.train.validate import GEAR_ROWS, PLAIN, ROWS
from train_files import MORE, NAME, TEXT, as_toml

JARGON = re.compile(r"input should|valid (string|list|dict|int|bool|num)|instance of|after validation|[a-z]Row\b")
BASES = [tomllib.loads(text) for text in (TEXT + MORE, *(starter_text(kind) for kind in KINDS))]
QUANTITY = re.compile(r"([+-]?[0-9][0-9.e+-]*) ([^0-9].*)")


def tried(text: str, *cases: str) -> bool:
    """Whether a text was screened (True) or refused (False); anything else fails the test."""
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("error")
            result = screen(train_of(parse_document(text, NAME), cases))
    except TrainFileError as error:
        said = str(error)
    else:
        return _sound(result)
    assert said
    assert not JARGON.search(said), said
    return False


def _sound(result: Screening) -> bool:
    assert result.self_check.all_proven
    assert all(math.isfinite(mode.frequency_hz) and mode.frequency_hz > 0 for mode in result.modes)
    assert json.loads(screening_json(result))["schema"] == 1
    return True


SCALARS = st.one_of(
    st.sampled_from(["", "a", "b", "fixed", "balance", "5 kg m^2", "1 MN m/rad", "90 mm", "50 Hz", "10 %", "steel"]),
    st.sampled_from(["SI", "US", "mesh", "epicyclic", "square", "stated", "draft", "ends", "default", "other", "fan"]),
    st.integers(-5, 100),
    st.floats(),
    st.booleans(),
    st.dates(),
    st.text(st.characters(exclude_categories=("Cs",)), max_size=6),
)
VALUES = st.one_of(SCALARS, st.lists(SCALARS, max_size=3), st.dictionaries(st.sampled_from("ab"), SCALARS, max_size=2))
NAMES = st.sampled_from(["a", "b", "c", "fixed", "x y"])


def _row(keys: list[str]) -> st.SearchStrategy[dict[str, Any]]:
    return st.dictionaries(st.sampled_from(keys), VALUES, max_size=5)


def _tables() -> st.SearchStrategy[dict[str, Any]]:
    """Documents with the tables and keys of the schema, and values of every kind anywhere."""
    machines = [row for kind in MACHINE_ROWS.values() for row in [keys_of(kind)]]
    gears = [keys_of(row) for row in GEAR_ROWS.values()]
    kinds = {**{table: [keys_of(row)] for table, row in ROWS.items()}, "machines": machines, "gears": gears}
    optional: dict[str, st.SearchStrategy[Any]] = {table: _row(keys_of(row)) for table, row in PLAIN.items()}
    optional |= {
        table: st.one_of(VALUES, st.dictionaries(NAMES, st.one_of(*map(_row, keys)), max_size=3))
        for table, keys in kinds.items()
    }
    optional |= {"power": st.dictionaries(NAMES, VALUES), "excitations-off": st.dictionaries(NAMES, VALUES)}
    optional["cases"] = st.dictionaries(NAMES, st.dictionaries(st.sampled_from([*optional, "because"]), VALUES))
    return st.fixed_dictionaries({"schema": st.just(1)}, optional=optional)


@settings(max_examples=150)
@given(_tables())
def test_random_tables_and_values_are_always_answered_in_words(data):
    text = as_toml(data)
    tried(text)
    for name in case_names(data):
        tried(text, name)


def _leaves(node: Any, path: tuple[Any, ...] = ()) -> Iterator[tuple[tuple[Any, ...], Any]]:
    members = node.items() if isinstance(node, dict) else enumerate(node) if isinstance(node, list) else ()
    for key, value in members:
        yield from _leaves(value, (*path, key))
    if not isinstance(node, dict | list):
        yield path, node


NUMBERS = [
    (base, path, value)
    for base in range(len(BASES))
    for path, value in _leaves(BASES[base])
    if isinstance(value, int | float) or (isinstance(value, str) and QUANTITY.fullmatch(value))
]


def _moved(value: Any, factor: float) -> Any:
    if isinstance(value, int):
        return max(round(value * min(factor, 1e4)), 1)
    if isinstance(value, float):
        return value * factor
    match = QUANTITY.fullmatch(value)
    assert match is not None
    return f"{float(match[1]) * factor!r} {match[2]}"


@settings(max_examples=90)
@given(st.lists(st.tuples(st.sampled_from(NUMBERS), st.floats(-12, 12)), min_size=1, max_size=4))
def test_numbers_moved_by_up_to_twelve_decades_are_refused_or_screened_soundly(moves):
    data = copy.deepcopy(BASES[moves[0][0][0]])
    for (base, path, value), decades in moves:
        if base == moves[0][0][0]:
            node = data
            for key in path[:-1]:
                node = node[key]
            node[path[-1]] = _moved(value, 10.0**decades)
    text = as_toml(data)
    tried(text)
    for name in case_names(data):
        tried(text, name)
