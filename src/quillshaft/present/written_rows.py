"""Every element with every key as the file writes it: nothing that was stated is left out of sight."""

from __future__ import annotations

from typing import Any

from quillshaft.study.differences import written
from quillshaft.train.model import Train
from quillshaft.train.overlay import KEYED_TABLES, lay_cases

PROVENANCE = ("source", "document", "date", "status", "note")
"""Keys that say where a number comes from: they have columns of their own."""
WITHOUT_COLUMNS = frozenset(("amplitudes",))
"""Tables whose rows stand in no other table of the report, so that these keys are shown with the others."""


def written_rows(train: Train) -> list[tuple[str, str]]:
    """(element, keys and values as written) of every row of the file, the cases shown laid over it, in file order."""
    data = lay_cases(train.file, train.cases)
    rows = []
    for table, elements in data.items():
        if table not in KEYED_TABLES or not isinstance(elements, dict):
            continue
        rows += [
            (f"{table}.{name}", _keys(row, () if table in WITHOUT_COLUMNS else PROVENANCE))
            for name, row in elements.items()
            if isinstance(row, dict)
        ]
    return rows


def _keys(row: dict[str, Any], hidden: tuple[str, ...]) -> str:
    return "; ".join(f"{key} = {written(value)}" for key, value in row.items() if key not in hidden)
