"""`quillshaft damper`: the best damping of each damper, and the train with it seized, lost and at half damping."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, TrainPath
from quillshaft.cli.output import check_target, console, refuse

if TYPE_CHECKING:
    from rich.console import Console

    from quillshaft.study.dampers import DamperStudy


def damper(
    train: TrainPath,
    name: Annotated[
        str | None, typer.Option("--damper", metavar="NAME", help="This damper alone; else all of the file.")
    ] = None,
    mode: Annotated[
        int | None, typer.Option(metavar="N", help="Mode, of the train without the damper, to make it best for.")
    ] = None,
    case: Cases = None,
    json: JsonPath = None,
) -> None:
    """The best of each damper by rule and by minimisation; the train with it seized, lost and at half damping."""
    from quillshaft.cli.study_output import put_text
    from quillshaft.study.damper_optimum import DamperError
    from quillshaft.study.dampers import study_dampers
    from quillshaft.train.problems import TrainFileError
    from quillshaft.train.read import load

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    try:
        studies = study_dampers(load(train, tuple(case or ())), name, mode)
    except (DamperError, TrainFileError) as error:
        refuse(str(error))
    if json is not None:
        from quillshaft.present.damper_words import dampers_json

        put_text(dampers_json(studies), json)
    if json != "-":
        _show(studies, console())


def _show(studies: tuple[DamperStudy, ...], out: Console) -> None:
    from quillshaft.present import damper_words as words
    from quillshaft.present.tables import make_table
    from quillshaft.present.units import SHOWN

    units = SHOWN[studies[0].train.units]
    for study in studies:
        for line in words.damper_lines(study):
            out.print(line)
        out.print()
        if study.suggestion is not None:
            heads = words.CHOICE_HEADS.format(torque=units.torque)
            title = f"{study.damper.name} on mode {study.suggestion.mode}"
            out.print(make_table(title, heads, words.choice_rows(study.suggestion, units.per_nm)))
            out.print()
        out.print(
            make_table(
                "States of the damper (--case takes these names)", words.case_heads(study), words.case_rows(study)
            )
        )
        for case in study.cases:
            if case.problem is not None:
                out.print(f"{case.name}: {case.problem}")
        out.print()
