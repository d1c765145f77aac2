"""Damped modes in words and rows, the same for terminal and report."""

from __future__ import annotations

from quillshaft.assess.damped_results import AperiodicMotion, DampedMode, DampedResult
from quillshaft.present.words import counted, hertz, number, plain, strongest

DAMPED_HEADS = (
    "Mode",
    "undamped, Hz",
    "damped, Hz",
    "damping ratio",
    "log. decrement",
    "decay, 1/s",
    "most energy lost in",
    "remark",
)
APERIODIC_HEADS = ("Decay, 1/s", "time constant, s", "largest motion at", "most energy lost in", "remark")
LEAST_SHOWN = 0.005
MOST_COLUMNS = 8


def shown_modes(result: DampedResult, every: bool = False) -> tuple[DampedMode, ...]:
    """Modes to show: those that screening judges, those without an undamped one, unstable ones; or every one."""
    judged = result.screening.judged_modes
    some = tuple(mode for mode in result.modes if mode.undamped_mode in (None, *judged) or mode.unstable)
    return result.modes if every or not some else some


def _remark(motion: DampedMode | AperiodicMotion) -> str:
    words = ["UNSTABLE: grows"] if motion.unstable else []
    return ", ".join(words if motion.verified else [*words, "NOT VERIFIED"])


def _other_number(mode: DampedMode) -> str:
    """Which undamped mode it was, where the numbers differ."""
    if mode.undamped_mode == mode.mode:
        return ""
    return "no undamped mode" if mode.undamped_mode is None else f"undamped mode {mode.undamped_mode}"


def _most(lost: dict[str, float]) -> str:
    if not any(share > 0 for share in lost.values()):
        return "–"
    name, share = strongest(lost)
    return f"{name} {share * 100:.0f} %"


def damped_rows(modes: tuple[DampedMode, ...]) -> list[tuple[str, ...]]:
    """One row for each damped mode, under DAMPED_HEADS."""
    return [
        (
            f"{mode.mode}",
            "–" if mode.undamped_hz is None else hertz(mode.undamped_hz),
            hertz(mode.frequency_hz),
            _signed(mode.damping_ratio, 4),
            _signed(mode.log_decrement, 4),
            _signed(mode.decay_1_s, 3),
            _most(mode.energy_lost),
            ", ".join(word for word in (_remark(mode), _other_number(mode)) if word),
        )
        for mode in modes
    ]


def _signed(value: float, digits: int) -> str:
    text = f"{value:.{digits}f}"
    return text.removeprefix("-") if float(text) == 0 else text.replace("-", "−")


def aperiodic_rows(result: DampedResult) -> list[tuple[str, ...]]:
    """One row for each motion that does not oscillate, under APERIODIC_HEADS."""
    return [
        (
            number(motion.decay_1_s).replace("-", "−"),
            number(motion.time_constant_s),
            max(motion.shape, key=lambda name: abs(motion.shape[name])),
            _most(motion.energy_lost),
            _remark(motion),
        )
        for motion in result.aperiodic
    ]


def energy_heads(modes: tuple[DampedMode, ...]) -> tuple[str, ...]:
    """Headings of `energy_rows`."""
    return ("Lost in", *(f"mode {mode.mode}" for mode in modes[:MOST_COLUMNS]))


def energy_rows(modes: tuple[DampedMode, ...]) -> list[tuple[str, ...]]:
    """Energy lost in a cycle [%] by element (rows) and mode (columns); rows that stay below 0.5 % are left out."""
    columns = modes[:MOST_COLUMNS]
    if not columns:
        return []
    return [
        (name, *(_signed(mode.energy_lost[name] * 100.0, 1) for mode in columns))
        for name in columns[0].energy_lost
        if any(abs(mode.energy_lost[name]) >= LEAST_SHOWN for mode in columns)
    ]


def damped_sentences(result: DampedResult) -> list[str]:
    """The answer first: what is unstable, the least damped mode, where damping comes from, what was verified."""
    said = [_growing(result, motion) for motion in result.unstable]
    if not said:
        said.append("No motion grows: the train is stable with the damping stated and assumed here.")
    oscillating = shown_modes(result)
    if oscillating:
        least = min(oscillating, key=lambda mode: mode.damping_ratio)
        word = "Of the modes shown" if len(oscillating) < len(result.modes) else "Of all modes"
        said.append(
            f"{word}, mode {least.mode} at {hertz(least.frequency_hz)} Hz has the least damping: damping ratio "
            f"{_signed(least.damping_ratio, 4)}, logarithmic decrement {_signed(least.log_decrement, 4)}."
        )
    said += _origin(result)
    if result.aperiodic:
        verb = "does" if len(result.aperiodic) == 1 else "do"
        motions = counted(len(result.aperiodic), "motion")
        said.append(f"{motions} {verb} not oscillate: overcritical, or a turning that dampers slow.")
    if result.screening.modes and result.screening.modes[0].frequency_along is not None:
        said.append("Stiffness follows speed: these are the damped modes at rated speed.")
    count = len(result.modes) + len(result.aperiodic)
    if result.all_verified:
        said.append(f"{counted(count, 'motion')}, all verified: torques balance to below 1e-9 of the largest.")
    else:
        said.append(f"{counted(count, 'motion')}, NOT all verified: see the remarks.")
    return said


def _growing(result: DampedResult, motion: DampedMode | AperiodicMotion) -> str:
    fed = [name for name, share in motion.energy_lost.items() if share < 0]
    reasons = {station.name: station.viscous_because for station in result.screening.train.stations}
    because = [
        f"{name} ({reasons[name.removesuffix(' to ground')]})" if reasons.get(name.removesuffix(" to ground")) else name
        for name in fed
    ]
    where = f" Energy comes in at {', '.join(because)}." if because else ""
    if isinstance(motion, DampedMode):
        head = f"UNSTABLE: mode {motion.mode} at {hertz(motion.frequency_hz)} Hz grows"
    else:
        head = "UNSTABLE: a motion that does not oscillate grows"
    return f"{head}, e-fold in {number(1.0 / abs(motion.decay_1_s))} s.{where}"


def _origin(result: DampedResult) -> list[str]:
    said = []
    if result.default_links:
        names = ", ".join(result.default_links[:6]) + (", …" if len(result.default_links) > 6 else "")
        said.append(
            f"The loss factor 2ζ = {number(2 * result.zeta)} with ζ = {plain(result.zeta)} stands for "
            f"{counted(len(result.default_links), 'link')} without a damping of their own: {names}."
        )
    if result.rings:
        said.append(f"The ring of {', '.join(result.rings)} turns by itself here, joined by its fluid alone.")
    if result.rings_unknown:
        said.append(
            f"The viscous coefficient of {', '.join(result.rings_unknown)} is not given: its ring counts as in the "
            "undamped modes, and its damping is left out."
        )
    return said


def damped_notes() -> tuple[str, ...]:
    """What the numbers mean."""
    return (
        "A free motion is Re(θ e^st) with s = −decay + j 2π · damped frequency. The damping ratio is decay / |s|, the "
        "logarithmic decrement decay / damped frequency: amplitudes fall to e^−decrement in a cycle.",
        "Loss factors act as a complex stiffness k (1 + jη), viscous damping as c times the rate of twist; a complex "
        "stiffness raises the damped frequency a little above the undamped one. What feeds energy in is negative.",
    )
