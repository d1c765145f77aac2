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
    folder = os.path.dirname(os.path.realpath(path))
    if source is not None and os.path.realpath(path) == os.path.realpath(source):
        refuse(f"{path}: this is the train file; name another file")
    if os.path.isdir(path):
        refuse(f"{path}: this is a folder; name a file")
    if not os.path.isdir(folder):
        refuse(f"{path}: there is no folder {path.parent}")
    try:
        os.lstat(path)
    except FileNotFoundError:
        pass
    except OSError as error:
        refuse(f"{path}: cannot be written: {error.strerror}")
    if os.path.exists(path) and not os.access(path, os.W_OK):
        refuse(f"{path}: exists and must not be written to")
    if not _is_stream(path) and not os.access(folder, os.W_OK):
        refuse(f"{path}: the folder {path.parent} cannot be written to")


def _is_stream(path: Path) -> bool:
    """Whether a path is an existing device or pipe, which is written to and must never be replaced."""
    return os.path.exists(path) and not os.path.isfile(path)


def write_whole(path: Path, data: bytes) -> None:
    """Write a file whole or not at all; an existing one stays until the new one is complete.

    A device or a pipe is written to as it is. Raises typer.Exit with code 2 where the place cannot be written.
    """
    check_target(path)
    try:
        if _is_stream(path):
            path.write_bytes(data)
        else:
            _replace(os.path.realpath(path), data)
    except (OSError, ValueError) as error:
        refuse(f"{path}: cannot be written: {getattr(error, 'strerror', None) or error}")


def _replace(target: str, data: bytes) -> None:
    handle, name = tempfile.mkstemp(prefix=".writing-", dir=os.path.dirname(target))
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(data)
        os.chmod(name, _mode_for(target))
        os.replace(name, target)
    except BaseException:
        with contextlib.suppress(OSError):
            os.unlink(name)
        raise


def _mode_for(target: str) -> int:
    """Permissions of the file that is replaced, or those of a new one."""
    if os.path.exists(target):
        return os.stat(target).st_mode & 0o777
    mask = os.umask(0)
    os.umask(mask)
    return 0o666 & ~mask


def check_folder(folder: Path) -> None:
    """Refuse early a folder that cannot be made or written to."""
    there = os.path.exists(folder)
    if there and not os.path.isdir(folder):
        refuse(f"{folder}: this is a file; name a folder")
    if not there and not os.path.isdir(folder.parent):
        refuse(f"{folder}: there is no folder {folder.parent}")
    if not os.access(folder if there else folder.parent, os.W_OK):
        refuse(f"{folder}: cannot be written to")


def make_folder(folder: Path) -> None:
    """Make a folder unless it is there. Raises typer.Exit with code 2 where it cannot be made."""
    try:
        folder.mkdir(exist_ok=True)
    except (OSError, ValueError) as error:
        refuse(f"{folder}: cannot be made: {getattr(error, 'strerror', None) or error}")


def write_many(folder: Path, files: dict[str, Callable[[], bytes]]) -> list[Path]:
    """Make every file's bytes first, then write them all into `folder` (made if its parent exists)."""
    check_folder(folder)
    made = {name: make() for name, make in files.items()}
    make_folder(folder)
    for name, data in made.items():
        write_whole(folder / name, data)
    return [folder / name for name in made]
