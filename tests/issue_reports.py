"""Write the issued sample reports: `python tests/issue_reports.py` after a change that alters them."""

from __future__ import annotations

from pathlib import Path

from quillshaft import load, report_pdf, respond, screen
from quillshaft.present.report.studies import Studies

ROOT = Path(__file__).resolve().parents[1]
ISSUED: dict[str, bool] = {
    "sluice-pump": False,
    "dairy-generator": True,
    "kiln-fan": True,
    "air-compressor": True,
    "workboat": True,
}
"""Example (file stem) and whether its issued report holds the forced response."""


def issue(stem: str) -> bytes:
    """The report of one example as PDF bytes."""
    screening = screen(load(ROOT / "examples" / f"{stem}.toml"))
    return report_pdf(screening, Studies(response=respond(screening)) if ISSUED[stem] else None)


if __name__ == "__main__":
    for name in ISSUED:
        (ROOT / "reports" / f"{name}.pdf").write_bytes(issue(name))
