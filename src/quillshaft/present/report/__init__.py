"""The report: a screening as a PDF for sign-off."""

from __future__ import annotations

from typing import TYPE_CHECKING

from quillshaft.assess.results import Screening

if TYPE_CHECKING:
    from quillshaft.present.report.studies import Studies


def report_pdf(screening: Screening, studies: Studies | None = None) -> bytes:
    """The report of a screening, and of the studies asked for, as PDF bytes; the same input gives the same bytes.

    Dates come from the train file, never from the clock.
    """
    from quillshaft.present.pdf.document import PageFrame, build_pdf
    from quillshaft.present.report.closing import closing_parts
    from quillshaft.present.report.data import data_parts
    from quillshaft.present.report.findings import finding_parts
    from quillshaft.present.report.front import front_parts, report_title
    from quillshaft.present.report.studies import study_parts

    sign = screening.train.sign_off
    response = None if studies is None else studies.response
    frame = PageFrame(
        document=sign.document or screening.train.tag or "",
        revision=sign.revision or "",
        status=sign.status,
        title=report_title(screening, response),
        date=sign.date or "",
        caution=(
            f"{'Screening of torsional vibration' if response is None else 'Steady torsional vibration'} only; "
            "no approval by any class society or purchaser. "
            "Valid only for the parts, data and limits listed. Local codes and site rules come first."
        ),
        author=sign.prepared or "",
    )
    story = [
        *front_parts(screening, response),
        *data_parts(screening),
        *finding_parts(screening, response),
        *(study_parts(screening, studies) if studies is not None else ()),
        *closing_parts(screening),
    ]
    return build_pdf(story, frame)
