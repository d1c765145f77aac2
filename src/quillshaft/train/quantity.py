"""Quantities as data sheets write them: a number, a unit, and what is refused because it would be misread.

Number and unit are split by a pattern; the unit becomes unit names and whole exponents. Factors are exact
fractions, rounded once at the end.
"""

from __future__ import annotations

import re
import unicodedata
from fractions import Fraction
from math import isfinite

from quillshaft.records import dataclass
from quillshaft.train.measures import MEASURES, Measure
from quillshaft.train.problems import shown
from quillshaft.train.unit_text import RefusalError, Units, factor_of, parse_units, unit_registry


class QuantityError(ValueError):
    """A value that cannot be read as the quantity wanted: what is wrong, and what is allowed."""

    def __init__(self, message: str, allowed: str) -> None:
        super().__init__(message)
        self.message = message
        self.allowed = allowed


@dataclass(frozen=True)
class Reading:
    """A value in SI units (angle in rad, temperature in K, share as a fraction), and how lb was read."""

    value: float
    note: str | None = None


_NUMBER = re.compile(r"([+\-−]?)\s*((?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+\-−]?[0-9]+)?)\s*(.*)", re.DOTALL)
_AFTER_NUMBER = (
    (re.compile(r"[*·×x]{1,2}\s*[0-9]"), "two numbers: a power of ten is written with e, such as 2.3e6"),
    (re.compile(r"[_']\s*[0-9]"), "a mark inside a number: digits stand without grouping"),
    (re.compile(r"±|\+\s*/?\s*-"), "a tolerance inside a quantity: give it under its own key"),
    (re.compile(r"/\s*[0-9]"), "a fraction: write one decimal number"),
    (re.compile(r"(?!1\s*/\s*[A-Za-z(])(?:[-+.]+|to\b)?\s*[0-9]"), "two numbers: write one decimal number"),
)
_ONE_OF = str.maketrans({"⋅": "·", "∙": "·", "•": "·", "−": "-", "–": "-", "‐": "-", "‑": "-", "″": '"',
                         "”": '"', "µ": "μ"})  # fmt: skip
_LONGEST = 120
_FORCE_AREA = frozenset({"[mass]": 1, "[length]": 3, "[time]": -2}.items())
_MASS_AREA = frozenset({"[mass]": 1, "[length]": 2}.items())


def read_quantity(value: object, measure: str, system: str) -> Reading:
    """Read a string with a unit, or a bare number, as the measure named.

    `measure` is a key of MEASURES; `system`, "SI" or "US", says what a bare number means. The value returned
    is in the measure's SI unit, `gd2` as the inertia GD²/4 [kg m²]. Raises QuantityError when the value
    cannot be read as that quantity, or would be read wrongly.
    """
    spec = MEASURES[measure]
    try:
        number, unit = _split(value)
        return _read(number, unit, spec, system)
    except RefusalError as refusal:
        raise QuantityError(str(refusal), measure_help(measure, system)) from None


def read_tolerance(value: object) -> tuple[float, float]:
    """Read a tolerance as fractions (low, high) with -1 < low <= 0 <= high.

    It is one share, taken both ways ("5 %" or 0.05), or a pair ["-5 %", "+20 %"]. Raises QuantityError when
    it is neither, or when the signs or the size are not those of a tolerance.
    """
    try:
        return _tolerance(value)
    except RefusalError as refusal:
        allowed = 'a share such as "5 %", or a pair such as ["-5 %", "+20 %"]'
        raise QuantityError(str(refusal), allowed) from None


def measure_help(measure: str, system: str) -> str:
    """What may stand for the measure, with an example, as the `allowed` text of an error."""
    spec = MEASURES[measure]
    example = spec.example_us if system == "US" else spec.example_si
    if spec.name == "number":
        return f"a plain number without a unit, for example {example}"
    if spec.si_unit == "unity":
        return f'a share such as "{example}", or a fraction of at most 1'
    bare = _bare(spec, system)
    ending = f", or a bare number in {bare}" if bare else ""
    return f'a number with a unit of {_label(spec)}, for example "{example}"{ending}'


