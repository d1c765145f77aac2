"""The command line: parse, call, print."""

from __future__ import annotations

import gc
import io
import sys
from importlib import import_module
from typing import Annotated

import typer

gc.set_threshold(500_000, 50, 50)  # start-up makes many objects that live to the end: look for garbage rarely

COMMANDS = (
    "new", "check", "screen", "report", "compare", "windows", "tolerance", "drift", "damper", "damped", "orders",
    "respond",
)  # fmt: skip
"""Each is the function of its name in `<name>_command.py`, in the order of the help."""


def application(words: list[str]) -> typer.Typer:
    """The command line for these words: only the command they name is loaded, as taking one apart takes time."""
    app = typer.Typer(
        help="Torsional analysis of drivetrains, from the train file to a report ready for sign-off.",
        no_args_is_help=True,
        add_completion=False,
        pretty_exceptions_enable=False,
    )
    app.callback(invoke_without_command=True)(main)
    for name in words[:1] if words and words[0] in COMMANDS else COMMANDS:
        app.command()(getattr(import_module(f"quillshaft.cli.{name}_command"), name))
    return app


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


def run() -> None:
    """Entry point of the command; a closed pipe ends it quietly, a full disk with one line and exit code 2."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")
    try:
        application(sys.argv[1:])()
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
