"""The command line: parse, call, print."""

from __future__ import annotations

import gc
import io
import os
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.compare_command import compare
from quillshaft.cli.damped_command import damped
from quillshaft.cli.damper_command import damper
from quillshaft.cli.drift_command import drift
from quillshaft.cli.orders_command import orders
from quillshaft.cli.output import check_folder, check_target, console, refuse, write_many, write_whole
from quillshaft.cli.respond_command import respond
from quillshaft.cli.tolerance_command import tolerance
from quillshaft.cli.windows_command import windows

if TYPE_CHECKING:
    from quillshaft.study.levers import WaysOut

gc.set_threshold(500_000, 50, 50)  # start-up makes many objects that live to the end: look for garbage rarely

app = typer.Typer(
    help="Torsional analysis of drivetrains, from the train file to a report ready for sign-off.",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
)

TrainPath = Annotated[Path, typer.Argument(help="The train file (TOML).", show_default=False)]
Cases = Annotated[
    list[str] | None,
    typer.Option("--case", metavar="NAME", help="Lay this case over the file; several are laid in turn."),
]
JsonPath = Annotated[
    str | None,
    typer.Option("--json", metavar="PATH", help="Write the numbers as JSON; - is standard output."),
]


@app.callback(invoke_without_command=True)
def main(
    context: typer.Context,
    version: Annotated[bool, typer.Option("--version", help="Print the version.")] = False,
) -> None:
    """Torsional analysis of drivetrains, from the train file to a report ready for sign-off."""
    if version:
        from quillshaft.version import __version__

        typer.echo(f"quillshaft {__version__}")
        raise typer.Exit
    if context.invoked_subcommand is None:
        typer.echo(context.get_help())
        raise typer.Exit


@app.command()
def new(
    out: Annotated[Path, typer.Argument(help="The train file to write.", show_default=False)],
    kind: Annotated[str, typer.Option(help="pump | generator-set | fan")] = "pump",
    schema: Annotated[
        Path | None,
        typer.Option(metavar="PATH", help="Also write the JSON schema, for editors that complete it."),
    ] = None,
    table: Annotated[
        Path | None,
        typer.Option("--from", metavar="TABLE", help="Make it of a mass-elastic table, CSV or .xlsx."),
    ] = None,
    rated: Annotated[
        str | None, typer.Option(metavar="SPEED", help="With --from: rated speed of the table's first station.")
    ] = None,
    force: Annotated[bool, typer.Option(help="Replace an existing file.")] = False,
) -> None:
    """Write a commented train file that screens as it stands, or the train of a mass-elastic table."""
    from quillshaft.train.problems import did_you_mean
    from quillshaft.train.starters import KINDS, schema_text, starter_text

    if kind not in KINDS:
        hint = did_you_mean(kind, KINDS) or "."
        refuse(f"--kind {kind}: there is no such kind{hint} Allowed: {' | '.join(KINDS)}.")
    if schema is not None and os.path.realpath(schema) == os.path.realpath(out):
        refuse(f"{schema}: the train file and its schema need two files")
    for target in (out, schema):
        if target is not None:
            check_target(target)
            if target.exists() and not force:
                refuse(f"{target}: exists already; --force replaces it")
    if rated is not None and table is None:
        refuse("--rated goes with --from TABLE: a starter holds its own speed")
    if table is not None:
        from quillshaft.cli.new_from_table import new_from_table

        check_target(out, table)
        new_from_table(out, table, rated)
    else:
        write_whole(out, starter_text(kind).encode())
    if schema is not None:
        write_whole(schema, schema_text().encode())
    if table is None:
        console().print(f"Wrote {out}. Next: quillshaft check {out}")


@app.command()
def check(
    train: TrainPath,
    case: Cases = None,
    questions: Annotated[bool, typer.Option(help="Show only what to ask each supplier, as a numbered list.")] = False,
) -> None:
    """Show what the file says: the equivalent system, mean torques, sources, what was assumed, what is odd."""
    from quillshaft.cli.show import show_check
    from quillshaft.cli.work import check_all_cases, screened

    screening = screened(train, case)
    if not case:
        check_all_cases(train)
    if questions:
        from quillshaft.cli.more_output import show_questions

        show_questions(screening, console())
    else:
        show_check(screening, console())


