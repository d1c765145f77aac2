"""A drift in sentences and rows, shared by terminal, chart and report."""

from __future__ import annotations

import math

from quillshaft.assess.along import follows_speed
from quillshaft.present.fluid_words import BOTH_SIDES
from quillshaft.present.words import VERDICT_WORDS, hertz, number, plain
from quillshaft.study.drift import Drift, FirstInterference

MOST_ROWS = 11
MOST_MODES = 10
OFFSET_UNITS = ("degC", "degF", "°C", "°F", "C", "F")


def unit_text(unit: str) -> str:
    """A unit as it is printed: "kg m^2" as kg·m²."""
    return unit.replace("^2", "²").replace("^3", "³").replace(" ", "·")


def value_text(drift: Drift, value: float) -> str:
    """A value of the datum with its unit."""
    unit = unit_text(drift.unit)
    return f"{number(value, 4)} {unit}" if unit else number(value, 4)


def change_text(drift: Drift, value: float) -> str:
    """How far a value is from the start, in per cent; nothing where that says nothing."""
    start = float(drift.values[0])
    if start == 0 or drift.unit in OFFSET_UNITS:
        return ""
    change = abs(value - start) / abs(start) * 100.0
    if change == 0:
        return ""
    size = f"{change:.3g}" if change < 1000.0 else f"{change:.0f}"
    return f" ({size} % {'lost' if (value < start) == (start > 0) else 'more'})"


def _moves(drift: Drift, value: float) -> str:
    word = "falls" if drift.values[-1] < drift.values[0] else "rises"
    return f"{word} to {value_text(drift, value)}{change_text(drift, value)}"


def appearances(drift: Drift) -> list[tuple[FirstInterference, str]]:
    """What appears first for each mode and value, in order, with the names of all sources that do so together."""
    joined: dict[tuple[int, float, float | None], tuple[FirstInterference, list[str]]] = {}
    for item in drift.first:
        joined.setdefault((item.mode, item.at_value, item.meets_at), (item, []))[1].append(item.source)
    return [(item, " and ".join(names)) for item, names in joined.values()]


def first_sentence(drift: Drift, item: FirstInterference, sources: str) -> str:
    """Where an interference first appears."""
    when = f"when {drift.datum} {_moves(drift, item.at_value)}"
    if item.verdict != "close":
        barred = ", inside a barred range," if item.verdict == "barred" else ""
        return f"Mode {item.mode} meets {sources}{barred} {when}."
    text = f"Mode {item.mode} comes closer than {plain(item.required)} to {sources} {when}"
    if item.meets_at is not None:
        text += f", and meets it at {value_text(drift, item.meets_at)}{change_text(drift, item.meets_at)}"
    return f"{text}."


def start_sentences(drift: Drift) -> list[str]:
    """What is not clear before anything drifts: those that come to meet one by one, the others in one sentence."""
    meeting = [item for item in drift.at_start if item.verdict == "close" and item.meets_at is not None]
    lines = [
        f"Mode {item.mode} and {item.source}, too close at the start already, meet when {drift.datum} "
        f"{_moves(drift, item.meets_at)}."
        for item in meeting
        if item.meets_at is not None
    ]
    others = [f"mode {item.mode} and {item.source} ({VERDICT_WORDS[item.verdict]})" for item in drift.at_start]
    if others:
        lines.append(f"Not clear at the start already: {', '.join(others)}.")
    return lines


def drift_sentences(drift: Drift) -> list[str]:
    """The answer, one sentence each, in the order in which things happen."""
    ends = " to ".join(value_text(drift, float(value)) for value in (drift.values[0], drift.values[-1]))
    if not drift.moves:
        return [f"{drift.datum} from {ends}: no natural frequency and no source depends on it."]
    lines = [first_sentence(drift, *found) for found in appearances(drift)]
    if not lines:
        lines = [f"No interference appears while {drift.datum} goes from {ends}."]
    lines += start_sentences(drift)
    lines.append(
        "Judged at nominal values against criteria.separation, dismissals left out; modes are numbered by rising "
        "frequency at every value."
    )
    if drift.train.fluid_couplings:
        lines.append(BOTH_SIDES)
    if follows_speed(drift.train):
        lines.append(
            "Frequencies follow speed here: those listed stand at the mean torque of rated speed, nearness is judged "
            "at every speed of the range."
        )
    return lines


def listed_modes(drift: Drift) -> list[int]:
    """Positions of the modes in the table: at most ten, those of the first interferences before the lowest."""
    count = drift.frequency_hz.shape[1]
    wanted = [*(item.mode - 1 for item in drift.first), *range(count)]
    return sorted(list(dict.fromkeys(wanted))[:MOST_MODES])


def drift_rows(drift: Drift) -> list[tuple[str, ...]]:
    """(value, change, frequency of each listed mode in Hz) at no more than eleven values, both ends among them."""
    count = len(drift.values)
    some = min(MOST_ROWS, count)
    chosen = sorted({round(index * (count - 1) / (some - 1)) for index in range(some)})
    modes = listed_modes(drift)
    return [
        (
            number(float(drift.values[row]), 5),
            change_text(drift, float(drift.values[row])).strip(" ()"),
            *(hertz(value) if math.isfinite(value) else "–" for value in drift.frequency_hz[row, modes].tolist()),
        )
        for row in chosen
    ]


def drift_heads(drift: Drift) -> str:
    """Headings of `drift_rows`, as `make_table` takes them."""
    modes = (f"mode {mode + 1}>" for mode in listed_modes(drift))
    return "|".join((f"{unit_text(drift.unit) or 'value'}>", "change>", *modes))


def drift_table_title(drift: Drift) -> str:
    """What the table of `drift_rows` shows."""
    left_out = drift.frequency_hz.shape[1] - len(listed_modes(drift))
    more = f" ({left_out} more modes: --json)" if left_out else ""
    return f"Natural frequencies along {drift.datum}, Hz{more}"


def drift_title(drift: Drift) -> str:
    """The answer as the title of the chart."""
    if not drift.first:
        ends = " to ".join(value_text(drift, float(value)) for value in (drift.values[0], drift.values[-1]))
        return f"No interference appears while {drift.datum} goes from {ends}"
    found = appearances(drift)
    more = len(found) - 1
    also = f"; {more} more follow{'s' if more == 1 else ''}" if more else ""
    return first_sentence(drift, *found[0]).rstrip(".") + also
