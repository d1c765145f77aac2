"""Rows of the forced response's tables, the same for terminal and report."""

from __future__ import annotations

from collections.abc import Collection

from quillshaft.assess.response_results import Finding, Response
from quillshaft.present.response_limits_words import carries
from quillshaft.present.response_values import (
    RPM,
    at_speed,
    finding_use,
    torque_number,
    torque_unit,
    value_cells,
)
from quillshaft.present.shown_text import shown_text
from quillshaft.present.units import SHOWN
from quillshaft.present.words import hertz, number, percent

Rows = list[tuple[str, ...]]
Links = Collection[str] | None
"""Names of the links to show; None: all of them."""

FINDING_HEADS = ("Element", "check", "value", "limit", "unit", "use, %", "rpm", "case", "zone", "verdict")
SHORT_FINDING_HEADS = ("Element", "check", "value and limit", "use, %", "rpm", "case", "zone", "verdict")
PASSAGE_HEADS = ("Source", "mode", "rpm", "seconds", "cycles", "of the steady amplitude")
FINDING_WORDS = {"pass": "pass", "fail": "FAIL", "no limit given": "no limit"}


def sorted_findings(response: Response) -> list[Finding]:
    """Findings with the worst first: exceeded, then by use, those without a limit last."""

    def key(item: Finding) -> tuple[bool, bool, float]:
        return item.verdict != "fail", item.limit is None, -(item.use or 0.0)

    return sorted(response.findings, key=key)


def finding_rows(response: Response, links: Links = None) -> Rows:
    """(element, check, value, limit, unit, use, rpm, case, zone, verdict) of each finding, the worst first."""
    return [
        (
            item.element,
            item.check,
            *value_cells(response, item),
            finding_use(item).removesuffix(" %"),
            f"{item.at_speed_rpm:.0f}",
            item.case,
            item.zone,
            FINDING_WORDS[item.verdict],
        )
        for item in sorted_findings(response)
        if links is None or item.element in links
    ]


def short_finding_rows(response: Response) -> Rows:
    """The same for a page: value and limit share a cell with their unit."""
    return [
        (row[0], row[1], _of_limit(*row[2:5]), row[5], row[6], row[7], row[8], row[9]) for row in finding_rows(response)
    ]


def _of_limit(value: str, limit: str, unit: str) -> str:
    """ "512 of 900 N·m"."""
    return f"{value}{'' if limit == '–' else f' of {limit}'} {unit}".rstrip()


def passage_rows(response: Response) -> Rows:
    """(source, mode, rpm, seconds, cycles, share of the steady amplitude) of each resonance that is passed."""
    return [
        (
            item.source,
            f"{item.mode}",
            f"{item.at_rpm:.0f}",
            number(item.seconds, 3),
            number(item.cycles, 3),
            percent(item.peak_share),
        )
        for item in response.restrictions.passages
    ]


def tolerable_heads(response: Response) -> tuple[str, ...]:
    """Headings of `tolerable_rows`."""
    return (
        "Source",
        "at",
        f"least, ± {torque_unit(response)}",
        "of the mean torque",
        "at rpm",
        "limited by",
        "skip, rpm",
    )


def tolerable_rows(response: Response) -> Rows:
    """How large each source may be, and where the amplitude stated is too large."""
    rows: Rows = []
    for item in response.restrictions.tolerable:
        share = None
        if item.share is not None and item.at_rpm is not None:
            share = float(item.share[_place(response, item.at_rpm)])
        rows.append(
            (
                item.source,
                item.at,
                torque_number(response, item.least_nm, 3),
                "–" if share is None else percent(share),
                "–" if item.at_rpm is None or item.least_nm is None else f"{item.at_rpm:.0f}",
                "–" if item.link is None or item.least_nm is None else item.link,
                ", ".join(f"{low:.0f}–{high:.0f}" for low, high in item.skip_rpm) or "–",
            )
        )
    return rows


def _place(response: Response, rpm: float) -> int:
    return at_speed(response, rpm / RPM)


def gauge_heads(response: Response) -> tuple[str, ...]:
    """Headings of `gauge_rows`."""
    unit = torque_unit(response)
    return (
        "Mode",
        "Hz",
        "gauge at",
        f"µstrain per 1000 {unit}",
        f"expected ±, {unit}",
        "± µstrain",
        "there at",
        "encoder at",
        f"° per 1000 {unit}",
    )


def gauge_rows(response: Response) -> Rows:
    """Where to measure each mode and what to expect there."""
    per_nm = SHOWN[response.screening.train.units].per_nm
    return [
        (
            f"{item.mode}",
            hertz(item.frequency_hz),
            "–" if item.link is None else f"{item.link} ({shown_text(item.section, response.screening.train.units)})",
            _or_dash(item.strain_per_nm, 1e3 / per_nm),
            torque_number(response, item.torque_nm, 3),
            _or_dash(item.microstrain, 1.0),
            "–" if item.at_rpm is None or item.source is None else f"{item.at_rpm:.0f} rpm, {item.source}",
            item.encoder_at,
            _or_dash(item.encoder_deg_per_nm if carries(item) else None, 1e3 / per_nm),
        )
        for item in response.gauges
    ]


def _or_dash(value: float | None, factor: float) -> str:
    return "–" if value is None else number(value * factor, 3)
