"""Quantities as data sheets write them: a number, a unit, and what is refused because it would be misread.

Number and unit are split by a pattern of ours; the unit goes through a tokenizer of ours to pint as plain
unit names and whole exponents. In the definitions angle is a dimension, so that N m and N m/rad, or rpm and
Hz, cannot stand for each other. Factors are exact fractions, rounded once at the end.
"""

from __future__ import annotations

import re
import unicodedata
from fractions import Fraction
from functools import lru_cache
from math import isfinite
from typing import Any

from quillshaft.records import dataclass
from quillshaft.train.problems import did_you_mean, shown

Units = tuple[tuple[str, int], ...]
"""Unit names of the definitions with their exponents, in the order written."""


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


@dataclass(frozen=True)
class Measure:
    """One kind of quantity: its units, what a bare number means, and the bounds that keep absurd numbers out.

    `si_unit` is the unit of a Reading and the target of the conversion; `bare_si` and `bare_us` are None
    where a unit must be given. `low` and `high` are in the SI unit, both allowed. With `pound_is_force`,
    lb is read as lbf where only that gives the wanted dimension.
    """

    name: str
    si_unit: str
    bare_si: str | None
    bare_us: str | None
    pound_is_force: bool
    low: float
    high: float
    example_si: str
    example_us: str


# name | SI unit | bare unit in SI | in US (empty: give a unit) | lb may be lbf | low | high | examples
_MEASURE_ROWS = """
inertia          | kg m^2      | kg m^2      | lbf in s^2     | yes | 0 | 1e9 | 19.6 kg m^2 | 173 lbf in s^2
wr2              | kg m^2      | kg m^2      | lb ft^2        | yes | 0 | 1e9 | 0.7 kg m^2 | 16.6 lb ft^2
gd2              | kg m^2      | kg m^2      |                | no | 0 | 1e9 | 1.8 kg m^2 | 43 lb ft^2
stiffness        | N m/rad     | N m/rad     | lbf in/rad     | yes | 1e-6 | 1e18 | 7.9 MN m/rad | 70e6 lbf in/rad
flexibility      | rad/(N m)   | rad/(N m)   | rad/(lbf in)   | yes | 1e-18 | 1e6 | 0.23e-6 rad/(N m) | 26e-9 rad/(lbf in)
torque           | N m         | N m         | lbf in         | yes | -1e12 | 1e12 | 10 kN m | 88000 lbf in
power            | W           | kW          | hp             | yes | -1e12 | 1e12 | 1120 kW | 1500 hp
heat             | W           | W           | W              | yes | 0 | 1e12 | 620 W | 620 W
speed            | rad/s       | rpm         | rpm            | no | 0 | 104719.75511965978 | 1487 rpm | 1780 rpm
signed_speed     | rad/s       | rpm         | rpm            | no | -104719.75511965978 | 104719.75511965978 | -310 rpm | -310 rpm
speed_rate       | rad/s^2     | rpm/s       | rpm/s          | no | 0 | 1e6 | 60 rpm/s | 60 rpm/s
frequency        | Hz          | Hz          | Hz             | no | 0 | 1e6 | 50 Hz | 60 Hz
signed_frequency | Hz          | Hz          | Hz             | no | -1e6 | 1e6 | -4 Hz | -4 Hz
length           | m           | mm          | in             | no | 0 | 1e4 | 95 mm | 3.75 in
angle            | rad         | deg         | deg            | no | -1e4 | 1e4 | 480 deg | 480 deg
stress           | Pa          | MPa         | psi            | yes | 0 | 1e12 | 850 MPa | 123000 psi
modulus          | Pa          | GPa         | psi            | yes | 1e2 | 1e13 | 79.3 GPa | 11.5e6 psi
pressure         | Pa          |             | psi            | yes | 0 | 1e11 | 155 bar | 2250 psi
density          | kg/m^3      | kg/m^3      | lb/in^3        | no | 1e-2 | 1e5 | 7850 kg/m^3 | 0.283 lb/in^3
mass             | kg          | kg          | lb             | no | 0 | 1e9 | 9.4 kg | 20.7 lb
mesh_stiffness_per_face | N/m^2 |            |                | yes | 1e3 | 1e15 | 20 N/(mm um) | 2.9e6 lbf/(in in)
linear_stiffness | N/m         |             |                | yes | 1e-3 | 1e18 | 1.9 MN/m | 11000 lbf/in
temperature      | K           | degC        | degF           | no | 0 | 5000 | 30 degC | 86 degF
temperature_rise | K           | K           | degF           | no | -5000 | 5000 | 70 K | 126 degF
viscous          | N m s/rad   | N m s/rad   | lbf in s/rad   | yes | 0 | 1e12 | 310 N m s/rad | 2740 lbf in s/rad
signed_viscous   | N m s/rad   | N m s/rad   | lbf in s/rad   | yes | -1e12 | 1e12 | -12 N m s/rad | -106 lbf in s/rad
synchronizing    | W/rad       |             |                | no | 0 | 1e15 | 45 kW/deg | 60 hp/deg
time             | s           | s           | s              | no | 0 | 1e9 | 0.8 s | 0.8 s
share            | unity       | unity       | unity          | no | 0 | 10 | 15 % | 15 %
signed_share     | unity       | unity       | unity          | no | -1 | 10 | -5 % | -5 %
"""  # noqa: E501