@app.command()
def screen(
    train: TrainPath,
    case: Cases = None,
    json: JsonPath = None,
    charts: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the charts as PDF files.")] = None,
    csv: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the result tables as CSV files.")] = None,
    every: Annotated[bool, typer.Option("--all", help="Show every pair of mode and source.")] = False,
    levers: Annotated[bool, typer.Option(help="Show the cheapest ways out of each interference.")] = False,
    at: Annotated[
        str | None, typer.Option(metavar="TEMP", help='Couplings cold, hot, or at one temperature: "65 degC".')
    ] = None,
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


@app.command()
def report(
    train: TrainPath,
    case: Cases = None,
    out: Annotated[
        Path | None,
        typer.Option(metavar="FILE.pdf", help="Default: reports/, named after document and revision."),
    ] = None,
    json: JsonPath = None,
    windows: Annotated[
        list[str] | None, typer.Option("--windows", metavar="LINK", help="Add the stiffness windows of this link.")
    ] = None,
    compare: Annotated[
        list[str] | None, typer.Option("--compare", metavar="CASE", help="Add this case before and after.")
    ] = None,
    tolerance: Annotated[int | None, typer.Option(metavar="N", help="Add a tolerance study of N samples.")] = None,
    seed: Annotated[int, typer.Option(help="Seed of the tolerance study.")] = 1,
    drift: Annotated[
        tuple[str, str, str] | None, typer.Option(metavar="DATUM FROM TO", help="Add the drift of one number.")
    ] = None,
    temperatures: Annotated[bool, typer.Option(help="Add the couplings cold, at 30 degC and hot.")] = False,
    levers: Annotated[bool, typer.Option(help="Add the cheapest ways out of each interference.")] = False,
    questions: Annotated[bool, typer.Option(help="Add the questions to each supplier.")] = False,
    damped: Annotated[bool, typer.Option(help="Add the damped modes.")] = False,
    orders: Annotated[bool, typer.Option(help="Add the orders of engines and reciprocating compressors.")] = False,
    response: Annotated[bool, typer.Option(help="Add the forced response; the verdict is then what it makes.")] = False,
    strict: Annotated[bool, typer.Option(help="Exit with 3 when the worst case is not clear.")] = False,
) -> None:
    """Write the report as PDF, with the studies asked for."""
    from quillshaft.cli.report_studies import Asked, work_out
    from quillshaft.cli.work import check_pdf, put_json, report_bytes, report_path, screened

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    if out is not None:
        check_target(out, train)
        check_pdf(out)
    screening = screened(train, case)
    target = out or report_path(screening)
    check_target(target, train)
    chosen = (temperatures, levers, questions, damped, orders, response)
    asked = Asked(tuple(windows or ()), tuple(compare or ()), tolerance, seed, drift, *chosen)
    studies = work_out(screening, asked)
    write_whole(target, report_bytes(screening, studies))
    if json is not None:
        put_json(screening, json)
    from quillshaft.present.words import case_lines, verdict_sentence

    said = console(quiet=json == "-")
    said.print(f"Nominal: {verdict_sentence(screening, worst=False)}")
    said.print(f"Over the tolerances: {verdict_sentence(screening, worst=True)}")
    for line in case_lines(screening):
        said.print(line)
    open_still = screening.worst_verdict != "clear"
    if studies is not None and studies.response is not None:
        from quillshaft.cli.show_response import say_answer

        open_still = not say_answer(studies.response, said)
    said.print(f"Wrote {target}")
    if strict and open_still:
        raise typer.Exit(3)


app.command()(compare)
app.command()(windows)
app.command()(tolerance)
app.command()(drift)
app.command()(damper)
app.command()(damped)
app.command()(orders)
app.command()(respond)


def run() -> None:
    """Entry point of the command; a closed pipe ends it quietly, a full disk with one line and exit code 2."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")
    try:
        app()
    except BrokenPipeError:
        sys.stderr.close()
        raise SystemExit(1) from None
    except OSError as error:
        sys.stderr.write(f"The output cannot be written: {error.strerror or error}\n")
        raise SystemExit(2) from None
    finally:
        gc.freeze()  # and do not look through all of them once more on the way out


if __name__ == "__main__":
    run()
