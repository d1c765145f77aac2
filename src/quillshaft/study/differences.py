"""What two trains state differently: table, element and key, with both values as they are written."""

from __future__ import annotations

import json
import re
from dataclasses import dataclass
from typing import Any

from quillshaft.train.model import Train
from quillshaft.train.overlay import KEYED_TABLES, lay_cases

PHYSICAL = ("stations", "shafts", "couplings", "gears", "belts", "ties", "dampers", "machines", "materials")
"""Tables that state parts of the train, as against how it is run, judged and signed."""
WHOLE = ""
BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")


@dataclass(frozen=True)
class InputChange:
    """One value that differs.

    table, element, key   where it stands; element "" in tables of fixed keys; key "" where the whole element
                          was added or left out
    before, after         as TOML writes them; None where the value is not there
    """

    table: str
    element: str
    key: str
    before: str | None
    after: str | None

    @property
    def path(self) -> str:
        """The place in words: "couplings.flex-block.stiffness"."""
        return ".".join(part for part in (self.table, self.element, self.key) if part)

    @property
    def subject(self) -> str:
        """The element, or the table where there is none: "couplings.flex-block"."""
        return ".".join(part for part in (self.table, self.element) if part)


def written(value: Any) -> str:
    """A value as TOML writes it on one line."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return json.dumps(value, ensure_ascii=False)
    if isinstance(value, dict):
        return (
            "{ " + ", ".join(f"{_key(key)} = {written(item)}" for key, item in value.items()) + " }" if value else "{}"
        )
    if isinstance(value, list):
        return "[" + ", ".join(written(item) for item in value) + "]"
    return str(value)


def _key(name: str) -> str:
    return name if BARE_KEY.fullmatch(name) else json.dumps(name, ensure_ascii=False)


def input_changes(base: Train, case: Train) -> tuple[InputChange, ...]:
    """Everything that two trains state differently, in the order of the base's file, then of the case's."""
    before, after = (
        {table: rows for table, rows in lay_cases(train.file, train.cases).items() if table != "cases"}
        for train in (base, case)
    )
    out: list[InputChange] = []
    for table in dict.fromkeys((*before, *after)):
        old, new = before.get(table, {}), after.get(table, {})
        if not isinstance(old, dict) or not isinstance(new, dict):
            out += _change((table, WHOLE, WHOLE), old, new, table in before, table in after)
        elif table in KEYED_TABLES or table in PHYSICAL:
            out += _element_changes(table, old, new)
        else:
            out += _key_changes(table, WHOLE, old, new)
    return tuple(out)


def _element_changes(table: str, old: dict[str, Any], new: dict[str, Any]) -> list[InputChange]:
    out: list[InputChange] = []
    for element in dict.fromkeys((*old, *new)):
        rows = old.get(element), new.get(element)
        if isinstance(rows[0], dict) and isinstance(rows[1], dict):
            out += _key_changes(table, element, rows[0], rows[1])
        else:
            out += _change((table, element, WHOLE), *rows, element in old, element in new)
    return out


def _key_changes(table: str, element: str, old: dict[str, Any], new: dict[str, Any]) -> list[InputChange]:
    out: list[InputChange] = []
    for key in dict.fromkeys((*old, *new)):
        out += _change((table, element, key), old.get(key), new.get(key), key in old, key in new)
    return out


def _change(place: tuple[str, str, str], old: Any, new: Any, was: bool, is_now: bool) -> list[InputChange]:
    if was == is_now and old == new and type(old) is type(new):
        return []
    return [InputChange(*place, written(old) if was else None, written(new) if is_now else None)]
