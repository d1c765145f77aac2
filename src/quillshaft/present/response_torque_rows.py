"""Rows of the torques of a forced response: by link, by source, and with low and high damping."""

from __future__ import annotations

import math

from quillshaft.assess.response_results import CaseResponse, Response
from quillshaft.present.response_rows import Links, Rows
from quillshaft.present.response_values import (
    calm_case,
    dead_cases,
    largest,
    rated_place,
    rpm_at,
    torque_number,
    torque_unit,
)
from quillshaft.present.words import percent

LEADING = 4


def torque_heads(response: Response) -> tuple[str, ...]:
    """Headings of `rated_torque_rows` and `largest_torque_rows`."""
    unit = torque_unit(response)
    return ("Link", "case", "rpm", f"mean, {unit}", f"alternating ±, {unit}", "± by squares", "peak")


def _shown_links(response: Response, links: Links) -> list[tuple[int, str]]:
    """Place and name of the links to show that carry any torque."""
    return [
        (place, link.name)
        for place, link in enumerate(response.screening.graph.links)
        if (links is None or link.name in links)
        and any(largest(case.alternating_torque_nm[place])[1] > 0 for case in response.cases)
    ]


def _torque_row(response: Response, name: str, link: int, case: CaseResponse, at: int) -> tuple[str, ...]:
    rows = (case.mean_torque_nm, case.alternating_torque_nm, case.root_sum_square_nm, case.peak_torque_nm)
    cells = [torque_number(response, float(row[link][at])) for row in rows]
    return (name, case.name, f"{rpm_at(response, at):.0f}", *cells)


def rated_torque_rows(response: Response, links: Links = None) -> Rows:
    """Torques of each link at rated speed: the normal case, and the dead cylinder that is worst for it there."""
    at, dead, rows = rated_place(response), dead_cases(response), []
    for link, name in _shown_links(response, links):
        rows.append(_torque_row(response, name, link, response.normal, at))
        if dead:
            swings = [_or_zero(case.alternating_torque_nm[link][at]) for case in dead]
            rows.append(_torque_row(response, "", link, dead[swings.index(max(swings))], at))
    return rows


def largest_torque_rows(response: Response, links: Links = None) -> Rows:
    """Torques of each link where the alternating one is largest: normal, worst dead cylinder, worse other case."""
    rows = []
    others = [case for case in response.cases[1:] if case.judged and case.kind != "dead cylinder"]
    for link, name in _shown_links(response, links):
        at, top = largest(response.normal.alternating_torque_nm[link])
        rows.append(_torque_row(response, name, link, response.normal, at))
        for cases in (dead_cases(response), others):
            tops = [(*largest(case.alternating_torque_nm[link]), case) for case in cases]
            at, size, case = max(tops, key=lambda item: _or_zero(item[1]), default=(0, 0.0, response.normal))
            if size > top or (tops and cases is not others):
                rows.append(_torque_row(response, "", link, case, at))
    return rows


def _or_zero(value: float) -> float:
    return float(value) if math.isfinite(value) else 0.0


def order_heads(response: Response) -> tuple[str, ...]:
    """Headings of `order_rows`."""
    places = ("largest", "second", "third", "fourth")
    unit = torque_unit(response)
    return (
        "Link",
        *(f"{word}, {unit}" if word == "largest" else word for word in places[:LEADING]),
        "the others, summed",
    )


def order_rows(response: Response, links: Links = None) -> Rows:
    """(link, leading lines with their amplitudes, the others) at rated speed in the normal case."""
    at, rows = rated_place(response), []
    for link, name in _shown_links(response, links):
        found = sorted(((_or_zero(share.torque_nm[link][at]), share.source) for share in response.shares), reverse=True)
        cells = [f"{source} {torque_number(response, value, 3)}" for value, source in found[:LEADING] if value > 0]
        rest = sum(value for value, _ in found[LEADING:])
        cells += ["–"] * (LEADING - len(cells))
        rows.append((name, *cells, torque_number(response, rest, 3)))
    return rows


def spread_heads(response: Response) -> tuple[str, ...]:
    """Headings of `spread_rows`."""
    unit = torque_unit(response)
    return ("Link", f"low damping ±, {unit}", "at rpm", f"high damping ±, {unit}", "at rpm", "high over low")


def spread_rows(response: Response, links: Links = None) -> Rows:
    """(link, largest alternating torque with low damping, with high damping, their ratio)."""
    calm = calm_case(response)
    if calm is None:
        return []
    rows = []
    for link, name in _shown_links(response, links):
        cells: list[str] = []
        for case in (response.normal, calm):
            at, top = largest(case.alternating_torque_nm[link])
            cells += [torque_number(response, top), f"{rpm_at(response, at):.0f}"]
        rows.append((name, *cells, percent(spread_of(response.normal, calm, link))))
    return rows


def spread_of(normal: CaseResponse, calm: CaseResponse, link: int) -> float:
    """Largest alternating torque of a link with high damping over that with low damping."""
    low, high = (largest(case.alternating_torque_nm[link])[1] for case in (normal, calm))
    return high / low if low > 0 else math.nan


def spread_shares(response: Response) -> list[tuple[str, float]]:
    """(link, largest alternating torque with high damping over that with low damping)."""
    calm = calm_case(response)
    if calm is None:
        return []
    found = [(name, spread_of(response.normal, calm, link)) for link, name in _shown_links(response, None)]
    return [(name, share) for name, share in found if math.isfinite(share)]
