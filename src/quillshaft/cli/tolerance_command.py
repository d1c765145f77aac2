"""`quillshaft tolerance`: how sure the verdicts are when stiffness and inertia deviate, and what decides them."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, TrainPath
from quillshaft.cli.output import check_folder, check_target, console, refuse, write_many

if TYPE_CHECKING:
    from quillshaft.study.spread import Distribution


def tolerance(
    train: TrainPath,
    case: Cases = None,
    samples: Annotated[int, typer.Option(metavar="N", help="Variants of the train to draw.")] = 10_000,
    seed: Annotated[int, typer.Option(metavar="S", help="The same seed draws the same variants.")] = 1,
    distribution: Annotated[
        str,
        typer.Option(
            metavar="NAME",
            help="uniform | triangular | normal (a tolerance is two standard deviations, cut off there).",
        ),
    ] = "uniform",
    json: JsonPath = None,
    charts: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the chart as a PDF file.")] = None,
) -> None:
    """Bounds of every natural frequency, the chance that each pair is not clear, and the data that decide it."""
    from quillshaft.cli.study_output import figure_maker, progress_bar, put_text
    from quillshaft.cli.work import screened
    from quillshaft.study.tolerance import tolerance_study

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    if charts is not None:
        check_folder(charts)
    screening = screened(train, case)
    kind: Distribution = distribution  # type: ignore[assignment]  # checked by the study
    try:
        with progress_bar("Variants of the train") as progress:
            study = tolerance_study(screening, samples, seed, kind, progress=progress)
    except ValueError as error:
        refuse(f"--{error}")
    if json is not None:
        from quillshaft.present.tolerance_json import tolerance_json

        put_text(tolerance_json(study), json)
    if json != "-":
        from quillshaft.cli.show_tolerance import show_tolerance

        show_tolerance(study, console())
    if charts is not None:
        from quillshaft.present.charts.tolerance import tolerance_chart

        make = figure_maker(tolerance_chart(study), f"{screening.train.title}: tolerance")
        for path in write_many(charts, {"tolerance.pdf": make}):
            console(quiet=json == "-").print(f"Wrote {path}")
