"""The frequency bands that sources close to natural frequencies, and which sources a question is about."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from quillshaft.assess.results import Screening
from quillshaft.assess.separation import kept_free, required_separation
from quillshaft.sources.line import Source, frequencies_over
from quillshaft.train.basic_model import Range
from quillshaft.train.problems import did_you_mean

Orders = Literal["major", "all"]


class AskError(ValueError):
    """A question that cannot be answered as it is asked: what was asked, and what may be."""


@dataclass(frozen=True)
class Band:
    """What one source closes to nominal natural frequencies, low to high [Hz], open at both ends.

    worst_hz is the same for natural frequencies over all tolerances, by their own required separation.
    """

    source: str
    nominal_hz: Range
    worst_hz: Range


def sources_asked(
    screening: Screening, names: Sequence[str] | None = None, orders: Orders = "all"
) -> tuple[Source, ...]:
    """The continuous sources in file order, only those named if `names` is given, minor engine orders if wanted.

    Raises AskError when a name is not that of a continuous source or `orders` is neither word.
    """
    if orders not in ("major", "all"):
        raise AskError(f"orders {orders}: this is neither major nor all")
    judged = [source for source in screening.sources if source.when == "continuous"]
    for name in names or ():
        if not any(source.answers_to(name) for source in judged):
            raise AskError(_why_not_judged(screening, judged, name))
    return tuple(
        source
        for source in judged
        if (names is None or any(source.answers_to(name) for name in names))
        and (orders == "all" or source.major is not False)
    )


def _why_not_judged(screening: Screening, judged: Sequence[Source], name: str) -> str:
    if any(source.answers_to(name) for source in screening.sources):
        return f"source {name}: it acts only at a start or a fault and is not judged"
    for source, why in screening.sources_off:
        if source.answers_to(name):
            return f"source {name}: it is switched off ({why})"
    hint = did_you_mean(name, [origin for source in judged for origin in source.origins]) or "."
    return f"source {name}: there is none of this name{hint} `quillshaft check` lists them."


def source_bands(screening: Screening, sources: Sequence[Source], ranges_rad_s: Sequence[Range]) -> tuple[Band, ...]:
    """One band for each source and each range of speed [rad/s]; barred stretches are not cut out.

    Margin on the source: lowest f·(1 − m) to highest f·(1 + m); on the natural frequency: f/(1 + m) to
    f/(1 − m); m is the required separation (the margins of assess.separation, solved for the frequency).
    """
    criteria, bands = screening.train.criteria, []
    one = criteria.separation == criteria.worst_case
    for source in sources:
        share = required_separation(source, criteria.separation)
        shares = (share, share if one else required_separation(source, criteria.worst_case))
        for low, high in ranges_rad_s:
            reach = frequencies_over(source, low, high)
            nominal, worst = (kept_free(reach, share, criteria.margin_on) for share in shares)
            bands.append(Band(source.name, nominal, worst))
    return tuple(dict.fromkeys(bands))
