"""A tolerance study in sentences and rows, shared by terminal, chart and report."""

from __future__ import annotations

from quillshaft.present.rows import tolerance_words
from quillshaft.present.words import VERDICT_WORDS, hertz, plain
from quillshaft.study.drivers import Driver
from quillshaft.study.spread import Distribution
from quillshaft.study.tolerance_results import Chance, PairChance, ToleranceStudy

DISTRIBUTION_WORDS: dict[Distribution, str] = {
    "uniform": "every value within a tolerance is equally likely",
    "triangular": "the nominal value is the most likely, falling evenly to nothing at the tolerances",
    "normal": "normal, a tolerance being two standard deviations, cut off at the tolerances",
}
MOST_DRIVERS = 6


def share_text(share: float) -> str:
    """A probability in per cent, with the digits it deserves."""
    value = share * 100.0
    if value in (0.0, 100.0):
        return f"{value:.0f} %"
    return f"{value:.2f} %" if min(value, 100.0 - value) < 10.0 else f"{value:.1f} %"


def chance_text(chance: Chance, samples: int) -> str:
    """A probability with its sampling error, or that the bounds alone decide it."""
    if chance.certain is not None:
        return f"{chance.certain}, by the bounds"
    if chance.count in (0, samples):
        far = "below" if chance.count == 0 else "above"
        edge = chance.interval[1] if chance.count == 0 else chance.interval[0]
        return f"{chance.count} of {samples} ({far} {share_text(edge)}, 95 % confidence)"
    return f"{share_text(chance.probability)} ± {chance.standard_error * 100:.2g} %"


def study_sentences(study: ToleranceStudy) -> list[str]:
    """The answer, how it was found, and what to know about the bounds and the groups."""
    chance = study.any_not_clear
    dismissed = any(item.pair.dismissed is not None for item in study.at_risk())
    apart = ", apart from what is dismissed by name" if dismissed else ""
    if chance.certain == "never":
        answer = f"Every judged pair stays clear throughout the tolerances{apart}."
    elif chance.certain == "always":
        answer = f"Some pair is not clear whatever the tolerances{apart}."
    else:
        answer = f"Chance that some pair is not clear{apart}: {chance_text(chance, study.samples)}."
    lines = [
        answer,
        f"{study.samples} samples, seed {study.seed}; {study.distribution}: {DISTRIBUTION_WORDS[study.distribution]}. "
        "± is the standard error of sampling.",
        "Judged against the separation required over the tolerances (criteria.worst-case-separation).",
        f"Bounds are {study.bounds}: {study.bounds_because}.",
    ]
    lines += [
        f"Group {group} is named by one element only: nothing moves together with it." for group in study.lone_groups
    ]
    if any(mode.frequency_along is not None for mode in study.screening.modes):
        lines.append(
            "Frequencies follow speed here: those listed stand at the mean torque of rated speed, and a variant is "
            "judged with its frequency changing along the speed in the same ratio as the nominal one."
        )
    if not any(item.varies for item in study.inputs):
        lines.append("No element has a tolerance: every sample is the nominal train.")
    return lines


def mode_rows(study: ToleranceStudy) -> list[tuple[str, ...]]:
    """(mode, nominal, bounds, 5 % point, 95 % point) of every mode [Hz]."""
    return [
        (
            f"{mode.mode}",
            hertz(mode.nominal_hz),
            f"{hertz(mode.low_hz)} – {hertz(mode.high_hz)}",
            hertz(mode.p05_hz),
            hertz(mode.p95_hz),
        )
        for mode in study.modes
    ]


def pair_rows(study: ToleranceStudy) -> list[tuple[str, ...]]:
    """(mode, source, required, nominal verdict, worst verdict, chance not clear, chance that they meet)."""
    return [_pair_row(study, item) for item in study.at_risk()]


def _pair_row(study: ToleranceStudy, item: PairChance) -> tuple[str, ...]:
    pair = item.pair
    return (
        f"{pair.mode}",
        pair.source,
        plain(pair.worst_required),
        VERDICT_WORDS[pair.verdict],
        VERDICT_WORDS[pair.worst_verdict] + (" (dismissed)" if pair.dismissed else ""),
        chance_text(item.not_clear, study.samples),
        chance_text(item.meets, study.samples),
    )


def driver_rows(study: ToleranceStudy, mode: int) -> list[tuple[str, ...]]:
    """(element, quantity, tolerance, effect of +1 %, share of the variance) of what moves a mode most."""
    first = next(driver.source for driver in study.drivers if driver.mode == mode)
    found = [driver for driver in study.drivers if driver.mode == mode and driver.source == first]
    return [
        (
            _element_text(driver),
            driver.quantity,
            _tolerance_text(study, driver),
            f"{driver.sensitivity:+.3f} %".replace("-", "−"),
            f"{driver.share * 100:.1f} %",
        )
        for driver in found[:MOST_DRIVERS]
    ]


def _element_text(driver: Driver) -> str:
    text = driver.element
    if driver.station is not None and not driver.element.startswith("stations."):
        text += f" at {driver.station}"
    return text if driver.group is None else f"{text} (group {driver.group})"


def _tolerance_text(study: ToleranceStudy, driver: Driver) -> str:
    names = driver.element.split(" + ")
    found = {
        item.tolerance
        for item in study.inputs
        if item.element in names and item.quantity in driver.quantity and driver.station in (None, item.station)
    }
    if len(found) > 1:
        return "several"
    tolerance = found.pop()
    return "none" if tolerance == (0.0, 0.0) else tolerance_words(tolerance)


def driven_modes(study: ToleranceStudy) -> list[tuple[int, str]]:
    """(mode, its sources in words) of every mode whose drivers are listed."""
    sources: dict[int, dict[str, None]] = {}
    for driver in study.drivers:
        sources.setdefault(driver.mode, {})[driver.source] = None
    return [(mode, ", ".join(names)) for mode, names in sorted(sources.items())]


def risk_title(study: ToleranceStudy) -> str:
    """The answer as the title of the chart."""
    risky = [item for item in study.at_risk() if item.pair.dismissed is None]
    if not risky:
        apart = " (apart from what is dismissed)" if study.at_risk() else ""
        return f"Every judged mode stays clear of every source throughout the tolerances{apart}"
    worst = risky[0]
    often = share_text(worst.not_clear.probability)
    often = "all" if worst.not_clear.certain == "always" else f"{often} of the"
    if worst.not_clear.count == 0:
        often = "none of the sampled"
    more = len(risky) - 1
    also = f"; {more} more pair{'s' if more > 1 else ''} may be not clear" if more else ""
    return (
        f"Mode {worst.pair.mode} is not clear of {worst.pair.source} in {often} trains that the tolerances allow{also}"
    )