def _measure(row: str) -> Measure:
    name, si, bare_si, bare_us, force, low, high, *examples = (cell.strip() for cell in row.split("|"))
    bounds = float(low), float(high)
    return Measure(name, si, bare_si or None, bare_us or None, force == "yes", *bounds, *examples)


MEASURES: dict[str, Measure] = {
    measure.name: measure for measure in map(_measure, _MEASURE_ROWS.strip().splitlines())
} | {"number": Measure("number", "", None, None, False, -1e12, 1e12, "1.13", "1.13")}
"""Every kind of quantity by the name `read_quantity` takes."""

# Definitions in pint's own notation, and after the bar how data sheets write the unit. Angle and share are
# dimensions of their own. Sources: the international pound (0.45359237 kg), inch (25.4 mm) and standard
# gravity (9.80665 m/s^2), all exact; hp = 550 ft lbf/s, PS = 75 kgf m/s.
_DEFINITIONS = """
kilo- = 1000
mega- = 1000000
giga- = 1000000000
deca- = 10
centi- = 0.01
milli- = 0.001
micro- = 0.000001
metre = [length] | m meter metre meters metres
kilogram = [mass] | kg Kg KG
second = [time] | s sec
radian = [angle] | rad radian radians
kelvin = [temperature] | K
unity = [share] | unity
percent = 0.01 * unity | %
minute = 60 * second | min
hour = 3600 * second | h
hertz = 1 / second | Hz hz HZ
cycle_per_minute = 1 / minute | cpm CPM
gram = 0.001 * kilogram | g
tonne = 1000 * kilogram | t tonne
newton = kilogram * metre / second ** 2 | N
watt = newton * metre / second | W
pascal = newton / metre ** 2 | Pa
bar = 100000 * pascal | bar
degree = 0.017453292519943295769236907684886127 * radian | deg ° degree degrees
revolution = 6.28318530717958647692528676655900577 * radian | r rev revs
revolution_per_minute = revolution / minute | rpm RPM
inch = 0.0254 * metre | in inch inches In IN "
foot = 12 * inch | ft foot feet Ft FT
pound_mass = 0.45359237 * kilogram | lbm
pound = pound_mass | lb lbs LB Lb LBS
pound_force = 4.4482216152605 * newton | lbf LBF Lbf
kip = 1000 * pound_force | kip kips
kilogram_force = 9.80665 * newton | kgf kp
slug = pound_force * second ** 2 / foot | slug slugs
psi = pound_force / inch ** 2 | psi PSI
kilopound_per_square_inch = 1000 * psi | ksi KSI
horsepower = 550 * foot * pound_force / second | hp HP Hp
metric_horsepower = 75 * kilogram_force * metre / second | PS
degree_Celsius = kelvin; offset: 273.15 | degC °C C
degree_Fahrenheit = 5 / 9 * kelvin; offset: 255.372222222222222222222222222222222222 | degF °F F
"""
_ROWS = [row.partition("|") for row in _DEFINITIONS.strip().splitlines()]
_SYMBOLS = {symbol: row.partition("=")[0].strip() for row, _, symbols in _ROWS for symbol in symbols.split()}
_PREFIXES = {"k": "kilo", "M": "mega", "G": "giga", "da": "deca", "c": "centi", "m": "milli", "u": "micro",
             "μ": "micro"}  # fmt: skip
