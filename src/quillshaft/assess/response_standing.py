"""Where a train stands after its forced response: the verdict, and what is behind it."""

from __future__ import annotations

import math

from quillshaft.assess.response_results import Closing, Finding, Response, ResponseVerdict
from quillshaft.assess.results import Interference
from quillshaft.records import dataclass

RPM = 30.0 / math.pi


@dataclass(frozen=True)
class Standing:
    """How a response ends.

    failed        findings above their limit, the worst first; `dead` those of them with a cylinder dead
    not_cleared   interferences that the response does not clear; not_judged: those it could not judge
    unclosed      interferences of the screening without a closing: open as well
    barred        True where barred speed ranges must be kept, declared by the file or found here
    rated_barred  True where rated speed itself lies in a range that would have to be barred
    low_idle      True where the stated idle lies below the lowest at which every continuous limit holds
    limited       True where at least one finding but mean torques has a limit
    """

    verdict: ResponseVerdict
    failed: tuple[Finding, ...]
    dead: tuple[Finding, ...]
    not_cleared: tuple[Closing, ...]
    not_judged: tuple[Closing, ...]
    unclosed: tuple[Interference, ...]
    barred: bool
    rated_barred: bool
    low_idle: bool
    limited: bool

    @property
    def settled(self) -> bool:
        """True where the train can be passed, with or without a restriction."""
        return self.verdict in ("pass", "restricted")

    @property
    def clean(self) -> bool:
        """True where nothing is left open and no limit is exceeded, with all cylinders or without one."""
        return self.settled and not self.failed


def standing(response: Response) -> Standing:
    """The response's own verdict; not judged too where an interference has no closing or only mean torques have a
    limit, restricted too where barred ranges must be kept or the idle raised; a fail where rated speed would be barred.
    """
    screening = response.screening
    closed = {(item.source, item.mode) for item in response.closings}
    unclosed = tuple(
        pair for pair in screening.not_clear() if pair.dismissed is None and (pair.source, pair.mode) not in closed
    )
    limited = any(item.limit is not None and item.check != "mean torque" for item in response.findings)
    barred = bool(response.restrictions.barred) or screening.gravest_verdict == "barred"
    low_idle, rated = idle_too_low(response), screening.train.operation.rated_rad_s * RPM
    rated_barred = any(span.from_rpm < rated < span.to_rpm for span in response.restrictions.barred)
    verdict = response.verdict
    if rated_barred:
        verdict = "fail"
    elif verdict in ("pass", "restricted") and (unclosed or not limited):
        verdict = "not judged"
    elif verdict == "pass" and (barred or low_idle):
        verdict = "restricted"
    return Standing(
        verdict,
        response.failures,
        tuple(item for item in response.failures if item.case_kind == "dead cylinder"),
        tuple(item for item in response.closings if item.status == "not cleared"),
        tuple(item for item in response.closings if item.status.startswith("not judged")),
        unclosed,
        barred,
        rated_barred,
        low_idle,
        limited,
    )


def idle_too_low(response: Response) -> bool:
    """True where the stated idle lies below the lowest at which every continuous limit holds, by 0.5 rpm and more."""
    idle, lowest = response.screening.train.operation.idle_rad_s, response.restrictions.lowest_idle_rpm
    return idle is not None and lowest is not None and idle * RPM < lowest - 0.5
