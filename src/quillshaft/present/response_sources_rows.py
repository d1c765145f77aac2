"""Amplitudes, groups, limits and cases that a forced response rests on, as rows with where they come from."""

from __future__ import annotations

import math

from quillshaft.assess.response_results import Response
from quillshaft.present.response_values import torque_text
from quillshaft.present.shown_text import shown_text
from quillshaft.present.words import number, plain, source_line
from quillshaft.sources.line import Source
from quillshaft.train.model import Machine

AMPLITUDE_HEADS = ("Source", "at", "line", "amplitude", "where from")
LIMIT_HEADS = ("Link", "limit from")
CASE_HEADS = ("Case", "what differs", "in the verdict")
GROUP_HEADS = ("Locked in phase", "sources")
MOST_NAMES = 12


def amplitude_rows(response: Response) -> list[tuple[str, ...]]:
    """One row for each machine's orders and for every other source, in the order they appear."""
    screening = response.screening
    rows: dict[str, tuple[str, ...]] = {}
    for share in response.shares:
        source = screening.source(share.source)
        machine = _machine_of(response, source)
        if machine is None:
            rows[source.name] = (source.name, source.at, source_line(source), *_size(response, source))
        elif machine.name not in rows:
            count = sum(_machine_of(response, screening.source(item.source)) is machine for item in response.shares)
            size = ("by order, cylinder by cylinder", _gas_words(machine))
            rows[machine.name] = (f"{machine.name}, {count} orders", "its cylinders", "orders of its cycle", *size)
    return list(rows.values())


def _machine_of(response: Response, source: Source) -> Machine | None:
    """The reciprocating machine whose cylinders make an order."""
    for machine in response.screening.train.machines:
        if machine.cylinders and source.name.startswith(f"{machine.name} order"):
            return machine
    return None


def _gas_words(machine: Machine) -> str:
    mass = any(cylinder.reciprocating_kg for cylinder in machine.cylinders)
    return "gas torque" + (" and reciprocating mass" if mass else "") + f" of {machine.name}, as the file states them"


def _size(response: Response, source: Source) -> tuple[str, str]:
    """Amplitude in words, and who says so."""
    train = response.screening.train
    for amplitude in train.amplitudes:
        if source.answers_to(amplitude.source):
            why = "stated under [amplitudes]" + (f": {amplitude.note}" if amplitude.note else "")
            return _of(response, amplitude.torque_nm, amplitude.torque_share), why
    for excitation in train.excitations:
        if excitation.name in source.origins and (excitation.torque_nm or excitation.torque_share):
            note = excitation.provenance.source
            why = "stated under [excitations]" + (f": {note}" if note else "")
            return _of(response, excitation.torque_nm, excitation.torque_share), why
    for item in response.assumed:
        if item.element == source.name and item.key == "amplitude":
            return shown_text(item.value, train.units), shown_text(item.why, train.units)
    return shown_text(source.torque or "as the element makes it", train.units), "worked out from the element"


def _of(response: Response, torque_nm: float | None, share: float | None) -> str:
    if torque_nm is not None:
        return f"±{torque_text(response, abs(torque_nm))}"
    return f"±{plain(share or 0.0)} of the mean torque there"


def limit_rows(response: Response) -> list[tuple[str, ...]]:
    """(link, rule, section and figures) of every link's limit."""
    units = response.screening.train.units
    return [(item.link, shown_text(item.basis, units)) for item in response.limits]


def case_rows(response: Response) -> list[tuple[str, ...]]:
    """(case, what differs, whether it is part of the verdict)."""
    return [
        (case.name, case.note or "as the file states it", "judged" if case.judged else "shown beside it")
        for case in response.cases
    ]


def group_rows(response: Response) -> list[tuple[str, ...]]:
    """(group, its sources) as they are combined."""
    rows: list[tuple[str, ...]] = []
    for name, sources in response.groups:
        if len(sources) < 2:
            continue
        shown = ", ".join(sources[:MOST_NAMES])
        more = len(sources) - MOST_NAMES
        rows.append((name, shown + (f" and {more} more" if more > 0 else "")))
    return rows


def speed_words(response: Response) -> str:
    """How many speeds were worked out, from where to where."""
    speeds = response.speed_rad_s * 30.0 / math.pi
    return f"{len(speeds)} speeds from {number(float(speeds[0]), 3)} to {number(float(speeds[-1]), 4)} rpm"
