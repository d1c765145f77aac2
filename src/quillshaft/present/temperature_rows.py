"""The train with its couplings cold, at 30 °C and hot, side by side."""

from __future__ import annotations

import json
from typing import Any

from quillshaft.assess.results import Screening
from quillshaft.present.results_json import screening_data, to_json
from quillshaft.present.rows import link_rows
from quillshaft.present.words import case_verdict, hertz


def temperature_heads(states: dict[str, Screening]) -> tuple[str, ...]:
    """Headings of `temperature_rows`."""
    return ("Mode", *(f"{name}, Hz" for name in states), *(f"{name}, over tolerances" for name in states))


def temperature_rows(states: dict[str, Screening]) -> list[tuple[str, ...]]:
    """(mode, frequency in each state, range over the tolerances in each state) per mode."""
    first = next(iter(states.values()))
    rows = []
    for index, mode in enumerate(first.modes):
        own = [state.modes[index] for state in states.values()]
        spans = [f"{hertz(item.bounds_hz[0])} – {hertz(item.bounds_hz[1])}" for item in own]
        rows.append((f"{mode.mode}", *(hertz(item.frequency_hz) for item in own), *spans))
    return rows


def coupling_rows(states: dict[str, Screening]) -> list[tuple[str, ...]]:
    """(coupling, stiffness in each state) of the couplings that differ, at rated torque, in shown units."""
    tables = [{row[0]: row[3] for row in link_rows(state)} for state in states.values()]
    return [
        (name, *(table[name] for table in tables)) for name in tables[0] if len({table[name] for table in tables}) > 1
    ]


def temperature_lines(states: dict[str, Screening]) -> list[str]:
    """The verdict in each state, a sentence each."""
    return [f"Couplings {name}: {case_verdict(state)}" for name, state in states.items()]


def temperatures_json(screening: Screening, states: dict[str, Screening]) -> str:
    """The screening as JSON text with its states under "temperatures"."""
    data: dict[str, Any] = screening_data(screening)
    data["temperatures"] = {name: json.loads(to_json(screening_data(state))) for name, state in states.items()}
    return to_json(data)