def which_measure(value: object, candidates: tuple[str, ...]) -> str | None:
    """The first of the candidate measures whose dimension the value's unit has; None where none fits.

    For keys that take several kinds of quantity. A bare number, or what cannot be read at all, gives None.
    """
    try:
        _, unit = _split(value)
        units = parse_units(unit) if unit else ()
    except RefusalError:
        return None
    return next((name for name in candidates if units and _fit(units, MEASURES[name])), None)


def _tolerance(value: object) -> tuple[float, float]:
    spec = MEASURES["signed_share"]
    if isinstance(value, list | tuple):
        if len(value) != 2:
            raise RefusalError("a tolerance pair has two members, the low and the high one")
        low, high = (_read(*_split(member), spec, "SI").value for member in value)
    else:
        text = re.sub(r"^\s*(?:±|\+/-)\s*(?=[0-9.])", "", value) if isinstance(value, str) else value
        high = _read(*_split(text), spec, "SI").value
        low = -high
    if high < 0 or low > 0:
        raise RefusalError("the wrong sign: a tolerance runs from a low side <= 0 to a high side >= 0")
    if low <= -1:
        raise RefusalError("a tolerance of -100 % or more would leave nothing")
    return low + 0.0, high


def _split(value: object) -> tuple[Fraction, str]:
    """Number and unit text of a value as the file holds it."""
    if isinstance(value, bool):
        raise RefusalError(f"{shown(value)} is not a number")
    if isinstance(value, str):
        return _split_text(value.strip())
    if isinstance(value, int):
        return Fraction(value), ""
    if not isinstance(value, float):
        raise RefusalError(f"{shown(value)} is not a number or a text with a number and a unit")
    if not isfinite(value):
        raise RefusalError(f"{value} is not a finite number")
    return Fraction(repr(float(value))), ""


def _split_text(text: str) -> tuple[Fraction, str]:
    if not text:
        raise RefusalError("an empty text")
    if len(text) > _LONGEST:
        raise RefusalError("too long for a number with a unit")
    if re.match(r"[+-]?\s*(?:nan|inf(?:inity)?)\b", text, re.IGNORECASE):
        raise RefusalError("not a finite number")
    if "," in text:
        inside = re.search(r"^[+-]?,|[0-9],\s*[0-9]", text)
        raise RefusalError("a comma in a number" if inside else "a comma in a quantity")
    match = _NUMBER.fullmatch(text)
    if match is None:
        raise RefusalError("does not begin with a number")
    rest = unicodedata.normalize("NFKC", match[3].translate(_ONE_OF)).translate(_ONE_OF).strip()
    for pattern, message in _AFTER_NUMBER:
        if pattern.match(rest):
            raise RefusalError(message)
    return _exact((match[1] + match[2]).replace("−", "-")), rest


def _exact(digits: str) -> Fraction:
    """The number as an exact fraction, kept from exponents that would fill the memory."""
    size = abs(float(digits))
    if size == 0:
        if re.match(r"[+-]?[0.]*[1-9]", digits):
            raise RefusalError("a number too small to hold")
        return Fraction(0)
    if not isfinite(size):
        raise RefusalError("a number too large to hold")
    return Fraction(digits)


def _read(number: Fraction, unit: str, spec: Measure, system: str) -> Reading:
    note = None
    bare = _bare(spec, system)
    if spec.name == "number":
        if unit:
            raise RefusalError(f'a unit, "{unit}", on a pure number')
        si = number
    elif not unit and not bare:
        raise RefusalError("the unit is missing")
    elif not unit and spec.si_unit == "unity" and number > 1:
        raise RefusalError("a bare share above 1: write it with %, or as a fraction of at most 1")
    else:
        si, note = _to_si(number, unit or str(bare), spec)
    return Reading(_bounded(si, spec, system), note if unit else None)


