"""What the file says of a machine's electrical side, as a frozen record."""

from __future__ import annotations

from typing import Literal

from quillshaft.records import dataclass


@dataclass(frozen=True)
class Electrical:
    """Electrical data of a machine; None or empty where the file is silent.

    pulse                 pulses of the converter's bridge per cycle (6, 12 or 24)
    harmonics             highest multiple of the output frequency screened
    switching_hz          carrier frequency of a pulse-width-modulated converter
    interharmonics        (a, b) pairs: |a · f_line ± b · f_out|
    control_bandwidth_hz  up to where the drive's control acts on the torque
    grid_resonance_hz     electrical resonance of the network seen by the machine
    start                 how a synchronous motor starts
    breakdown_torque_nm, breakdown_share   breakdown torque, or the same over rated torque
    """

    pulse: int | None = None
    harmonics: int | None = None
    switching_hz: float | None = None
    interharmonics: tuple[tuple[int, int], ...] = ()
    control_bandwidth_hz: float | None = None
    grid_resonance_hz: float | None = None
    start: Literal["asynchronous", "converter"] | None = None
    breakdown_torque_nm: float | None = None
    breakdown_share: float | None = None
    breakdown_slip: float | None = None
    rated_torque_nm: float | None = None


@dataclass(frozen=True)
class Synchronizing:
    """Synchronizing power [W per electrical rad] of a tie's machine, its poles and supply [Hz]."""

    power_w_rad: float
    poles: int
    supply_hz: float
