"""`quillshaft screen`: natural frequencies, margins, critical speeds and verdicts."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, Temperature, TrainPath
from quillshaft.cli.output import check_folder, check_target, console, write_many

if TYPE_CHECKING:
    from quillshaft.study.levers import WaysOut


def screen(
    train: TrainPath,
    case: Cases = None,
    json: JsonPath = None,
    charts: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the charts as PDF files.")] = None,
    csv: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the result tables as CSV files.")] = None,
    every: Annotated[bool, typer.Option("--all", help="Show every pair of mode and source.")] = False,
    levers: Annotated[bool, typer.Option(help="Show the cheapest ways out of each interference.")] = False,
    at: Temperature = None,
    temperatures: Annotated[
        bool, typer.Option(help="Show the couplings cold, at 30 degC and hot in one call.")
    ] = False,
    strict: Annotated[bool, typer.Option(help="Exit with 3 when the worst case is not clear.")] = False,
) -> None:
    """Natural frequencies, margins, critical speeds and verdicts."""
    from quillshaft.cli.show import show_screening
    from quillshaft.cli.work import chart_makers, put_json, screened, temperature_of

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    if charts is not None:
        check_folder(charts)
    if csv is not None:
        from quillshaft.cli.csv_output import check_csv_folder, put_csv

        check_csv_folder(csv, train)
    screening = screened(train, case, temperature_of(at))
    written = [] if charts is None else write_many(charts, chart_makers(screening))
    if csv is not None:
        written += put_csv(screening, csv)
    found: tuple[WaysOut, ...] = ()
    if levers:
        from quillshaft.cli.more_output import find_levers, put_json_with_levers, show_levers

        found = find_levers(screening)
    if temperatures:
        from quillshaft.cli.temperatures import show_temperatures

        show_temperatures(screening, console(quiet=json == "-"), None if levers else json)
    if json is not None and levers:
        put_json_with_levers(screening, found, json)
    elif json is not None and not temperatures:
        put_json(screening, json)
    if json != "-":
        show_screening(screening, console(), every)
    if json != "-" and levers:
        show_levers(screening, found, console())
    for path in written:
        console(quiet=json == "-").print(f"Wrote {path}")
    if strict and screening.worst_verdict != "clear":
        raise typer.Exit(3)
