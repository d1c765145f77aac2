"""What electrical machines, converters and the network put on the shaft, as lines |order · N + frequency|.

Every line is (tail of the source's name, order per turn of the machine, constant frequency [Hz], relative band of that
frequency). The output frequency of a converter is f_out = pole pairs · N + slip, N in rev/s.
"""

from __future__ import annotations

from quillshaft.train.model import Machine

Line = tuple[str, float, float, float]

SIDEBANDS = ((1, (3, 9)), (2, (0, 6)))
"""(multiple of the switching frequency, multiples of the output frequency about it) that act as torque in naturally
or regularly sampled three-phase modulation (common practice: m = 1 with n = 3, 9; m = 2 with n = 0, 6)."""


def harmonic_multiples(pulse: int, highest: int) -> tuple[int, ...]:
    """Multiples of the output frequency in the torque of a converter: 1, 2, and k · pulse up to `highest`.

    1 is a DC offset of the current and 2 an unbalance of the phases, k · pulse is the ripple of the bridge. Source:
    common practice (6k for six-pulse and 12k for twelve-pulse converters; IEEE and ASME papers on converter-fed
    drives, from memory).
    """
    return (1, 2, *range(pulse, highest + 1, pulse))


def converter_lines(machine: Machine, supply_band: float) -> list[Line]:
    """Harmonics, sidebands of the carrier, and interharmonics of the line side of a converter-fed motor."""
    given = machine.electrical
    pairs, slip = (machine.poles or 0) / 2.0, machine.slip_hz
    pulse = given.pulse or 6
    multiples = harmonic_multiples(pulse, given.harmonics or 2 * pulse)
    lines: list[Line] = [(f"out-{k}x", k * pairs, k * slip, 0.0) for k in multiples]
    if given.switching_hz is not None:
        lines += sideband_lines(given.switching_hz, pairs, slip)
    for line, out in given.interharmonics:
        lines += interharmonic_lines(line, out, machine.supply_hz or 0.0, pairs, slip, supply_band)
    return lines


def sideband_lines(switching_hz: float, pairs: float, slip_hz: float) -> list[Line]:
    """|m f_switch ± n f_out| for the pairs of SIDEBANDS (common practice)."""
    lines: list[Line] = []
    for m, multiples in SIDEBANDS:
        for n in multiples:
            for sign, mark in ((1, "+"), (-1, "-")) if n else ((1, ""),):
                tail = f"switch-{m}x{mark}out-{n}x" if n else f"switch-{m}x"
                lines.append((tail, sign * n * pairs, m * switching_hz + sign * n * slip_hz, 0.0))
    return lines


def interharmonic_lines(
    line: int, out: int, supply_hz: float, pairs: float, slip_hz: float, supply_band: float
) -> list[Line]:
    """|a f_line ± b f_out|: beats of the line-side ripple through the DC link of a current-source drive.

    Source: common practice; ordinary pairs are multiples of 6 on both sides. The band is the supply's, over the
    constant part of the frequency.
    """
    lines: list[Line] = []
    for sign, mark in ((1, "+"), (-1, "-")) if line and out else ((1, ""),):
        constant = line * supply_hz + sign * out * slip_hz
        band = supply_band * line * supply_hz / abs(constant) if constant else 0.0
        tails = [f"line-{line}x"] * bool(line) + [f"out-{out}x"] * bool(out)
        lines.append((f"beat-{mark.join(tails)}", sign * out * pairs, constant, band))
    return lines


def start_lines(poles: int, supply_hz: float) -> list[Line]:
    """Lines of a synchronous motor that starts on its damper winding: s f_line and 2 s f_line.

    Twice the slip frequency comes from the salient poles: from 2 f_line at standstill to 0 at synchronous speed; the
    slip frequency itself only with the field on early. With s f = f − p N the line is |−k p N + k f|. Sources:
    Journal of Engineering for Power 82 (1960) 215 (synchronous motor starts); IEEE Std 1255 (recalled, confirm
    against your edition).
    """
    pairs = poles / 2.0
    return [(f"slip-{k}x", -k * pairs, k * supply_hz, 0.0) for k in (1, 2)]


def start_speed_rad_s(frequency_hz: float, poles: int, supply_hz: float, multiple: int = 2) -> float | None:
    """Speed of the motor [rad/s] at which k · slip frequency passes a frequency while it starts; None where never.

    From |k (f − p N)| = frequency below synchronous speed: s = frequency/(k f), N = (1 − s) f/p.
    """
    slip = frequency_hz / (multiple * supply_hz)
    if slip > 1.0:
        return None
    return (1.0 - slip) * supply_hz / (poles / 2.0) * 6.283185307179586


def grid_lines(resonance_hz: float, supply_hz: float, supply_band: float) -> list[Line]:
    """|f_line ∓ f_res|: a resonance of the network (series capacitors) seen from the rotor, below and above.

    The lower one, the complement, is where a network in resonance draws energy out of a torsional mode or feeds it.
    Source: common practice (IEEE Subsynchronous Resonance Working Group, terms and definitions; recalled, confirm
    against your edition). The band is the supply's, over the frequency of the line.
    """
    below, above = supply_hz - resonance_hz, supply_hz + resonance_hz
    return [
        ("grid-complement", 0.0, below, supply_band * supply_hz / below),
        ("grid-sum", 0.0, above, supply_band * supply_hz / above),
    ]