_PREFIXED = {"m", "g", "N", "W", "Pa", "rad", "s", "Hz", "bar", "psi", "lbf"}
_OFTEN = ("Nm", "kNm", "MNm", "mm", "um", "kg", "kN", "MN", "kW", "MW", "MPa", "GPa", "kgm", "Mpsi", "ftlb")

_NUMBER = re.compile(r"([+\-−]?)\s*((?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+\-−]?[0-9]+)?)\s*(.*)", re.DOTALL)
_FACTOR = re.compile(r'([A-Za-zμ°%"]+)(?:\^\(?([+-]?[0-9])\)?|(-?[0-9]))?')
_GLUED = re.compile(r"(da|[kMGm])?(N|kgf?|kp|lb[fm]?|slug)(mm|cm|m|ft|in)(s)?|(ft|in)(lbf?)")
_TIMES = re.compile(r"\s*(?:[·*×]|[.\-](?![0-9]))\s*|\s+")
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


class _RefusalError(ValueError):
    """What is wrong with a value, before the help of its measure is added."""


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
    except _RefusalError as refusal:
        raise QuantityError(str(refusal), measure_help(measure, system)) from None


def read_tolerance(value: object) -> tuple[float, float]:
    """Read a tolerance as fractions (low, high) with -1 < low <= 0 <= high.

    It is one share, taken both ways ("5 %" or 0.05), or a pair ["-5 %", "+20 %"]. Raises QuantityError when
    it is neither, or when the signs or the size are not those of a tolerance.
    """
    try:
        return _tolerance(value)
    except _RefusalError as refusal:
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
        units = _parse(unit) if unit else ()
    except _RefusalError:
        return None
    return next((name for name in candidates if units and _fit(units, MEASURES[name])), None)


def _tolerance(value: object) -> tuple[float, float]:
    spec = MEASURES["signed_share"]
    if isinstance(value, list | tuple):
        if len(value) != 2:
            raise _RefusalError("a tolerance pair has two members, the low and the high one")
        low, high = (_read(*_split(member), spec, "SI").value for member in value)
    else:
        text = re.sub(r"^\s*(?:±|\+/-)\s*(?=[0-9.])", "", value) if isinstance(value, str) else value
        high = _read(*_split(text), spec, "SI").value
        low = -high
    if high < 0 or low > 0:
        raise _RefusalError("the wrong sign: a tolerance runs from a low side <= 0 to a high side >= 0")
    if low <= -1:
        raise _RefusalError("a tolerance of -100 % or more would leave nothing")
    return low + 0.0, high


def _split(value: object) -> tuple[Fraction, str]:
    """Number and unit text of a value as the file holds it."""
    if isinstance(value, bool):
        raise _RefusalError(f"{shown(value)} is not a number")
    if isinstance(value, str):
        return _split_text(value.strip())
    if isinstance(value, int):
        return Fraction(value), ""
    if not isinstance(value, float):
        raise _RefusalError(f"{shown(value)} is not a number or a text with a number and a unit")
    if not isfinite(value):
        raise _RefusalError(f"{value} is not a finite number")
    return Fraction(repr(float(value))), ""


def _split_text(text: str) -> tuple[Fraction, str]:
    if not text:
        raise _RefusalError("an empty text")
    if len(text) > _LONGEST:
        raise _RefusalError("too long for a number with a unit")
    if re.match(r"[+-]?\s*(?:nan|inf(?:inity)?)\b", text, re.IGNORECASE):
        raise _RefusalError("not a finite number")
    if "," in text:
        inside = re.search(r"^[+-]?,|[0-9],\s*[0-9]", text)
        raise _RefusalError("a comma in a number" if inside else "a comma in a quantity")
    match = _NUMBER.fullmatch(text)
    if match is None:
        raise _RefusalError("does not begin with a number")
    rest = unicodedata.normalize("NFKC", match[3].translate(_ONE_OF)).translate(_ONE_OF).strip()
    for pattern, message in _AFTER_NUMBER:
        if pattern.match(rest):
            raise _RefusalError(message)
    return _exact((match[1] + match[2]).replace("−", "-")), rest


