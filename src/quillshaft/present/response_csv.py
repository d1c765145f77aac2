"""The forced response as CSV tables, SI units in the headings, six significant digits, blank where not known."""

from __future__ import annotations

from quillshaft.assess.response_results import CaseResponse, Response
from quillshaft.graph.network import Floats
from quillshaft.present.response_values import RPM
from quillshaft.present.results_csv import Cell, Rows, csv_text
from quillshaft.present.six_digits import numbers

RESPONSE_FILES = (
    "response-normal.csv",
    "response-alternating.csv",
    "response-mean.csv",
    "response-peak.csv",
    "response-findings.csv",
)


def response_csv(response: Response) -> dict[str, str]:
    """File name -> CSV text: the normal case in full, a table of each torque with a column a link, and the findings."""
    rows = (
        _normal(response),
        _by_link(response, [(case, case.alternating_torque_nm) for case in response.cases]),
        _by_link(response, [(case, case.mean_torque_nm) for case in response.cases]),
        _by_link(response, [(case, case.peak_torque_nm) for case in response.cases]),
        _findings(response),
    )
    return {name: csv_text(table) for name, table in zip(RESPONSE_FILES, rows, strict=True)}


def _normal(response: Response) -> Rows:
    """One row for each link and speed of the normal case."""
    head = ("link", "speed [rpm]", "mean torque [N m]", "alternating torque [N m]", "root sum square [N m]")
    rows: Rows = [(*head, "peak torque [N m]", "stress amplitude [MPa]", "twist [deg]", "heat [W]")]
    scales, case = {limit.link: limit.mpa_per_nm for limit in response.limits}, response.normal
    speeds = numbers(response.speed_rad_s * RPM)
    torques = (case.mean_torque_nm, case.alternating_torque_nm, case.root_sum_square_nm, case.peak_torque_nm)
    for place, link in enumerate(response.screening.graph.links):
        scale = scales.get(link.name)
        stress: list[Cell] = [None] * len(speeds)
        if scale is not None:
            stress = numbers(case.alternating_torque_nm[place] * scale)
        columns = [*(numbers(row[place]) for row in torques), stress]
        columns += [numbers(row[place]) for row in (case.twist_deg, case.heat_w)]
        rows += [(link.name, *values) for values in zip(speeds, *columns, strict=True)]
    return rows


def _by_link(response: Response, tables: list[tuple[CaseResponse, Floats]]) -> Rows:
    """One row for each case and speed, a column for each link [N m]."""
    names = [f"{link.name} [N m]" for link in response.screening.graph.links]
    rows: Rows = [("case", "judged", "speed [rpm]", *names)]
    speeds = numbers(response.speed_rad_s * RPM)
    for case, torque in tables:
        columns = [numbers(row) for row in torque]
        rows += [(case.name, case.judged, *values) for values in zip(speeds, *columns, strict=True)]
    return rows


def _findings(response: Response) -> Rows:
    head = ("element", "check", "value", "limit", "unit", "use [1]", "speed [rpm]", "case", "zone", "verdict", "basis")
    rows: Rows = [head]
    for item in response.findings:
        values = (item.value, item.limit, item.unit, item.use, item.at_speed_rpm)
        rows.append((item.element, item.check, *values, item.case, item.zone, item.verdict, item.basis))
    return rows
