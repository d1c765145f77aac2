"""`quillshaft check`: what the file says, and what was made of it."""

from __future__ import annotations

from typing import Annotated

import typer

from quillshaft.cli.options import Cases, TrainPath
from quillshaft.cli.output import console


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
