"""What `screen --temperatures` prints."""

from __future__ import annotations

from rich.console import Console

from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen_temperatures
from quillshaft.cli.study_output import put_text
from quillshaft.graph.states import follows_temperature
from quillshaft.present.tables import make_table
from quillshaft.present.temperature_rows import (
    coupling_rows,
    temperature_heads,
    temperature_lines,
    temperature_rows,
    temperatures_json,
)
from quillshaft.present.units import SHOWN


def show_temperatures(screening: Screening, out: Console, json: str | None) -> None:
    """The couplings cold, at 30 °C and hot: verdicts, stiffness and frequencies side by side."""
    if not follows_temperature(screening.train):
        out.print("No coupling of this train states anything against temperature: the three states are one.")
    states = screen_temperatures(screening.train)
    for line in temperature_lines(states):
        out.print(line)
    rows = coupling_rows(states)
    if rows:
        unit = SHOWN[screening.train.units].stiffness
        out.print(make_table(f"Coupling stiffness, {unit}", "|".join(("Coupling", *(f"{n}>" for n in states))), rows))
    heads = temperature_heads(states)
    out.print(
        make_table(
            "Natural frequencies", "|".join((f"{heads[0]}>", *(f"{h}>" for h in heads[1:]))), temperature_rows(states)
        )
    )
    out.print()
    if json is not None:
        put_text(temperatures_json(screening, states), json)
