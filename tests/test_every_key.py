"""Every key of the train file is in the README's reference, and what a file states is in `check` and the report."""

from __future__ import annotations

import io
import re
from pathlib import Path

import pytest
from pypdf import PdfReader

from pdf_texts import page_texts
from quillshaft import load, screen
from quillshaft.cli.output import Console
from quillshaft.cli.show import show_check
from quillshaft.present.written_rows import PROVENANCE
from quillshaft.train.overlay import KEYED_TABLES
from quillshaft.train.schema import build_schema

ROOT = Path(__file__).resolve().parents[1]
EXAMPLES = sorted((ROOT / "examples").glob("*.toml"))


def keys() -> list[str]:
    """Every key that the schema knows, table names included, cases aside."""
    schema = build_schema()
    found = {name for name in schema["properties"] if name not in ("schema", "cases")}
    for name, definition in schema["$defs"].items():
        if not name.startswith("case-"):
            found |= set(definition.get("properties", {}))
    return sorted(found - {"kind"})


@pytest.mark.parametrize("key", keys())
def test_every_key_is_in_the_readme(key: str) -> None:
    text = re.sub(r"```.*?```", "", (ROOT / "README.md").read_text("utf-8"), flags=re.DOTALL)
    quoted = " ".join(re.findall(r"`([^`]+)`", text))
    assert re.search(rf"(?<![\w-]){re.escape(key)}(?![\w-])", quoted), (
        f"{key} is missing from the README's file reference"
    )


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_every_key_of_a_file_is_in_check_and_in_the_report(path: Path) -> None:
    screening = screen(load(path))
    shown = io.StringIO()
    show_check(screening, Console(file=shown, width=4000, highlight=False, markup=False))
    reader = PdfReader(ROOT / "reports" / f"{path.stem}.pdf")
    starts = {
        item.title: reader.get_destination_page_number(item) for item in reader.outline if not isinstance(item, list)
    }
    pages = page_texts(ROOT / "reports" / f"{path.stem}.pdf")
    data = " ".join(pages[starts["Data"] : starts["Equivalent system"] + 1])
    start, end = data.index("Every key as the file writes it"), data.rindex("Equivalent system")
    table, checked = re.sub(r"\s", "", data[start:end]), re.sub(r"\s", "", shown.getvalue())
    for name, rows in screening.train.file.data.items():
        if name not in KEYED_TABLES:
            continue
        for element, row in rows.items():
            assert re.sub(r"\s", "", f"{name}.{element}") in checked
            keys = set(row) - set(PROVENANCE) if isinstance(row, dict) else {"torque"}
            for key in keys:
                assert f"{key}=" in checked, f"{name}.{element}.{key}"
                assert f"{key}=" in table, f"{name}.{element}.{key}"
