"""What operation has to keep to, and where to measure: restrictions and gauges in sentences."""

from __future__ import annotations

from quillshaft.assess.response_results import BarredSpan, DeadLoad, Gauge, Response, Tolerable
from quillshaft.assess.response_standing import idle_too_low
from quillshaft.present.response_values import RPM, torque_text, torque_unit
from quillshaft.present.shown_text import shown_text
from quillshaft.present.units import SHOWN
from quillshaft.present.words import counted, hertz, number, percent, plain


def restriction_sentences(response: Response) -> list[str]:
    """Barred ranges, lowest idle, load with a dead cylinder, how to pass a resonance, speeds to skip."""
    found = response.restrictions
    allowance = plain(found.tachometer_share)
    lines = [
        f"Do not run continuously between {span.from_rpm:.0f} and {span.to_rpm:.0f} rpm"
        f"{_allowance(span, allowance)}: {span.because}. Pass the range without stopping, with falling as with rising "
        "speed."
        for span in found.barred
    ] or ["No speed range has to be barred for torque."]
    lines.append(_idle(response))
    lines += [_dead(item) for item in found.dead_loads]
    lines += [_skip(item) for item in found.tolerable if item.skip_rpm]
    lines.append(_passing(response))
    if found.barred:
        lines.append("A barred range must be marked at the tachometer and in the instructions, and reach the operator.")
    return lines


def _allowance(span: BarredSpan, allowance: str) -> str:
    """Whether the tachometer's error is in a barred range: not in one that the file alone declares."""
    return " (as declared, no allowance added)" if span.declared else f" (tachometer allowance of {allowance} included)"


def _idle(response: Response) -> str:
    found = response.restrictions
    text = found.idle_text.rstrip(".")
    if found.lowest_idle_rpm is None:
        return f"Lowest idle: not known; {text}."
    idle = response.screening.train.operation.idle_rad_s
    line = f"Lowest idle: {found.lowest_idle_rpm:.0f} rpm; {text}."
    if idle is not None and idle_too_low(response):
        line += f" The stated idle of {idle * RPM:.0f} rpm lies BELOW it."
    return line


def _dead(item: DeadLoad) -> str:
    name = item.cylinder if item.cylinder.startswith(item.machine) else f"{item.machine}, cylinder {item.cylinder}"
    why = f" ({item.because})"
    if item.load_share is None:
        return f"With {name}: no load can be stated at which all limits hold{why}."
    if item.load_share >= 1.0:
        return f"With {name}, the worst: full load may be kept{why}."
    return f"With {name}, the worst: reduce to {item.load_share * 100:.0f} % of full load at most{why}."


def _skip(item: Tolerable) -> str:
    spans = ", ".join(f"{low:.0f} to {high:.0f} rpm" for low, high in item.skip_rpm)
    return f"{item.source} at {item.at} is larger than tolerable at {spans}: skip these speeds or lower it."


def _passing(response: Response) -> str:
    found = response.restrictions
    if found.ramp_rad_s2 is None:
        return "No ramp is stated: how long a resonance is dwelt in while it is passed is not known."
    ramp = found.ramp_rad_s2 * RPM
    if not found.passages:
        return f"At the stated ramp of {number(ramp, 3)} rpm/s no resonance is passed outside the judged speeds."
    least = min(found.passages, key=lambda item: item.peak_share)
    return (
        f"At the stated ramp of {number(ramp, 3)} rpm/s {counted(len(found.passages), 'resonance')} listed below "
        f"{'is' if len(found.passages) == 1 else 'are'} passed; the ramp leaves {percent(least.peak_share)} of the "
        f"steady amplitude at best ({least.source}, mode {least.mode}). Ordinary ramps seldom cut the peak: they "
        "limit the number of cycles."
    )


def passage_note() -> str:
    """What the columns of passages mean."""
    return (
        "Seconds and cycles inside the half-power band while the resonance is passed; the last column is the largest "
        "amplitude over the steady one (one mode at a constant rate)."
    )


def tolerable_note(response: Response) -> str:
    """What the table of tolerable sources means."""
    unit = torque_unit(response)
    return (
        f"How large a source may be, amplitude in {unit} at its own station with all others as they stand, before the "
        "first limit of torque is reached in the judged ranges, normal case."
    )


def dead_note() -> str:
    """How the load with a dead cylinder is meant."""
    return (
        "Load with a dead cylinder keeps the limits of torque, heat, temperature, dampers and generators in the judged "
        "ranges, over the tolerances, cold and hot; "
        "a misfiring engine is stopped and repaired as its maker says."
    )


def gauge_sentences(response: Response) -> list[str]:
    """Where to gauge each mode, what to expect there, and where an encoder sees it."""
    return [_gauge(response, gauge) for gauge in response.gauges]


def _gauge(response: Response, gauge: Gauge) -> str:
    text = f"Mode {gauge.mode}, {hertz(gauge.frequency_hz)} Hz: "
    section = shown_text(gauge.section, response.screening.train.units)
    text += f"gauge {gauge.link} ({section})" if gauge.link else "no shaft to gauge"
    if gauge.torque_nm is not None:
        text += f"; expect ±{torque_text(response, gauge.torque_nm, 3)}"
        if gauge.microstrain is not None:
            text += f" or ±{number(gauge.microstrain, 3)} µstrain"
        if gauge.at_rpm is not None and gauge.source is not None:
            text += f" at {gauge.at_rpm:.0f} rpm from {gauge.source}"
    elif gauge.link:
        text += "; no source of known amplitude meets it in reach, so no amplitude can be stated"
    if gauge.encoder_at:
        text += f"; an encoder at {gauge.encoder_at} sees it"
        if carries(gauge):
            shown = gauge.encoder_deg_per_nm / SHOWN[response.screening.train.units].per_nm * 1e3
            text += f" with {number(shown, 3)}° per 1000 {torque_unit(response)}"
    return f"{text}." + (f" {gauge.note[0].upper()}{gauge.note[1:].rstrip('.')}." if gauge.note else "")


def carries(gauge: Gauge) -> bool:
    """True where the gauged link carries enough of the mode for an angle per torque to mean anything."""
    return gauge.encoder_deg_per_nm > 0 and not gauge.note.startswith("this shaft carries little")


GAUGE_NOTES = (
    "Measure over the whole speed range, slowly up and down, loaded and unloaded, with the couplings warm; record long "
    "enough for two cycles of the slowest beat.",
    "A natural frequency within its range over the tolerances confirms the model; one outside it voids the result "
    "until the cause is found.",
    "Expected strains rest on estimated damping: set the instruments to at least twice as much.",
    "Gauging rotating shafts needs guarding, secured cables or telemetry, and a permit to work.",
)
