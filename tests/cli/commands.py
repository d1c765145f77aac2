"""The command as a user runs it: in this process, or in one of its own."""

from __future__ import annotations

import contextlib
import io
import os
import subprocess
import sys
from dataclasses import dataclass
from pathlib import Path

import pytest

from quillshaft.cli.main import run


@dataclass(frozen=True)
class Ended:
    """How a command ended: exit code, standard output, standard error."""

    code: int
    out: str
    err: str


def command(*arguments: str | Path) -> Ended:
    """The command in this process."""
    out, err = io.StringIO(), io.StringIO()
    before = sys.argv
    sys.argv = ["quillshaft", *map(str, arguments)]
    try:
        with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err), pytest.raises(SystemExit) as ended:
            run()
    finally:
        sys.argv = before
    return Ended(int(ended.value.code or 0), out.getvalue(), err.getvalue())


def process(*arguments: str | Path, folder: Path, **environment: str) -> subprocess.CompletedProcess[bytes]:
    """The command in a process of its own, which is no terminal."""
    words = [sys.executable, "-m", "quillshaft.cli.main", *map(str, arguments)]
    env = {**os.environ, **environment}
    return subprocess.run(words, cwd=folder, env=env, capture_output=True, check=False, timeout=60)
