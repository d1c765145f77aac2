"""What the study commands share: JSON text to its place, a figure as a PDF, a bar for long work."""

from __future__ import annotations

import io
import re
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

from quillshaft.cli.output import write_whole

if TYPE_CHECKING:
    from matplotlib.figure import Figure

Progress = Callable[[int, int], None]
SHOWN_AFTER_S = 2.0


def put_text(text: str, target: str) -> None:
    """Write JSON text to a file, or to standard output for "-"."""
    from quillshaft.cli.work import _encodable as encodable

    if target == "-":
        sys.stdout.write(encodable(text))
        sys.stdout.flush()
    else:
        write_whole(Path(target), text.encode())


def file_name(stem: str) -> str:
    """A PDF's file name from any words."""
    return f"{re.sub(r'[^A-Za-z0-9._-]+', '-', stem).strip('-.') or 'chart'}.pdf"


def figure_maker(figure: Figure, title: str) -> Callable[[], bytes]:
    """A function that makes a figure's PDF."""

    def make() -> bytes:
        from quillshaft.present.pdf.figure import write_figure_pdf

        stream = io.BytesIO()
        write_figure_pdf(figure, stream, title)
        return stream.getvalue()

    return make


@contextmanager
def progress_bar(what: str) -> Iterator[Progress | None]:
    """A bar on standard error where that is a terminal and the work takes over two seconds; else None."""
    if not sys.stderr.isatty():
        yield None
        return
    from rich.console import Console
    from rich.progress import Progress as Bar

    begun = time.monotonic()
    with Bar(console=Console(stderr=True), transient=True, auto_refresh=False) as bar:
        task = bar.add_task(what, visible=False)

        def report(done: int, total: int) -> None:
            shown = time.monotonic() - begun > SHOWN_AFTER_S
            bar.update(task, completed=done, total=total, visible=shown, refresh=True)

        yield report
