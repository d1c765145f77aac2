"""The electrical side of machines and ties in words, for the data table."""

from __future__ import annotations

import math

from quillshaft.present.units import ShownUnits
from quillshaft.present.words import number
from quillshaft.train.model import Machine, Tie


def synchronizing_words(tie: Tie) -> str:
    """Where the stiffness of a tie comes from its machine's synchronizing power; else nothing."""
    given = tie.synchronizing
    if given is None:
        return ""
    per_degree = given.power_w_rad * math.pi / 180.0 / 1e3
    machine = f"{given.poles} poles, {given.supply_hz:g} Hz"
    return f": synchronizing power {number(per_degree)} kW per electrical degree, {machine}"


def electrical_words(machine: Machine, units: ShownUnits) -> list[str]:
    """What the file says of a machine's electrical side and of its load's slope, one text for each datum."""
    given, words = machine.electrical, []
    if given.pulse is not None:
        words.append(f"{given.pulse}-pulse converter")
    if given.harmonics is not None:
        words.append(f"harmonics up to {given.harmonics} of the output frequency")
    if given.switching_hz is not None:
        words.append(f"switching at {given.switching_hz:g} Hz")
    if given.interharmonics:
        pairs = ", ".join(f"{line} f line ± {out} f out" for line, out in given.interharmonics)
        words.append(f"interharmonics {pairs}")
    if given.control_bandwidth_hz is not None:
        words.append(f"control bandwidth {given.control_bandwidth_hz:g} Hz")
    if given.grid_resonance_hz is not None:
        words.append(f"network resonance at {given.grid_resonance_hz:g} Hz")
    if given.start is not None:
        words.append(f"start: {given.start}")
    words += _breakdown_words(machine, units)
    if machine.load_slope_nms_rad is not None:
        words.append(f"load slope {number(machine.load_slope_nms_rad * units.per_nm)} {units.torque}·s/rad")
    return words


def _breakdown_words(machine: Machine, units: ShownUnits) -> list[str]:
    given, words = machine.electrical, []
    if given.rated_torque_nm is not None:
        words.append(f"rated torque {number(given.rated_torque_nm * units.per_nm)} {units.torque}")
    if given.breakdown_torque_nm is not None:
        words.append(f"breakdown torque {number(given.breakdown_torque_nm * units.per_nm)} {units.torque}")
    if given.breakdown_share is not None:
        words.append(f"breakdown torque {number(given.breakdown_share * 100.0)} % of rated")
    if given.breakdown_slip is not None:
        words.append(f"breakdown slip {number(given.breakdown_slip * 100.0)} %")
    return words
