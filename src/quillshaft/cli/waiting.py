"""A sign of life for work that cannot say how far it is: on a terminal, once it takes over two seconds."""

from __future__ import annotations

import sys
import threading
from collections.abc import Iterator
from contextlib import contextmanager

from quillshaft.cli.study_output import SHOWN_AFTER_S


@contextmanager
def waiting(what: str) -> Iterator[None]:
    """A moving bar on standard error where that is a terminal and the work takes over two seconds."""
    if not sys.stderr.isatty():
        yield
        return
    from rich.console import Console
    from rich.progress import Progress as Bar

    bar = Bar(console=Console(stderr=True), transient=True)
    bar.add_task(what, total=None)
    timer = threading.Timer(SHOWN_AFTER_S, bar.start)
    timer.daemon = True
    timer.start()
    try:
        yield
    finally:
        timer.cancel()
        timer.join()
        bar.stop()