def _exact(digits: str) -> Fraction:
    """The number as an exact fraction, kept from exponents that would fill the memory."""
    size = abs(float(digits))
    if size == 0:
        if re.match(r"[+-]?[0.]*[1-9]", digits):
            raise _RefusalError("a number too small to hold")
        return Fraction(0)
    if not isfinite(size):
        raise _RefusalError("a number too large to hold")
    return Fraction(digits)


def _read(number: Fraction, unit: str, spec: Measure, system: str) -> Reading:
    note = None
    bare = _bare(spec, system)
    if spec.name == "number":
        if unit:
            raise _RefusalError(f'a unit, "{unit}", on a pure number')
        si = number
    elif not unit and not bare:
        raise _RefusalError("the unit is missing")
    elif not unit and spec.si_unit == "unity" and number > 1:
        raise _RefusalError("a bare share above 1: write it with %, or as a fraction of at most 1")
    else:
        si, note = _to_si(number, unit or str(bare), spec)
    return Reading(_bounded(si, spec, system), note if unit else None)


def _to_si(number: Fraction, unit: str, spec: Measure) -> tuple[Fraction, str | None]:
    units = _parse(unit)
    if units == (("minute", -1),):
        raise _RefusalError(f'"{unit}" does not say what is counted: write rpm for a speed, cpm for a frequency')
    fitted = _fit(units, spec)
    if fitted is None:
        raise _RefusalError(_mismatch(unit, units, spec))
    if spec.name == "temperature" and fitted[0][0].startswith("degree_"):
        return Fraction(_registry().convert(number, fitted[0][0], "kelvin")), None
    note = None if fitted == units else "lb read as lbf (pound-force)"
    factor, dimension = _factor(fitted)
    if spec.name == "gd2":
        factor /= 4 if dimension == _MASS_AREA else 4 * Fraction("9.80665")
    return number * factor, note


def _fit(units: Units, spec: Measure) -> Units | None:
    """The units as they have the measure's dimension, lb turned into lbf where that is what it takes."""
    wanted = {_factor(_parse(spec.si_unit))[1]} if spec.si_unit else set()
    if spec.name == "gd2":
        wanted.add(_FORCE_AREA)
    force = tuple(("pound_force" if name == "pound" else name, power) for name, power in units)
    choices = (units, force) if spec.pound_is_force else (units,)
    return next((choice for choice in choices if _factor(choice)[1] in wanted), None)


def _mismatch(unit: str, units: Units, spec: Measure) -> str:
    """What the unit is, what is wanted, and the slip that explains it where there is a usual one."""
    dimension, wanted = _factor(units)[1], _factor(_parse(spec.si_unit))[1]
    if wanted == _MASS_AREA and dimension == _FORCE_AREA:
        if any("pound" in name for name, _ in units):
            return f'"{unit}" is a weight times a length squared: write lb ft^2 or lb in^2, under wr2'
        return f'"{unit}" looks like a GD² value: use gd2'
    kind = next((m for m in MEASURES.values() if m.si_unit and _fit(units, m)), None)
    head = f'"{unit}" is not a unit of {_label(spec)}'
    if kind is not None:
        head = f'"{unit}" is {_with_article(kind)}, {_with_article(spec)} is wanted'
    if any(_factor((*units, ("radian", power)))[1] == wanted for power in (1, -1)):
        if dict(dimension).get("[angle]"):
            return f"{head}: no angle belongs here{' (Hz or cpm)' if 'frequency' in spec.name else ''}"
        return f"{head}: the angle is missing (rad or deg{', or rpm' if 'speed' in spec.name else ''})"
    weighed = tuple(("kilogram_force" if name == "kilogram" else name, power) for name, power in units)
    if _factor(weighed)[1] == wanted:
        return f"{head}: write kgf where a weight is meant"
    return head


