"""Sentences of the assessment, which are in SI, in the units that the train file declares."""

from __future__ import annotations

import re

from quillshaft.present.units import SHOWN
from quillshaft.train.basic_model import Assumed

PASCALS = {"N/mm²": 1e6, "MPa": 1e6}
PSI_PER_PA = 1.0 / 6894.757293168361
_VALUE = re.compile(
    r"(?<![\w.])(?P<first>\d+(?:\.\d+)?)(?:(?P<between> by | and | to |/)(?P<second>\d+(?:\.\d+)?))? "
    r"(?P<unit>N·m|mm|N/mm²|MPa)(?![\w·/])"
)


def shown_text(text: str, system: str) -> str:
    """The text with torques, lengths and stresses in lbf·in, inches and psi where `system` is "US", to four digits.

    Single values, and two of one unit ("70 by 70 mm", "150/30 mm"); other text stays as it is.
    """
    return _VALUE.sub(_in_us_units, text) if system == "US" else text


def assumed_rows(assumed: tuple[Assumed, ...], system: str) -> list[tuple[str, str, str, str]]:
    """(element, key, value, why) of what was assumed, in the declared units."""
    return [(item.element, item.key, shown_text(item.value, system), shown_text(item.why, system)) for item in assumed]


def _in_us_units(found: re.Match[str]) -> str:
    units, unit = SHOWN["US"], found["unit"]
    if unit == "N·m":
        factor, label = units.per_nm, units.torque
    elif unit == "mm":
        factor, label = units.per_m / 1e3, units.length
    else:
        factor, label = PASCALS[unit] * PSI_PER_PA, "psi"
    first = _four(float(found["first"]) * factor)
    if found["second"] is None:
        return f"{first} {label}"
    return f"{first}{found['between']}{_four(float(found['second']) * factor)} {label}"


def _four(value: float) -> str:
    """Four digits, thousands in full."""
    return f"{float(f'{value:.4g}'):.0f}" if abs(value) >= 1000.0 else f"{value:.4g}"
