"""`quillshaft orders`: how the cylinders of an engine or reciprocating compressor add up, order by order."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, TrainPath
from quillshaft.cli.output import check_folder, check_target, console, refuse, write_many

if TYPE_CHECKING:
    from rich.console import Console

    from quillshaft.assess.orders import OrderStudy


def orders(
    train: TrainPath,
    machine: Annotated[
        str | None, typer.Option(metavar="NAME", help="The engine or compressor; needed where there are several.")
    ] = None,
    case: Cases = None,
    json: JsonPath = None,
    charts: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the star diagrams as a PDF file.")] = None,
) -> None:
    """Orders of an engine or reciprocating compressor: phase-vector sums, major and minor, torques."""
    from quillshaft.assess.orders import OrdersError, order_study
    from quillshaft.cli.study_output import figure_maker, file_name, put_text
    from quillshaft.cli.work import screened

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    if charts is not None:
        check_folder(charts)
    try:
        study = order_study(screened(train, case), machine)
    except OrdersError as error:
        refuse(str(error))
    if json is not None:
        from quillshaft.present.order_json import order_json

        put_text(order_json(study), json)
    if json != "-":
        _show(study, console())
    if charts is not None:
        from quillshaft.present.charts.stars import star_diagrams

        title = f"{study.screening.train.title}: orders of {study.machine.name}"
        files = {file_name(f"orders-{study.machine.name}"): figure_maker(star_diagrams(study), title)}
        for path in write_many(charts, files):
            console(quiet=json == "-").print(f"Wrote {path}")


def _show(study: OrderStudy, out: Console) -> None:
    from quillshaft.present import order_words as words
    from quillshaft.present.tables import make_table

    out.print(words.order_title(study), style="bold")
    for line in words.order_sentences(study):
        out.print(line)
    out.print()
    heads = words.cylinder_heads(study)
    columns = "|".join((f"{heads[0]}>", heads[1], *(f"{head}>" for head in heads[2:5]), heads[5]))
    out.print(make_table("Cylinders", columns, words.cylinder_rows(study)))
    out.print()
    heads = words.order_heads(study)
    columns = "|".join((f"{heads[0]}>", heads[1], *(f"{head}>" for head in heads[2:])))
    out.print(make_table("Orders", columns, words.order_rows(study)))
    out.print(words.order_note(study))
