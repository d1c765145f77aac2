"""`quillshaft report`: the PDF for sign-off, with the studies asked for."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, TrainPath
from quillshaft.cli.output import check_target, console, write_whole


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
