"""`quillshaft drift`: one number of the file taken to another value, and where interferences first appear."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, TrainPath
from quillshaft.cli.output import check_folder, check_target, console, refuse, write_many


def drift(
    train: TrainPath,
    datum: Annotated[
        str, typer.Option(metavar="PATH", help="The number that drifts, such as stations.impeller.inertia.")
    ],
    start: Annotated[str, typer.Option("--from", metavar="VALUE", help='Where it starts, such as "6.2 kg m^2".')],
    end: Annotated[str, typer.Option("--to", metavar="VALUE", help='Where it ends, such as "4.9 kg m^2".')],
    steps: Annotated[int, typer.Option(metavar="N", help="Values along the way, both ends among them.")] = 41,
    case: Cases = None,
    json: JsonPath = None,
    charts: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the chart as a PDF file.")] = None,
) -> None:
    """Natural frequencies as one number of the file drifts, and where each interference first appears."""
    from quillshaft.cli.study_output import figure_maker, progress_bar, put_text
    from quillshaft.study.datum import DatumError
    from quillshaft.study.drift import drift as sweep
    from quillshaft.train.problems import TrainFileError
    from quillshaft.train.read import load

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    if charts is not None:
        check_folder(charts)
    try:
        with progress_bar("Values along the way") as progress:
            found = sweep(load(train, tuple(case or ())), datum, start, end, steps, progress)
    except DatumError as error:
        refuse(f"--{error}")
    except TrainFileError as error:
        refuse(str(error))
    if json is not None:
        from quillshaft.present.drift_json import drift_json

        put_text(drift_json(found), json)
    if json != "-":
        from quillshaft.cli.show_drift import show_drift

        show_drift(found, console())
    if charts is not None:
        from quillshaft.present.charts.drift import drift_chart

        make = figure_maker(drift_chart(found), f"{found.train.title}: drift")
        for path in write_many(charts, {"drift.pdf": make}):
            console(quiet=json == "-").print(f"Wrote {path}")