def _bounded(si: Fraction, spec: Measure, system: str) -> float:
    try:
        value = float(si)
    except OverflowError:
        value = float("inf") if si > 0 else float("-inf")
    if not spec.low <= value <= spec.high:
        raise _RefusalError(f"out of bounds for {_with_article(spec)}: {_span(spec, system)}")
    return value


def _span(spec: Measure, system: str) -> str:
    unit = _bare(spec, system) or spec.si_unit
    if unit in ("", "unity"):
        return f"{spec.low:g} to {spec.high:g}"
    ends = [Fraction(spec.low), Fraction(spec.high)]
    if spec.name == "temperature":
        name = _parse(unit)[0][0]
        low, high = (float(_registry().convert(end, "kelvin", name)) for end in ends)
    else:
        low, high = (float(end / _factor(_parse(unit))[0]) for end in ends)
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


@lru_cache(maxsize=512)
def _parse(text: str) -> Units:
    """Unit text as unit names with exponents. Raises _RefusalError when it is unknown or ambiguous."""
    plain = re.sub(r"\s*(?:\*\*|\^)\s*", "^", text)
    plain = re.sub(r"\b(in|ft|lb|lbs)\.(?![A-Za-z])", r"\1", plain)
    plain = re.sub(r"\bdeg(?:rees?)?\s*([CF])$", r"deg\1", plain)
    first, *below = plain.split("/")
    above = [] if below and first.strip() in ("", "1") else _product(first, text, grouped=True)
    units = above + [(name, -power) for part in below for name, power in _product(part, text, grouped=False)]
    return tuple(units)


def _product(part: str, text: str, *, grouped: bool) -> list[tuple[str, int]]:
    """Units multiplied together. After a slash several of them must stand in parentheses."""
    inner = part.strip()
    if inner.startswith("(") and inner.endswith(")"):
        inner, grouped = inner[1:-1].strip(), True
    pieces = _TIMES.split(inner)
    if len(pieces) > 1 and not grouped:
        raise _RefusalError(f'"{text}" can be read in two ways: put what divides in parentheses, as N/(mm um)')
    units: list[tuple[str, int]] = []
    for piece in pieces:
        match = _FACTOR.fullmatch(piece)
        if match is None:
            number = re.fullmatch(r"[-+]?[0-9.]+", piece)
            raise _RefusalError("two numbers: write one decimal number" if number else f'cannot read "{text}"')
        *front, last = _names(match[1])
        units += [(name, 1) for name in front] + [(last, int(match[2] or match[3] or 1))]
    return units


def _names(symbol: str) -> tuple[str, ...]:
    """The unit names one run of letters stands for: one, or several where they are written together."""
    if symbol in _SYMBOLS:
        return (_SYMBOLS[symbol],)
    for prefix, name in _PREFIXES.items():
        base = symbol.removeprefix(prefix)
        if symbol.startswith(prefix) and base in _PREFIXED:
            return (name + _SYMBOLS[base],)
    match = _GLUED.fullmatch(symbol)
    if match is None:
        raise _RefusalError(f'unknown unit "{symbol}"{did_you_mean(symbol, (*_OFTEN, *_SYMBOLS))}')
    prefix, force, *others = match.groups()
    first = (prefix or "") + (force or "")
    parts = ([first] if first else []) + [other for other in others if other]
    return tuple(name for part in parts for name in _names(part))


@lru_cache(maxsize=1)
def _registry() -> Any:
    import pint

    registry: Any = pint.UnitRegistry(None, non_int_type=Fraction)
    registry.load_definitions([row.strip() for row, _, _ in _ROWS])
    return registry


@lru_cache(maxsize=1024)
def _factor(units: Units) -> tuple[Fraction, frozenset[tuple[str, int]]]:
    """Factor to SI base units and dimension of a product of units; temperatures count as differences."""
    registry = _registry()
    powers: dict[str, int] = {}
    for name, power in units:
        scale = f"delta_{name}" if name.startswith("degree_") else name
        powers[scale] = powers.get(scale, 0) + power
    container = registry.UnitsContainer({name: power for name, power in powers.items() if power})
    dimension = registry.get_dimensionality(container)
    return Fraction(registry.get_root_units(container)[0]), frozenset(dict(dimension).items())
