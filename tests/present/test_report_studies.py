"""The report with the studies asked for: every section there when asked."""

from __future__ import annotations

from pathlib import Path

import pytest
from pypdf import PdfReader

from pdf_texts import page_texts
from quillshaft.cli.main import run

ROOT = Path(__file__).resolve().parents[2]
EXAMPLE = ROOT / "examples" / "sluice-pump.toml"
ASKED = [
    *("--windows", "rubber-blocks", "--compare", "hard-blocks", "--tolerance", "500", "--seed", "3"),
    *("--drift", "stations.impeller.inertia", "41 kg m^2", "30 kg m^2"),
    *("--temperatures", "--levers", "--questions"),
]
SECTIONS = [
    "Couplings cold, at 30 °C and hot",
    "Stiffness windows of rubber-blocks",
    "Before and after",
    "Tolerance and what decides",
    "Drift of stations.impeller.inertia",
    "Ways out",
    "Questions to suppliers",
]


def report(monkeypatch: pytest.MonkeyPatch, out: Path, words: list[str]) -> int:
    """Exit code of `quillshaft report` on the example."""
    monkeypatch.setattr("sys.argv", ["quillshaft", "report", str(EXAMPLE), "--out", str(out), *words])
    with pytest.raises(SystemExit) as ended:
        run()
    return int(ended.value.code or 0)


def titles(path: Path) -> list[str]:
    """Headings of the first level."""
    return [item.title for item in PdfReader(path).outline if not isinstance(item, list)]


def test_every_section_asked_for_stands_between_damping_and_dismissals(tmp_path, monkeypatch) -> None:
    out = tmp_path / "report.pdf"
    assert report(monkeypatch, out, ASKED) == 0
    found = titles(out)
    first = found.index("Damping") + 1
    assert found[first : first + len(SECTIONS)] == SECTIONS
    text = " ".join(page_texts(out))
    assert "500 samples, seed 3" in text
    assert "0.19 MN m/rad" in text  # the changed stiffness as the case writes it
    assert "stiffness of rubber-blocks, MN·m/rad" in text  # charts stay text


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--windows", "rubber-block"], "rubber-blocks"),
        (["--windows", "motor"], "there is none of this name"),
        (["--compare", "hard-block"], "hard-blocks"),
        (["--tolerance", "0"], "--tolerance 0"),
        (["--drift", "stations.impeler.inertia", "1", "2"], "stations.impeller"),
    ],
)
def test_a_study_that_cannot_be_made_is_refused_and_nothing_is_written(
    tmp_path, monkeypatch, capsys, words, said
) -> None:
    out = tmp_path / "report.pdf"
    assert report(monkeypatch, out, words) == 2
    assert said in capsys.readouterr().err
    assert not out.exists()
