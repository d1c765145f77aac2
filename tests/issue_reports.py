"""Write the issued sample reports: `python tests/issue_reports.py` after a change that alters them."""

from __future__ import annotations

from pathlib import Path

from quillshaft import load, report_pdf, screen

ROOT = Path(__file__).resolve().parents[1]
ISSUED: dict[str, tuple[str, ...]] = {
    "sluice-pump": (),
    "dairy-generator": (),
    "kiln-fan": (),
    "air-compressor": (),
    "workboat": (),
}
"""Example (file stem) and the cases its issued report is for."""


def issue(stem: str) -> bytes:
    """The report of one example as PDF bytes."""
    return report_pdf(screen(load(ROOT / "examples" / f"{stem}.toml", ISSUED[stem])))


if __name__ == "__main__":
    for name in ISSUED:
        (ROOT / "reports" / f"{name}.pdf").write_bytes(issue(name))
