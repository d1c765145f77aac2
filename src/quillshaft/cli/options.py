"""Options that several commands share."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

TrainPath = Annotated[Path, typer.Argument(help="The train file (TOML).", show_default=False)]
Cases = Annotated[
    list[str] | None,
    typer.Option("--case", metavar="NAME", help="Lay this case over the file; several are laid in turn."),
]
JsonPath = Annotated[
    str | None, typer.Option("--json", metavar="PATH", help="Write the numbers as JSON; - is standard output.")
]
Temperature = Annotated[
    str | None, typer.Option(metavar="TEMP", help='Couplings cold, hot, or at one temperature: "65 degC".')
]
