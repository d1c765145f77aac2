"""`quillshaft compare`: a train before and after a change."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.options import JsonPath, TrainPath
from quillshaft.cli.output import check_folder, check_target, console, refuse, write_many, write_whole

if TYPE_CHECKING:
    from rich.console import Console

    from quillshaft.assess.results import Screening
    from quillshaft.study.compare import Comparison


def compare(
    train: TrainPath,
    case: Annotated[
        list[str] | None,
        typer.Option("--case", metavar="NAME", help="A case to set against the base; several stand side by side."),
    ] = None,
    json: JsonPath = None,
    out: Annotated[
        Path | None, typer.Option(metavar="FILE.pdf", help="Write the before-and-after sheet as PDF.")
    ] = None,
    charts: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the charts as PDF files.")] = None,
) -> None:
    """What a change does: the base and its cases side by side, and what must be approved anew."""
    from quillshaft.cli.work import screened

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    if out is not None:
        check_target(out, train)
    if charts is not None:
        check_folder(charts)
    base = screened(train, None)
    comparison = _compared(base, _names(base, case))
    written = [] if charts is None else write_many(charts, _charts(comparison))
    if out is not None:
        from quillshaft.present.report.comparison import comparison_pdf

        write_whole(out, comparison_pdf(comparison))
        written.append(out)
    if json is not None:
        from quillshaft.cli.study_output import put_text
        from quillshaft.present.comparison_json import comparison_json

        put_text(comparison_json(comparison), json)
    if json != "-":
        show_comparison(comparison, console())
    for path in written:
        console(quiet=json == "-").print(f"Wrote {path}")


def _names(base: Screening, given: list[str] | None) -> tuple[str, ...]:
    """The cases asked for; leaves with exit code 2 where there is none, or one is named twice."""
    from quillshaft.train.overlay import case_names

    known = case_names(base.train.file.data)
    if not given:
        listed = f"this file has {', '.join(known)}" if known else "this file has no cases: write [cases.NAME]"
        refuse(f"--case: name the case to set against the base; {listed}")
    twice = [name for name in dict.fromkeys(given) if given.count(name) > 1]
    if twice:
        refuse(f"--case {twice[0]}: this case is named twice")
    return tuple(given)


def _compared(base: Screening, names: tuple[str, ...]) -> Comparison:
    from quillshaft.study.compare import compare_cases
    from quillshaft.train.problems import TrainFileError

    try:
        return compare_cases(base, names)
    except TrainFileError as error:
        refuse(str(error))


def _charts(comparison: Comparison) -> dict[str, Callable[[], bytes]]:
    from quillshaft.cli.study_output import figure_maker, file_name
    from quillshaft.present.charts.comparison import comparison_chart

    title = comparison.base.train.title
    return {
        file_name(f"compare-{case.name}"): figure_maker(
            comparison_chart(comparison.base, case), f"{title}: {case.name}"
        )
        for case in comparison.cases
    }


def show_comparison(comparison: Comparison, out: Console) -> None:
    """Verdicts before and after, inputs that differ, modes, margins and duties side by side, what to re-approve."""
    from quillshaft.present import comparison_tables as tables
    from quillshaft.present import comparison_words as words
    from quillshaft.present.words import range_words

    train = comparison.base.train
    out.print(f"{train.title}{f' ({train.tag})' if train.tag else ''}: before and after", style="bold")
    out.print(f"Judged range: {range_words(comparison.base)}")
    for line in words.outcome_lines("Base", comparison.base):
        out.print(line)
    for case in comparison.cases:
        out.print()
        out.print(words.case_title(case), style="bold")
        for line in words.outcome_lines(case.name, case.screening):
            out.print(line)
        out.print(tables.changes_table(case))
    for table in (tables.matched_table, tables.margins_table, tables.duties_table):
        out.print()
        out.print(table(comparison))
    for line in [f"{case.name}: {line}" for case in comparison.cases for line in words.mode_notes(case)]:
        out.print(line)
    for case in comparison.cases:
        out.print()
        out.print(f"To be approved anew with {case.name}", style="bold")
        for number, line in enumerate(words.reapproval_sentences(case), start=1):
            out.print(f"{number}. {line}")
