"""Unit text of a quantity as unit names and exponents, with their exact factors and dimensions.

The tokenizer is ours; definitions go to pint. In them angle is a dimension, so that N m and N m/rad, or rpm and Hz,
cannot stand for each other. Factors are exact fractions.
"""

from __future__ import annotations

import re
from fractions import Fraction
from functools import lru_cache
from typing import Any

from quillshaft.train.problems import did_you_mean

Units = tuple[tuple[str, int], ...]
"""Unit names of the definitions with their exponents, in the order written."""


class RefusalError(ValueError):
    """What is wrong with a value, before the help of its measure is added."""


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

_FACTOR = re.compile(r'([A-Za-zμ°%"]+)(?:\^\(?([+-]?[0-9])\)?|(-?[0-9]))?')
_GLUED = re.compile(r"(da|[kMGm])?(N|kgf?|kp|lb[fm]?|slug)(mm|cm|m|ft|in)(s)?|(ft|in)(lbf?)")
_TIMES = re.compile(r"\s*(?:[·*×]|[.\-](?![0-9]))\s*|\s+")


@lru_cache(maxsize=512)
def parse_units(text: str) -> Units:
    """Unit text as unit names with exponents. Raises RefusalError when it is unknown or ambiguous."""
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
        raise RefusalError(f'"{text}" can be read in two ways: put what divides in parentheses, as N/(mm um)')
    units: list[tuple[str, int]] = []
    for piece in pieces:
        match = _FACTOR.fullmatch(piece)
        if match is None:
            number = re.fullmatch(r"[-+]?[0-9.]+", piece)
            raise RefusalError("two numbers: write one decimal number" if number else f'cannot read "{text}"')
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
        raise RefusalError(f'unknown unit "{symbol}"{did_you_mean(symbol, (*_OFTEN, *_SYMBOLS))}')
    prefix, force, *others = match.groups()
    first = (prefix or "") + (force or "")
    parts = ([first] if first else []) + [other for other in others if other]
    return tuple(name for part in parts for name in _names(part))


@lru_cache(maxsize=1)
def unit_registry() -> Any:
    """The registry of the definitions, exact; made when a unit is first read."""
    import pint

    registry: Any = pint.UnitRegistry(None, non_int_type=Fraction)
    registry.load_definitions([row.strip() for row, _, _ in _ROWS])
    return registry


@lru_cache(maxsize=1024)
def factor_of(units: Units) -> tuple[Fraction, frozenset[tuple[str, int]]]:
    """Factor to SI base units and dimension of a product of units; temperatures count as differences."""
    registry = unit_registry()
    powers: dict[str, int] = {}
    for name, power in units:
        scale = f"delta_{name}" if name.startswith("degree_") else name
        powers[scale] = powers.get(scale, 0) + power
    container = registry.UnitsContainer({name: power for name, power in powers.items() if power})
    dimension = registry.get_dimensionality(container)
    return Fraction(registry.get_root_units(container)[0]), frozenset(dict(dimension).items())