def _to_si(number: Fraction, unit: str, spec: Measure) -> tuple[Fraction, str | None]:
    units = parse_units(unit)
    if units == (("minute", -1),):
        raise RefusalError(f'"{unit}" does not say what is counted: write rpm for a speed, cpm for a frequency')
    fitted = _fit(units, spec)
    if fitted is None:
        raise RefusalError(_mismatch(unit, units, spec))
    if spec.name == "temperature" and fitted[0][0].startswith("degree_"):
        return Fraction(unit_registry().convert(number, fitted[0][0], "kelvin")), None
    note = None if fitted == units else "lb read as lbf (pound-force)"
    factor, dimension = factor_of(fitted)
    if spec.name == "gd2":
        factor /= 4 if dimension == _MASS_AREA else 4 * Fraction("9.80665")
    return number * factor, note


def _fit(units: Units, spec: Measure) -> Units | None:
    """The units as they have the measure's dimension, lb turned into lbf where that is what it takes."""
    wanted = {factor_of(parse_units(spec.si_unit))[1]} if spec.si_unit else set()
    if spec.name == "gd2":
        wanted.add(_FORCE_AREA)
    force = tuple(("pound_force" if name == "pound" else name, power) for name, power in units)
    choices = (units, force) if spec.pound_is_force else (units,)
    return next((choice for choice in choices if factor_of(choice)[1] in wanted), None)


def _mismatch(unit: str, units: Units, spec: Measure) -> str:
    """What the unit is, what is wanted, and the slip that explains it where there is a usual one."""
    dimension, wanted = factor_of(units)[1], factor_of(parse_units(spec.si_unit))[1]
    if wanted == _MASS_AREA and dimension == _FORCE_AREA:
        if any("pound" in name for name, _ in units):
            return f'"{unit}" is a weight times a length squared: write lb ft^2 or lb in^2, under wr2'
        return f'"{unit}" looks like a GD² value: use gd2'
    kind = next((m for m in MEASURES.values() if m.si_unit and _fit(units, m)), None)
    head = f'"{unit}" is not a unit of {_label(spec)}'
    if kind is not None:
        head = f'"{unit}" is {_with_article(kind)}, {_with_article(spec)} is wanted'
    if any(factor_of((*units, ("radian", power)))[1] == wanted for power in (1, -1)):
        if dict(dimension).get("[angle]"):
            return f"{head}: no angle belongs here{' (Hz or cpm)' if 'frequency' in spec.name else ''}"
        return f"{head}: the angle is missing (rad or deg{', or rpm' if 'speed' in spec.name else ''})"
    weighed = tuple(("kilogram_force" if name == "kilogram" else name, power) for name, power in units)
    if factor_of(weighed)[1] == wanted:
        return f"{head}: write kgf where a weight is meant"
    return head


def _bounded(si: Fraction, spec: Measure, system: str) -> float:
    try:
        value = float(si)
    except OverflowError:
        value = float("inf") if si > 0 else float("-inf")
    if not spec.low <= value <= spec.high:
        raise RefusalError(f"out of bounds for {_with_article(spec)}: {_span(spec, system)}")
    return value


def _span(spec: Measure, system: str) -> str:
    unit = _bare(spec, system) or spec.si_unit
    if unit in ("", "unity"):
        return f"{spec.low:g} to {spec.high:g}"
    ends = [Fraction(spec.low), Fraction(spec.high)]
    if spec.name == "temperature":
        name = parse_units(unit)[0][0]
        low, high = (float(unit_registry().convert(end, "kelvin", name)) for end in ends)
    else:
        low, high = (float(end / factor_of(parse_units(unit))[0]) for end in ends)
    return f"{low:.6g} to {high:.6g} {unit}"


def _bare(spec: Measure, system: str) -> str | None:
    return {"SI": spec.bare_si, "US": spec.bare_us}[system]


LABELS = {"wr2": "WR²", "gd2": "GD²"} | dict.fromkeys(("viscous", "signed_viscous"), "viscous coefficient")
"""What a measure is called where its own name does not do."""


def _label(spec: Measure) -> str:
    return LABELS.get(spec.name, spec.name.replace("_", " "))


def _with_article(spec: Measure) -> str:
    label = _label(spec)
    return f"an {label}" if label[0] in "aeiou" else f"a {label}"
