"""Ways out of interferences as sentences, rows and JSON: the same for terminal and report."""

from __future__ import annotations

from typing import Any

from quillshaft.assess.results import Screening
from quillshaft.present.fluid_words import BOTH_SIDES
from quillshaft.present.units import SHOWN
from quillshaft.present.words import VERDICT_WORDS, hertz, number
from quillshaft.study.lever_search import LARGEST_FACTOR
from quillshaft.study.levers import Lever, VerdictShift, WaysOut

LEVER_HEADS = ("Change", "from", "to", "factor", "mode then, Hz", "over tolerances, Hz", "what else it does")
"""Headings of `lever_rows`."""
MOST_NAMED = 3


def lever_rows(screening: Screening, ways: WaysOut) -> list[tuple[str, ...]]:
    """One row a lever, the smallest change first, in the units the file declares."""
    return [_row(screening, lever) for lever in ways.levers]


def _row(screening: Screening, lever: Lever) -> tuple[str, ...]:
    units = SHOWN[screening.train.units]
    factor, unit = (
        (units.per_nm_rad, units.stiffness) if lever.quantity == "stiffness" else (units.per_kgm2, units.inertia)
    )
    return (
        f"{lever.element} {lever.quantity}",
        f"{number(lever.from_value * factor)} {unit}",
        f"{number(lever.to_value * factor)} {unit}",
        f"× {number(lever.factor)}",
        hertz(lever.frequency_hz),
        f"{hertz(lever.bounds_hz[0])} – {hertz(lever.bounds_hz[1])}",
        effect_words(lever),
    )


def effect_words(lever: Lever) -> str:
    """What a lever does to the other pairs and to dismissals."""
    parts = []
    if lever.worsened:
        parts.append("worse: " + _named(lever.worsened))
    if lever.stale:
        parts.append("dismissal no longer applies: " + ", ".join(lever.stale))
    if lever.cleared:
        names = [f"mode {item.mode} and {item.source}" for item in lever.cleared[:MOST_NAMED]]
        more = len(lever.cleared) - MOST_NAMED
        parts.append("clears also " + ", ".join(names) + (f" and {more} more" if more > 0 else ""))
    if lever.harmless:
        parts.insert(0, "nothing else gets worse")
    return "; ".join(parts)


def _named(shifts: tuple[VerdictShift, ...]) -> str:
    words = [f"mode {item.mode} and {item.source} ({VERDICT_WORDS[item.after]})" for item in shifts[:MOST_NAMED]]
    return ", ".join(words) + (f" and {len(shifts) - MOST_NAMED} more" if len(shifts) > MOST_NAMED else "")


def lever_notes(screening: Screening, ways: WaysOut) -> list[str]:
    """What stands under the levers: what no lever does, and which elements cannot help."""
    lines = []
    wet = {f"stations.{item.name}" for item in screening.train.stations if item.entrained or item.referred_to}
    if any(lever.element in wet for lever in ways.levers):
        lines.append("Inertias are as they turn, entrained water included; the factor holds for the value as written.")
    reach = f"(stiffness within × {LARGEST_FACTOR['stiffness']:g}, inertia within × {LARGEST_FACTOR['inertia']:g})"
    if not ways.levers and ways.at_rated:
        lines.append("At rated speed no single stiffness or inertia was found that clears it.")
    elif not ways.levers:
        lines.append(f"No single stiffness or inertia clears it {reach}: change two, the speed range or the source.")
    elif not any(lever.harmless for lever in ways.levers):
        lines.append(f"Each of the {ways.tried} changes worked out makes something else worse, or does not clear it.")
    if ways.cannot_help:
        lines.append(
            "Cannot help, sensitivity below 1 % (a change of 1 % moves the mode less than 0.01 %): "
            f"{', '.join(ways.cannot_help)}."
        )
    if ways.not_alone:
        lines.append(f"Moves the mode, but clears nothing alone {reach}: {', '.join(ways.not_alone)}.")
    if ways.at_rated:
        lines.append("Frequencies follow speed here: the changes are worked out at rated speed; screen them again.")
    swinging = {f"dampers.{item.name}" for item in screening.train.dampers if item.kind == "pendulum"}
    if any(lever.element in swinging for lever in ways.levers):
        lines.append("A pendulum damper's stiffness stands for its order: the order changes by the root of the factor.")
    if screening.train.fluid_couplings:
        lines.append(BOTH_SIDES)
    return lines


def ways_title(screening: Screening, ways: WaysOut) -> str:
    """The interference that the levers are for."""
    return f"Ways out for mode {ways.mode} ({hertz(screening.mode(ways.mode).frequency_hz)} Hz) and {ways.source}"


def levers_data(found: tuple[WaysOut, ...]) -> list[dict[str, Any]]:
    """The levers as plain data, ready for JSON; values in N·m/rad and kg·m²."""
    return [
        {
            "source": ways.source,
            "mode": ways.mode,
            "ways": [_lever_data(lever) for lever in ways.levers],
            "cannot_help": list(ways.cannot_help),
            "not_alone": list(ways.not_alone),
            "at_rated_speed_only": ways.at_rated,
        }
        for ways in found
    ]


def _lever_data(lever: Lever) -> dict[str, Any]:
    return {
        "element": lever.element,
        "quantity": lever.quantity,
        "sensitivity": lever.sensitivity,
        "factor": lever.factor,
        "from": lever.from_value,
        "to": lever.to_value,
        "frequency_hz": lever.frequency_hz,
        "bounds_hz": list(lever.bounds_hz),
        "worsened": [_shift_data(item) for item in lever.worsened],
        "cleared": [_shift_data(item) for item in lever.cleared],
        "stale_dismissals": list(lever.stale),
    }


def _shift_data(item: VerdictShift) -> dict[str, Any]:
    return {"source": item.source, "mode": item.mode, "from": item.before, "to": item.after}
