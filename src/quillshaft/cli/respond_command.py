"""`quillshaft respond`: alternating torques against limits over speed, and what becomes of each open interference."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, Temperature, TrainPath
from quillshaft.cli.output import check_folder, check_target, console, refuse, write_many

if TYPE_CHECKING:
    from collections.abc import Callable

    from quillshaft.assess.response_results import Response
    from quillshaft.assess.results import Screening


def respond(
    train: TrainPath,
    case: Cases = None,
    at: Temperature = None,
    link: Annotated[
        list[str] | None, typer.Option("--link", metavar="NAME", help="Show only this link in the long tables.")
    ] = None,
    every: Annotated[
        bool, typer.Option("--all", help="Show every finding, cases, limits and where to measure.")
    ] = False,
    json: JsonPath = None,
    csv: Annotated[Path | None, typer.Option(metavar="DIR", help="Write torques and findings as CSV files.")] = None,
    charts: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the charts as PDF files.")] = None,
    strict: Annotated[bool, typer.Option(help="Exit with 3 when anything fails or is left open.")] = False,
) -> None:
    """Forced response: torque, stress and heat against limits, what was open, what operation must keep to."""
    from quillshaft.assess.response_standing import standing
    from quillshaft.cli.show_response import show_response
    from quillshaft.cli.study_output import put_text
    from quillshaft.cli.work import screened_alone, temperature_of

    _check_targets(train, json, csv, charts)
    screening = screened_alone(train, case, temperature_of(at))
    links = _known_links(screening, link)
    response = response_of(screening)
    written = _put_files(response, csv, charts)
    if json is not None:
        from quillshaft.present.response_json import response_json

        put_text(response_json(response), json)
    if json != "-":
        show_response(response, console(), links, every)
    for path in written:
        console(quiet=json == "-").print(f"Wrote {path}")
    if strict and not standing(response).clean:
        raise typer.Exit(3)


def response_of(screening: Screening) -> Response:
    """The response of a screened train, with a sign of life where it takes long; code 2 where the file gives none."""
    from quillshaft.assess.response.respond import respond as work_out
    from quillshaft.cli.waiting import waiting
    from quillshaft.train.problems import TrainFileError

    try:
        with waiting("Forced response"):
            return work_out(screening)
    except TrainFileError as error:
        refuse(str(error))


def _check_targets(train: Path, json: str | None, csv: Path | None, charts: Path | None) -> None:
    """Refuse early what cannot be written."""
    from quillshaft.present.response_csv import RESPONSE_FILES

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    for folder in (csv, charts):
        if folder is not None:
            check_folder(folder)
    if csv is not None and csv.exists():
        for name in RESPONSE_FILES:
            check_target(csv / name, train)


def _known_links(screening: Screening, asked: list[str] | None) -> tuple[str, ...] | None:
    """The links asked for; leaves with exit code 2 where one does not exist."""
    from quillshaft.train.problems import did_you_mean

    names = [link.name for link in screening.graph.links]
    for name in asked or ():
        if name not in names:
            hint = did_you_mean(name, names) or "."
            refuse(f"--link {name}: there is no link of this name{hint} Links: {', '.join(names)}.")
    return tuple(asked) if asked else None


def _put_files(response: Response, csv: Path | None, charts: Path | None) -> list[Path]:
    """CSV tables and charts into their folders; the paths written."""
    written: list[Path] = []
    if csv is not None:
        from quillshaft.present.response_csv import response_csv

        written += write_many(csv, {name: text.encode for name, text in response_csv(response).items()})
    if charts is not None:
        written += write_many(charts, _chart_makers(response))
    return written


def _chart_makers(response: Response) -> dict[str, Callable[[], bytes]]:
    """File name -> function that makes the chart's PDF."""
    from quillshaft.cli.study_output import figure_maker
    from quillshaft.present.charts import response_files

    title = response.screening.train.title
    return {name: figure_maker(figure, f"{title}: {name}") for name, figure in response_files(response).items()}
