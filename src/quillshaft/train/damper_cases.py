"""Cases that every damper brings without being written: seized, lost, at half damping."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from quillshaft.train.document import Document

STATES = {
    "seized": "the ring or the masses of {name} turn with their station as one",
    "lost": "the ring or the masses of {name} are not there",
    "half-damping": "{name} with half of its damping",
}
DAMPING = ("viscous", "psi", "loss-factor")


def damper_case_names(data: dict[str, Any], name: str) -> tuple[str, ...]:
    """Names of the cases that a damper brings, "nose seized"; none at half damping where it states no damping."""
    row = data.get("dampers", {}).get(name, {})
    damped = isinstance(row, dict) and any(key in row for key in DAMPING)
    return tuple(f"{name} {state}" for state in STATES if damped or state != "half-damping")


def with_damper_cases(document: Document, names: tuple[str, ...]) -> Document:
    """The document with those of the named cases written out that its dampers bring; its own cases win."""
    dampers, cases = document.data.get("dampers"), document.data.get("cases", {})
    if not isinstance(dampers, dict) or not isinstance(cases, dict):
        return document
    made = {}
    for damper in dampers:
        for case in damper_case_names(document.data, damper):
            if case in names and case not in cases:
                state = case.removeprefix(f"{damper} ")
                because = STATES[state].format(name=damper)
                made[case] = {"because": because, "dampers": {damper: {"state": state}}}
    if not made:
        return document
    return replace(document, data={**document.data, "cases": {**cases, **made}})
