"""What the charts of torque against its limits say: of several links together, and of each."""

from __future__ import annotations

import math
from collections.abc import Sequence

from quillshaft.assess.response_results import Response
from quillshaft.present.charts.phrases import capital, count, link_words, listed
from quillshaft.present.charts.response_common import (
    Use,
    above_limit,
    largest,
    share_text,
    span_text,
    torque_text,
    uses,
    where,
)


def torque_title(response: Response, links: Sequence[str]) -> str:
    """Which links exceed their limits, or which comes nearest; of one link all that is to be said."""
    if len(links) == 1:
        return capital(panel_text(response, links[0]))
    ranked = sorted(
        ((link, found[0]) for link in links if (found := uses(response, link))), key=lambda it: -it[1].share
    )
    if not ranked:
        most = max(links, key=lambda link: largest(response, link)[0])
        torque, rpm, case = largest(response, most)
        text = f"{most} carries the most, {torque_text(response, torque)} {where(response, rpm, case)}"
        return f"No limit is given for {listed(list(links))}; {text if torque > 0 else 'none swings'}"
    over = [link for link, use in ranked if use.share > 1.0]
    under = [link for link, use in ranked if use.share <= 1.0]
    first, use = ranked[0]
    at = where(response, use.rpm, use.case)
    if len(over) > 1:
        tail = f"; {_below(under)}" if under else ""
        links_text = capital(count(len(over), "link"))
        return f"{links_text} exceed their limits: {first} the most, {at}, then {listed(over[1:])}{tail}"
    if over:
        name = capital(link_words(response.screening, response.screening.graph.link(first)))
        return f"{name} exceeds its limit, worst {at}" + (f"; {_below(under)}" if under else "")
    if use.share <= 0.0:
        return f"No alternating torque passes {listed(list(links))}"
    near = f"{share_text(use.share)} {at}"
    if len(under) == 1:
        return f"Of {listed(list(links))} only {first} has a limit and stays below it, at most {near}"
    return f"{capital(count(len(under), 'link'))} stay below their limits; {first} comes nearest, {near}"


def _below(links: Sequence[str]) -> str:
    if len(links) == 1:
        return f"{links[0]} stays below its limit"
    return f"{listed(list(links))} stay below theirs"


def panel_text(response: Response, link: str) -> str:
    """What one panel answers: where the link is above its limit, or how near it comes."""
    graph = response.screening.graph.link(link)
    name = link_words(response.screening, graph)
    torque, rpm, case = largest(response, link)
    found = uses(response, link)
    if torque <= 0.0:
        return f"{name} carries no alternating torque"
    if not found:
        return f"{name}: no limit given; at most {torque_text(response, torque)} {where(response, rpm, case)}"
    if found[0].share <= 1.0:
        return f"{name}: at most {_use_text(response, found[0])}"
    spans = [span_text(span) for span in above_limit(response, link)]
    return f"{name}: above its limit at {listed(spans, 4)} rpm, worst {_use_text(response, found[0])}"


def _use_text(response: Response, use: Use) -> str:
    zone = "continuous" if use.continuous else "passing"
    if math.isinf(use.share):
        torque = torque_text(response, use.torque_nm)
        return f"{torque} where nothing is permitted, {where(response, use.rpm, use.case)}"
    return f"{share_text(use.share)} of the {zone} limit {where(response, use.rpm, use.case)}"
