"""The report with a forced response: page one closes the loop, all sections stand."""

from __future__ import annotations

from dataclasses import replace

import pytest
from response_set import FAILED, KEPT, SILENT, generator, settled

from pdf_texts import page_texts
from quillshaft.assess.response_results import Response
from quillshaft.present.pdf.document import PageFrame, build_pdf
from quillshaft.present.report import report_pdf
from quillshaft.present.report.front import front_parts, headline, report_title
from quillshaft.present.report.response_front import response_headline
from quillshaft.present.report.studies import Studies


def pages(response: Response) -> list[str]:
    return read(report_pdf(response.screening, Studies(response=response)))


def read(pdf: bytes) -> list[str]:
    return page_texts(pdf)


@pytest.mark.parametrize(
    ("response", "tone", "said"),
    [
        (
            settled((KEPT, FAILED)),
            "fail",
            "NOT CLEAR: forced response exceeds the limit of ring (vibratory torque, 150 %)",
        ),
        (settled(status="not cleared"), "fail", "NOT CLEAR: forced response does not clear 3 interferences"),
        (settled(status="not judged: no limit"), "fail", "NOT CLEAR: forced response leaves 3 interferences unjudged"),
        (settled(barred=True), "restriction", "PASS WITH RESTRICTION: 1117 to 1286 rpm must be barred"),
        (settled((SILENT,)), "fail", "NOT CLEAR: forced response or a change of design is needed"),
        # one case of the file is not clear by separation: the base train alone passes
        (settled(), "restriction", "PASS FOR THE BASE TRAIN: forced response clears what separation left open"),
    ],
)
def test_the_stamp_says_what_the_response_comes_to(response: Response, tone: str, said: str) -> None:
    text, shown = response_headline(response, headline(response.screening))
    assert shown == tone
    assert text.startswith(said)


def test_a_train_without_open_cases_passes_plainly() -> None:
    response = settled()
    response = replace(response, screening=replace(response.screening, cases=None, case_names=()))
    assert response_headline(response, headline(response.screening)) == (
        "PASS: forced response clears what separation left open",
        "pass",
    )


def test_every_section_is_there_and_page_one_closes_the_loop() -> None:
    found = pages(settled(barred=True))
    assert "Cleared by response: Mode 2 (136.90 Hz)" in found[0]
    assert "Governing by response ring, vibratory torque: 800 of 1000 N·m" in found[0]
    text = " ".join(found)
    for title in (
        "Alternating torque against speed", "Torques at rated speed", "What shakes each link", "Heat of couplings",
        "Torque over a working cycle", "What damping decides", "Amplitudes used", "Operating restrictions",
        "Measurement plan",
    ):  # fmt: skip
        assert title in text, title
    assert "Forced response: cleared by response." in text  # beside each sentence of the interference diagram
    assert text.count("Torsional screening and forced response") >= len(found)


def test_what_is_not_cleared_stays_not_clear_on_page_one() -> None:
    response = settled(status="not cleared")
    found = read(build_pdf(front_parts(response.screening, response), PageFrame("T", "0", "draft", "t", "", "")))[0]
    assert "NOT CLEAR" in found
    assert "NOT CLEARED: Mode 2" in found
    assert "PASS" not in found


def test_without_a_response_nothing_of_it_is_there() -> None:
    screening = generator().screening
    assert report_title(screening).startswith("Torsional screening: ")
    plain = report_pdf(screening)
    assert plain == report_pdf(screening, Studies())
    assert not any("Forced response" in page for page in page_texts(plain))
