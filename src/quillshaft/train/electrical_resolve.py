"""Electrical rows into records: each default is listed as assumed."""

from __future__ import annotations

from typing import Any, Protocol

from quillshaft.train.electrical_model import Electrical, Synchronizing


class Listing(Protocol):
    """Where assumed values are listed."""

    def add(self, element: str, key: str, value: str, why: str) -> None:
        """List one assumed value."""


def electrical(row: Any, element: str, said: Listing) -> Electrical:
    """The electrical record of a machine's row, of whatever kind."""
    if row.kind == "converter-fed-motor":
        return _converter(row, element, said)
    start = getattr(row, "start", None)
    if row.kind == "synchronous-motor" and start is None:
        start = "asynchronous"
        why = "not given: it runs up on its damper winding, twice its slip frequency acts while it starts"
        said.add(element, "start", start, why)
    measure, value = getattr(row, "breakdown_torque", None) or (None, 0.0)
    return Electrical(
        grid_resonance_hz=getattr(row, "grid_resonance", None),
        start=start,
        breakdown_torque_nm=value if measure == "torque" else None,
        breakdown_share=value if measure == "share" else None,
        breakdown_slip=getattr(row, "breakdown_slip", None),
        rated_torque_nm=getattr(row, "rated_torque", None),
    )


def _converter(row: Any, element: str, said: Listing) -> Electrical:
    first = row.pulse or 6
    if row.harmonics is None:
        said.add(element, "harmonics", f"1, 2, {first} and {2 * first}", "of the output frequency: the set screened")
    elif row.pulse is None:
        said.add(element, "pulse", "6", "not given: harmonics at 6k of the output frequency")
    if first > 6:
        why = "of the output frequency: an unequal bridge leaves some 6th, which is not screened unless given"
        said.add(element, "harmonics", f"multiples of {first}", why)
    if row.switching is not None:
        value = "1·f_switch ± 3 and ± 9 f_out; 2·f_switch and ± 6 f_out"
        said.add(element, "sidebands", value, "the pairs screened; the drive's maker may name others")
    pairs = tuple((item.line, item.out) for item in row.interharmonics)
    return Electrical(row.pulse, row.harmonics, row.switching, pairs, row.control_bandwidth)


def synchronizing(row: Any, element: str, machines: dict[str, Any], said: Listing) -> Synchronizing | None:
    """The synchronizing power of a tie, with the poles and supply that it states or those of its station's machine.

    None where the tie gives a stiffness, or where poles or supply are missing (`tie_problem` says so).
    """
    if row.synchronizing is None:
        return None
    machine = _machine_at(row.at, machines)
    poles = row.poles or getattr(machine[1], "poles", None)
    supply = row.supply or getattr(machine[1], "supply", None)
    if poles is None or supply is None:
        return None
    taken = [] if row.poles else [f"{poles} poles"]
    taken += [] if row.supply else [f"{supply:g} Hz"]
    if taken:
        said.add(element, "poles, supply", " and ".join(taken), f"not given: those of machines.{machine[0]}")
    return Synchronizing(row.synchronizing, poles, supply)


def tie_problem(row: Any, machines: dict[str, Any]) -> str | None:
    """What a tie with synchronizing power lacks; None where nothing is missing."""
    if row.synchronizing is None:
        return None
    machine = _machine_at(row.at, machines)[1]
    keys = ("poles", "supply")
    missing = [key for key in keys if getattr(row, key) is None and getattr(machine, key, None) is None]
    if not missing:
        return None
    return f"synchronizing power needs {' and '.join(missing)}, and no machine at {row.at} gives them"


def _machine_at(station: str, machines: dict[str, Any]) -> tuple[str, Any]:
    synchronous = ("generator", "synchronous-motor")
    found = [item for item in machines.items() if item[1].kind in synchronous and item[1].at == station]
    return found[0] if found else ("", None)
