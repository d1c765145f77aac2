"""What a file says of the cylinders of an engine or a reciprocating compressor, in SI."""

from __future__ import annotations

from dataclasses import field

from quillshaft.records import dataclass


@dataclass(frozen=True)
class PressureCard:
    """An indicator card over one working cycle: crank angle [rad], rising, from below 2π·turns, and pressure [Pa].

    Absolute pressure, or over the ambient where `gauge`. The first point is not repeated at the end.
    """

    name: str
    angle_rad: tuple[float, ...] = field(repr=False)
    pressure_pa: tuple[float, ...] = field(repr=False)
    cycle_rad: float = 12.566370614359172
    gauge: bool = False


@dataclass(frozen=True)
class PressureOrders:
    """Harmonics of the tangential pressure on the piston area: (order, cosine [Pa], sine [Pa]); of a dead cylinder."""

    name: str
    rows: tuple[tuple[float, float, float], ...]
    dead: tuple[tuple[float, float, float], ...] = ()


@dataclass(frozen=True)
class SimpleCycle:
    """A limited-pressure cycle by its three numbers [-, Pa, Pa]; `intake_pa` absolute, None where not given."""

    compression_ratio: float
    imep_pa: float
    peak_pa: float
    intake_pa: float | None = None


@dataclass(frozen=True)
class EngineGas:
    """What presses on an engine's pistons: one of card, orders and cycle; `dead_card` of a cylinder not fired."""

    card: PressureCard | None = None
    dead_card: PressureCard | None = None
    orders: PressureOrders | None = None
    cycle: SimpleCycle | None = None


@dataclass(frozen=True)
class CompressorEnd:
    """One side of a compressor's piston: a card, or clearance [-] and absolute pressures [Pa] of the ideal card."""

    card: PressureCard | None = None
    clearance: float = 0.0
    suction_pa: float = 0.0
    discharge_pa: float = 0.0
    exponent: float = 1.4


@dataclass(frozen=True)
class Cylinder:
    """One cylinder: the station of its throw and its firing angle [rad of crank turn].

    fires_at_rad     crank angle of its firing dead centre; of a compressor, of its outer dead centre
    bank_rad         angle of its bank in a vee; None where not given
    dead             fires not, or of a compressor, is unloaded
    piston_rod_m     diameter of a compressor's piston rod, 0 for none
    """

    at: str
    fires_at_rad: float
    bank_rad: float | None = None
    dead: bool = False
    bore_m: float | None = None
    reciprocating_kg: float | None = None
    piston_rod_m: float = 0.0
    head_end: CompressorEnd | None = None
    crank_end: CompressorEnd | None = None
