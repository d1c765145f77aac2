"""`quillshaft new`: a commented train file to start from, or the train of a mass-elastic table."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Annotated

import typer

from quillshaft.cli.output import check_target, console, refuse, write_whole


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
