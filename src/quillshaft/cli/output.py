"""What every command shares: consoles, problems to standard error, files written whole or not at all."""

from __future__ import annotations

import contextlib
import os
import sys
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import NoReturn

import typer
from rich.console import Console

WIDTH_WITHOUT_TERMINAL = 160


def console(quiet: bool = False) -> Console:
    """Standard output, or standard error where standard output carries JSON; wide when it is no terminal."""
    stream = sys.stderr if quiet else sys.stdout
    width = None if stream.isatty() else WIDTH_WITHOUT_TERMINAL
    return Console(file=stream, width=width, highlight=False, markup=False, soft_wrap=False)


def refuse(text: str) -> NoReturn:
    """Print why the input cannot be used and leave with exit code 2. Raises typer.Exit."""
    sys.stderr.write(text.rstrip("\n") + "\n")
    raise typer.Exit(2)


def check_target(path: Path, source: Path | None = None) -> None:
    """Refuse early a place that cannot be written, or that is the train file itself (`source`)."""
    if source is not None and path.exists() and source.exists() and path.samefile(source):
        refuse(f"{path}: this is the train file; name another file")
    if path.is_dir():
        refuse(f"{path}: this is a folder; name a file")
    if not path.parent.is_dir():
        refuse(f"{path}: there is no folder {path.parent}")
    if not os.access(path.parent, os.W_OK):
        refuse(f"{path}: the folder {path.parent} cannot be written to")


def write_whole(path: Path, data: bytes) -> None:
    """Write a file whole or not at all; an existing one stays until the new one is complete."""
    check_target(path)
    try:
        handle, name = tempfile.mkstemp(prefix=".writing-", dir=path.parent)
    except OSError as error:
        refuse(f"{path}: cannot be written: {error.strerror}")
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(data)
        mask = os.umask(0)
        os.umask(mask)
        os.chmod(name, 0o666 & ~mask)
        os.replace(name, path)
    except OSError as error:
        with contextlib.suppress(OSError):
            os.unlink(name)
        refuse(f"{path}: cannot be written: {error.strerror}")
    except BaseException:
        with contextlib.suppress(OSError):
            os.unlink(name)
        raise


def check_folder(folder: Path) -> None:
    """Refuse early a folder that cannot be made or written to."""
    if folder.exists() and not folder.is_dir():
        refuse(f"{folder}: this is a file; name a folder")
    if not folder.exists() and not folder.parent.is_dir():
        refuse(f"{folder}: there is no folder {folder.parent}")
    if not os.access(folder if folder.exists() else folder.parent, os.W_OK):
        refuse(f"{folder}: cannot be written to")


def write_many(folder: Path, files: dict[str, Callable[[], bytes]]) -> list[Path]:
    """Make every file's bytes first, then write them all into `folder` (made if its parent exists)."""
    check_folder(folder)
    made = {name: make() for name, make in files.items()}
    folder.mkdir(exist_ok=True)
    for name, data in made.items():
        write_whole(folder / name, data)
    return [folder / name for name in made]
