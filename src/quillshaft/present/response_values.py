"""Values of the forced response as a person reads them: in the declared units, with use and place."""

from __future__ import annotations

import math

from quillshaft.assess.response_results import CaseResponse, Finding, Response
from quillshaft.graph.network import Floats
from quillshaft.present.units import SHOWN
from quillshaft.present.words import number

RPM = 30.0 / math.pi
PSI_PER_MPA = 1e6 / 6894.757293168361
SAME = {"N m": "N·m", "Nm": "N·m", "N/mm²": "MPa", "degC": "°C", "1": "", "-": "", "deg": "°"}
"""Other spellings of units that findings may carry."""


def torque_unit(response: Response) -> str:
    """N·m or lbf·in."""
    return SHOWN[response.screening.train.units].torque


def torque_number(response: Response, value_nm: float | None, digits: int = 4) -> str:
    """A torque without its unit; a dash where it is not known."""
    if value_nm is None or not math.isfinite(value_nm):
        return "–"
    return number(value_nm * SHOWN[response.screening.train.units].per_nm, digits)


def torque_text(response: Response, value_nm: float, digits: int = 4) -> str:
    """A torque with its unit."""
    return f"{torque_number(response, value_nm, digits)} {torque_unit(response)}"


def celsius_text(response: Response, kelvin: float) -> str:
    """A temperature in °C, or °F where the train is in US units."""
    value, unit = _shown(response, kelvin - 273.15, "°C")
    return f"{value:.0f} {unit}"


def value_cells(response: Response, finding: Finding) -> tuple[str, str, str]:
    """Value, limit and unit of a finding as shown."""
    value, unit = _shown(response, finding.value, finding.unit)
    limit = "–" if finding.limit is None else number(_shown(response, finding.limit, finding.unit)[0])
    return (number(value) if math.isfinite(value) else "without bound"), limit, unit


def _shown(response: Response, value: float, unit: str) -> tuple[float, str]:
    """A value and its unit as the train declares: torque, stress and temperature follow, heat stays in W."""
    unit = SAME.get(unit, unit)
    units = SHOWN[response.screening.train.units]
    if unit == "N·m":
        return value * units.per_nm, units.torque
    if units.torque != "N·m" and unit == "MPa":
        return value * PSI_PER_MPA, "psi"
    if units.torque != "N·m" and unit == "°C":
        return value * 1.8 + 32.0, "°F"
    return value, unit


def use_text(use: float | None) -> str:
    """Use of a limit in per cent, with decimals only beside 100 %; a dash without a limit."""
    if use is None:
        return "–"
    if not math.isfinite(use):
        return "without bound"
    value = use * 100.0
    if 99.0 < value < 101.0:
        return f"{number(value, 5 if value > 100.0 else 4)} %"
    return f"{value:.0f} %" if value >= 10.0 else f"{number(value, 2)} %"


def finding_use(finding: Finding) -> str:
    """Use of a finding's limit; of a limit of nothing at all, that it is exceeded or kept."""
    if finding.limit is not None and finding.limit <= 0:
        return "exceeded" if finding.verdict == "fail" else "kept"
    return use_text(finding.use)


def finding_text(response: Response, finding: Finding) -> str:
    """ "ring, vibratory torque: 512 of 900 N·m (57 %) at 640 rpm in continuous running, case …"."""
    value, limit, unit = value_cells(response, finding)
    unit = f" {unit}" if unit else ""
    size = f"{value}{unit}, no limit given," if finding.limit is None else f"{value} of {limit}{unit} ({_use(finding)})"
    zone = "in continuous running" if finding.zone == "continuous" else "in passing"
    return f"{finding.element}, {finding.check}: {size} at {finding.at_speed_rpm:.0f} rpm {zone}, case {finding.case}"


def _use(finding: Finding) -> str:
    text = finding_use(finding)
    return text if text in ("exceeded", "kept", "without bound") else f"{text} of the limit"


def at_speed(response: Response, rad_s: float) -> int:
    """Number of the calculated speed nearest to a speed [rad/s]."""
    gaps = [abs(speed - rad_s) for speed in response.speed_rad_s.tolist()]
    return gaps.index(min(gaps))


def rated_place(response: Response) -> int:
    """Number of the calculated speed nearest rated speed."""
    return at_speed(response, response.screening.train.operation.rated_rad_s)


def rpm_at(response: Response, place: int) -> float:
    """A calculated speed [rpm]."""
    return float(response.speed_rad_s[place]) * RPM


def largest(rows: Floats) -> tuple[int, float]:
    """Place and size of the largest finite value of (S,); (0, nan) without any."""
    values = [value if math.isfinite(value) else -math.inf for value in rows.tolist()]
    top = max(values)
    return (values.index(top), top) if math.isfinite(top) else (0, math.nan)


def dead_cases(response: Response) -> list[CaseResponse]:
    """The judged cases with a dead or unloaded cylinder."""
    return [case for case in response.cases if case.kind == "dead cylinder" and case.judged]


def calm_case(response: Response) -> CaseResponse | None:
    """The case of high damping, where there is one."""
    return next((case for case in response.cases if case.kind == "high damping"), None)
