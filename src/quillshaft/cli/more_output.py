"""What `screen --levers` and `check --questions` add."""

from __future__ import annotations

from typing import TYPE_CHECKING

from quillshaft.assess.results import Screening

if TYPE_CHECKING:
    from rich.console import Console

    from quillshaft.study.levers import WaysOut


def find_levers(screening: Screening) -> tuple[WaysOut, ...]:
    """The ways out of every interference, with a bar where it takes long."""
    from quillshaft.cli.study_output import progress_bar
    from quillshaft.study.levers import levers

    with progress_bar("Ways out") as progress:
        return levers(screening, progress)


def put_json_with_levers(screening: Screening, found: tuple[WaysOut, ...], target: str) -> None:
    """The screening's JSON with "levers" in it, to a file, or to standard output for "-"."""
    from quillshaft.cli.study_output import put_text
    from quillshaft.present.lever_rows import levers_data
    from quillshaft.present.results_json import screening_data, to_json

    put_text(to_json({**screening_data(screening), "levers": levers_data(found)}), target)


def show_levers(screening: Screening, found: tuple[WaysOut, ...], out: Console) -> None:
    """Each interference with its cheapest ways out, and the elements that cannot help."""
    from quillshaft.present.lever_rows import LEVER_HEADS, lever_notes, lever_rows, ways_title
    from quillshaft.present.tables import make_table

    columns = "|".join((LEVER_HEADS[0], *(f"{head}>" for head in LEVER_HEADS[1:6]), LEVER_HEADS[6]))
    out.print()
    if not found:
        out.print("No interference needs a way out.")
    for number, ways in enumerate(found):
        if number:
            out.print()
        title = ways_title(screening, ways)
        if ways.levers:
            out.print(make_table(title, columns, lever_rows(screening, ways)))
        else:
            out.print(title, style="bold")
        for line in lever_notes(screening, ways):
            out.print(line)


def show_questions(screening: Screening, out: Console) -> None:
    """The questions to each supplier as text."""
    from quillshaft.present.question_rows import question_lines

    for line in question_lines(screening):
        out.print(line)
