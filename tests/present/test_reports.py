"""The issued sample reports, and that one input always gives one report."""

from __future__ import annotations

import hashlib
import io
import os
import re
import subprocess
import sys
from functools import lru_cache
from pathlib import Path

import pytest
from pypdf import PdfReader

from issue_reports import ISSUED, ROOT, issue
from quillshaft import load, respond, screen
from quillshaft.assess.response_standing import standing
from quillshaft.present.listed_modes import listed_modes, unlisted_sentence
from quillshaft.present.report import report_pdf


@lru_cache(maxsize=12)
def text_of(data: bytes) -> list[str]:
    """Text of each page, runs of white space as one blank."""
    return [re.sub(r"\s+", " ", page.extract_text()).strip() for page in PdfReader(io.BytesIO(data)).pages]


@pytest.fixture(scope="module", params=sorted(ISSUED))
def example(request: pytest.FixtureRequest) -> tuple[str, bytes]:
    """Name and freshly made report of each example."""
    return request.param, issue(request.param)


def test_issued_reports_are_what_the_examples_give_now(example: tuple[str, bytes]) -> None:
    stem, made = example
    issued = (ROOT / "reports" / f"{stem}.pdf").read_bytes()
    assert text_of(made) == text_of(issued), "run tests/issue_reports.py and look at the pages"


@pytest.mark.parametrize("stem", ["sluice-pump", "kiln-fan"])
def test_same_input_gives_same_bytes_under_other_hash_seed_time_zone_and_locale(stem: str) -> None:
    """Without and with a forced response."""
    made = issue(stem)
    code = (
        f"import hashlib, sys; sys.path.insert(0, {str(ROOT / 'tests')!r}); from issue_reports import issue; "
        f"print(hashlib.sha256(issue({stem!r})).hexdigest())"
    )
    environment = {**os.environ, "PYTHONHASHSEED": "77", "TZ": "Pacific/Auckland", "LC_ALL": "C"}
    done = subprocess.run(
        [sys.executable, "-c", code], env=environment, capture_output=True, text=True, check=True, timeout=120
    )
    assert done.stdout.strip() == hashlib.sha256(made).hexdigest()


def test_report_parts_come_in_the_order_of_a_study(example: tuple[str, bytes]) -> None:
    outline = PdfReader(io.BytesIO(example[1])).outline
    titles = [item.title for item in outline if not isinstance(item, list)]
    response = ["Forced response", "Operating restrictions", "Measurement plan"] if ISSUED[example[0]] else []
    wanted = [
        "Torsional screening",
        "Train",
        "Data",
        "Equivalent system",
        "Natural frequencies and modes",
        "Interference diagram and margins",
        "Excitations",
        "Damping",
        *response,
        "Dismissals, exclusions and what voids the result",
        "Assumptions",
        "Questions about the data",
        "Numerical self-check",
        "Appendix A",
        "Appendix B",
        "Cautions",
        "Sign-off",
    ]
    assert len(titles) == len(wanted)
    assert all(title.startswith(start) for title, start in zip(titles, wanted, strict=True)), titles


def test_page_one_carries_verdict_hash_status_and_number_of_assumptions(example: tuple[str, bytes]) -> None:
    stem, made = example
    path = ROOT / "examples" / f"{stem}.toml"
    screening = screen(load(path))
    first = text_of(made)[0]
    assert hashlib.sha256(path.read_bytes()).hexdigest() in first
    assert f"{len(screening.assumed)} values that the file does not state" in first
    assert screening.train.sign_off.status.upper() in first
    passed = screening.gravest_verdict in ("clear", "barred")
    assert ("PASS" in first) == (standing(respond(screening)).settled if ISSUED[stem] else passed)
    assert "Page 1 of " in first


def test_every_natural_frequency_and_every_margin_is_in_the_report(example: tuple[str, bytes]) -> None:
    stem, made = example
    screening = screen(load(ROOT / "examples" / f"{stem}.toml"))
    text = " ".join(text_of(made))
    for mode in listed_modes(screening):
        assert f"{mode.frequency_hz:.2f}" in text
    left_out = unlisted_sentence(screening)  # modes that only the cuts of a distributed shaft make
    assert (not left_out) == (len(listed_modes(screening)) == len(screening.modes))
    assert left_out.strip() in text
    for source in screening.sources:
        assert source.name in text


def test_input_file_stands_verbatim_in_the_appendix(example: tuple[str, bytes]) -> None:
    stem, made = example
    printed = re.sub(r"\s", "", "".join(text_of(made)))
    lines = [line for line in (ROOT / "examples" / f"{stem}.toml").read_text().splitlines() if 0 < len(line) < 90]
    assert len(lines) > 40
    missing = [line for line in lines if re.sub(r"\s", "", line) not in printed]
    assert not missing


def test_report_holds_no_raster_image_and_embeds_its_fonts(example: tuple[str, bytes]) -> None:
    for page in PdfReader(io.BytesIO(example[1])).pages:
        resources = page["/Resources"]
        for item in (resources.get("/XObject") or {}).values():
            assert item.get_object()["/Subtype"] != "/Image"
        for font in (resources.get("/Font") or {}).values():
            assert "DejaVu" in str(font.get_object()["/BaseFont"])


def test_a_case_is_named_on_page_one() -> None:
    screening = screen(load(ROOT / "examples" / "sluice-pump.toml", ["hard-blocks"]))
    first = text_of(report_pdf(screening))[0]
    assert "hard-blocks" in first
    assert "replacement blocks of the next hardness" in first
    assert "NOT CLEAR" in first


def test_issued_list_covers_every_example() -> None:
    examples = {path.stem for path in (ROOT / "examples").glob("*.toml")}
    assert examples == set(ISSUED) == {path.stem for path in Path(ROOT / "reports").glob("*.pdf")}
