"""`quillshaft damped`: damped frequency, damping ratio, decrement and where each mode loses its energy."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, Temperature, TrainPath
from quillshaft.cli.output import check_target, console, refuse

if TYPE_CHECKING:
    from rich.console import Console

    from quillshaft.assess.damped_results import DampedResult
    from quillshaft.assess.results import Screening


def damped(
    train: TrainPath,
    case: Cases = None,
    at: Temperature = None,
    high: Annotated[
        bool, typer.Option("--high", help="Take the high value of zeta for links that state no damping.")
    ] = False,
    every: Annotated[bool, typer.Option("--all", help="Show the modes above the highest source too.")] = False,
    json: JsonPath = None,
) -> None:
    """Damped modes: frequency, damping ratio, decrement, energy lost by element; what grows is flagged."""
    from quillshaft.cli.study_output import put_text
    from quillshaft.cli.work import screened_alone, temperature_of

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    result = damped_of(screened_alone(train, case, temperature_of(at)), high)
    if json is not None:
        from quillshaft.present.damped_json import damped_json

        put_text(damped_json(result), json)
    if json != "-":
        show_damped(result, console(), every)


def damped_of(screening: Screening, high: bool = False) -> DampedResult:
    """The damped modes of a screened train; leaves with exit code 2 where its damping allows none."""
    import numpy as np

    from quillshaft.assess.damped_results import damped_results

    try:
        return damped_results(screening, screening.train.zeta[1 if high else 0])
    except np.linalg.LinAlgError:
        refuse(
            f"{screening.train.file.name}: a station without inertia has negative damping to ground that cancels the "
            "damping of its links: its motion is not determined. Give the station an inertia, or leave its viscous out."
        )


def show_damped(result: DampedResult, out: Console, every: bool) -> None:
    """The answer; the modes; the motions that do not oscillate; where the energy is lost."""
    from quillshaft.present import damped_words as words
    from quillshaft.present.tables import make_table
    from quillshaft.present.words import temperature_words

    train = result.screening.train
    tag = f" ({train.tag})" if train.tag else ""
    case = f", case {' + '.join(train.cases)}" if train.cases else ""
    out.print(f"{train.title}{tag}{case}", style="bold")
    state = temperature_words(result.screening)
    if state:
        out.print(state[0].upper() + state[1:])
    for line in words.damped_sentences(result):
        out.print(line)
    shown = words.shown_modes(result, every)
    out.print()
    heads = "|".join((*(f"{head}>" for head in words.DAMPED_HEADS[:6]), *words.DAMPED_HEADS[6:]))
    out.print(make_table("Damped modes", heads, words.damped_rows(shown)))
    if len(shown) < len(result.modes):
        out.print(f"{len(result.modes) - len(shown)} more above the highest source: --all shows them.")
    aperiodic = words.aperiodic_rows(result)
    if aperiodic:
        out.print()
        heads = "|".join((*(f"{head}>" for head in words.APERIODIC_HEADS[:2]), *words.APERIODIC_HEADS[2:]))
        out.print(make_table("Motions that do not oscillate", heads, aperiodic))
    rows = words.energy_rows(shown)
    if rows:
        out.print()
        first, *others = words.energy_heads(shown)
        heads = "|".join((first, *(f"{head}>" for head in others)))
        out.print(make_table("Energy lost in a cycle, %", heads, rows))
    out.print()
    for line in words.damped_notes():
        out.print(line)
