"""The issued sample reports, and that one input always gives one report."""

from __future__ import annotations

import hashlib
import io
import os
import re
import subprocess
import sys
from functools import cache
from pathlib import Path

import pytest
from pypdf import PdfReader

from issue_reports import ISSUED, ROOT
from pdf_texts import page_texts
from quillshaft import load, respond, screen
from quillshaft.assess.response_results import Response
from quillshaft.assess.response_standing import standing
from quillshaft.present.listed_modes import listed_modes, unlisted_sentence
from quillshaft.present.report import report_pdf
from quillshaft.present.report.studies import Studies


def issued(stem: str) -> bytes:
    """The report in `reports/`; that it is what the example gives now is a test of its own."""
    return (ROOT / "reports" / f"{stem}.pdf").read_bytes()


@cache
def issued_text(stem: str) -> list[str]:
    """Text of each page of the issued report, runs of white space as one blank."""
    return page_texts(issued(stem))


@cache
def made(stem: str) -> tuple[Response | None, bytes]:
    """The response that a report of the example holds, if any, and the report made anew."""
    screening = screen(load(ROOT / "examples" / f"{stem}.toml"))
    response = respond(screening) if ISSUED[stem] else None
    return response, report_pdf(screening, None if response is None else Studies(response=response))


EXAMPLES = pytest.mark.parametrize("stem", sorted(ISSUED))


@EXAMPLES
def test_issued_reports_are_what_the_examples_give_now_and_pass_only_where_all_is_settled(stem: str) -> None:
    response, data = made(stem)
    if data != issued(stem):
        assert page_texts(data) == issued_text(stem), "run tests/issue_reports.py and look at the pages"
    screening = screen(load(ROOT / "examples" / f"{stem}.toml"))
    passed = screening.gravest_verdict in ("clear", "barred") if response is None else standing(response).settled
    assert ("PASS" in issued_text(stem)[0]) == passed


def test_same_input_gives_same_bytes_under_other_hash_seed_time_zone_and_locale() -> None:
    """With a forced response, so with every part of a report that has no study."""
    code = (
        f"import hashlib, sys; sys.path.insert(0, {str(ROOT / 'tests')!r}); from issue_reports import issue; "
        "print(hashlib.sha256(issue('air-compressor')).hexdigest())"
    )
    environment = {**os.environ, "PYTHONHASHSEED": "77", "TZ": "Pacific/Auckland", "LC_ALL": "C"}
    done = subprocess.run(
        [sys.executable, "-c", code], env=environment, capture_output=True, text=True, check=True, timeout=120
    )
    assert done.stdout.strip() == hashlib.sha256(made("air-compressor")[1]).hexdigest()


@EXAMPLES
def test_report_parts_come_in_the_order_of_a_study(stem: str) -> None:
    outline = PdfReader(io.BytesIO(issued(stem))).outline
    titles = [item.title for item in outline if not isinstance(item, list)]
    response = ["Forced response", "Operating restrictions", "Measurement plan"] if ISSUED[stem] else []
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


@EXAMPLES
def test_page_one_carries_verdict_hash_status_and_number_of_assumptions(stem: str) -> None:
    path = ROOT / "examples" / f"{stem}.toml"
    screening = screen(load(path))
    first = issued_text(stem)[0]
    assert hashlib.sha256(path.read_bytes()).hexdigest() in first
    assert f"{len(screening.assumed)} values that the file does not state" in first
    assert screening.train.sign_off.status.upper() in first
    assert "Page 1 of " in first


@EXAMPLES
def test_every_natural_frequency_and_every_margin_is_in_the_report(stem: str) -> None:
    screening = screen(load(ROOT / "examples" / f"{stem}.toml"))
    text = " ".join(issued_text(stem))
    for mode in listed_modes(screening):
        assert f"{mode.frequency_hz:.2f}" in text
    left_out = unlisted_sentence(screening)  # modes that only the cuts of a distributed shaft make
    assert (not left_out) == (len(listed_modes(screening)) == len(screening.modes))
    assert left_out.strip() in text
    for source in screening.sources:
        assert source.name in text


@EXAMPLES
def test_input_file_stands_verbatim_in_the_appendix(stem: str) -> None:
    printed = re.sub(r"\s", "", "".join(issued_text(stem)))
    lines = [line for line in (ROOT / "examples" / f"{stem}.toml").read_text().splitlines() if 0 < len(line) < 90]
    assert len(lines) > 40
    missing = [line for line in lines if re.sub(r"\s", "", line) not in printed]
    assert not missing


@EXAMPLES
def test_report_holds_no_raster_image_and_embeds_its_fonts(stem: str) -> None:
    for page in PdfReader(io.BytesIO(issued(stem))).pages:
        resources = page["/Resources"]
        for item in (resources.get("/XObject") or {}).values():
            assert item.get_object()["/Subtype"] != "/Image"
        for font in (resources.get("/Font") or {}).values():
            assert "DejaVu" in str(font.get_object()["/BaseFont"])


def test_a_case_is_named_on_page_one() -> None:
    screening = screen(load(ROOT / "examples" / "sluice-pump.toml", ["hard-blocks"]))
    first = page_texts(report_pdf(screening))[:1][0]
    assert "hard-blocks" in first
    assert "replacement blocks of the next hardness" in first
    assert "NOT CLEAR" in first


def test_issued_list_covers_every_example() -> None:
    examples = {path.stem for path in (ROOT / "examples").glob("*.toml")}
    assert examples == set(ISSUED) == {path.stem for path in Path(ROOT / "reports").glob("*.pdf")}
