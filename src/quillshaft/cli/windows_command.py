"""`quillshaft windows`: which stiffnesses of one link, or of two, keep every mode clear of every source."""

from __future__ import annotations

import io
import re
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager, suppress
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from quillshaft.cli.options import Cases, JsonPath, TrainPath
from quillshaft.cli.output import check_folder, check_target, console, refuse, write_many, write_whole

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from quillshaft.assess.results import Screening
    from quillshaft.study.window_bands import Orders
    from quillshaft.study.window_ranges import Range


def windows(
    train: TrainPath,
    link: Annotated[
        list[str] | None,
        typer.Option("--link", metavar="NAME", help="The link to ask about; given twice: a map of both."),
    ] = None,
    case: Cases = None,
    start: Annotated[
        list[str] | None,
        typer.Option("--from", metavar="STIFFNESS", help="Softest to search (default nominal/20); once a link."),
    ] = None,
    end: Annotated[
        list[str] | None,
        typer.Option("--to", metavar="STIFFNESS", help="Stiffest to search (default 20 × nominal); once a link."),
    ] = None,
    source: Annotated[
        list[str] | None, typer.Option("--source", metavar="NAME", help="Ask about this source only; repeatable.")
    ] = None,
    mode: Annotated[
        list[int] | None, typer.Option("--mode", metavar="NUMBER", help="Ask about this mode only; repeatable.")
    ] = None,
    orders: Annotated[str, typer.Option(metavar="major|all", help="Engine orders to count.")] = "all",
    factors: Annotated[
        tuple[float, float] | None,
        typer.Option(metavar="LOW HIGH", help="Stiffness factors over temperature (default: the coupling's table)."),
    ] = None,
    points: Annotated[int, typer.Option(metavar="N", help="Lines of the map of two links.")] = 97,
    json: JsonPath = None,
    charts: Annotated[Path | None, typer.Option(metavar="DIR", help="Write the chart as a PDF file.")] = None,
) -> None:
    """Stiffness windows: which stiffnesses of a link clear everything, exactly, and which are recommended."""
    from quillshaft.cli.work import screened
    from quillshaft.study.window_bands import AskError

    if json not in (None, "-"):
        check_target(Path(json or ""), train)
    if charts is not None:
        check_folder(charts)
    if not link or len(link) > 2:
        refuse("--link: name the link to ask about, or two for a map of both")
    screening = screened(train, case)
    searches = _searches(screening, link, start or [], end or [])
    asked = (_orders(orders), source, mode)
    try:
        if len(link) == 1:
            _one_link(screening, link[0], searches[0], asked, factors, json, charts)
        else:
            _two_links(screening, (link[0], link[1]), searches, asked, factors, points, json, charts)
    except AskError as error:
        refuse(str(error))


Asked = tuple["Orders", list[str] | None, list[int] | None]


def _orders(word: str) -> Orders:
    if word not in ("major", "all"):
        refuse(f"--orders {word}: this is neither major nor all")
    return "major" if word == "major" else "all"


def _searches(screening: Screening, links: list[str], starts: list[str], ends: list[str]) -> list[Range | None]:
    """The search range of each link, as asked for; what is left out is a twentieth and twenty times nominal."""
    from quillshaft.study.window_bands import AskError
    from quillshaft.study.window_tally import find_spring
    from quillshaft.study.windows import search_range

    for option, given in (("--from", starts), ("--to", ends)):
        if len(given) > len(links):
            refuse(f"{option}: given {len(given)} times for {len(links)} link{'s' if len(links) > 1 else ''}")
    searches: list[Range | None] = []
    for index, name in enumerate(links):
        try:
            low, high = search_range(find_spring(screening, name), None)
        except AskError as error:
            refuse(f"--{error}")
        if index < len(starts):
            low = _stiffness("--from", starts[index], screening)
        if index < len(ends):
            high = _stiffness("--to", ends[index], screening)
        searches.append((low, high))
    return searches


def _stiffness(option: str, text: str, screening: Screening) -> float:
    """A stiffness [N·m/rad] from an option; a bare number counts in the file's unit."""
    from quillshaft.train.quantity import QuantityError, read_quantity

    value: object = text
    with suppress(ValueError):
        value = float(text)
    try:
        return float(read_quantity(value, "stiffness", screening.train.units).value)
    except QuantityError as error:
        refuse(f"{option} {text}: {error}")


def _one_link(
    screening: Screening,
    link: str,
    search: Range | None,
    asked: Asked,
    factors: Range | None,
    json: str | None,
    charts: Path | None,
) -> None:
    from quillshaft.present.windows_json import windows_json
    from quillshaft.study.link_choice import links_that_clear
    from quillshaft.study.windows import stiffness_windows

    found = stiffness_windows(screening, link, search, *asked, factors)
    with _progress("Trying other links") as progress:
        others = links_that_clear(screening, found, progress)
    if json is not None:
        _put(windows_json(screening, found, others), json)
    if json != "-":
        from quillshaft.cli.show_windows import show_windows

        show_windows(screening, found, others, console())
    if charts is not None:
        from quillshaft.present.charts.windows import windows_chart

        _write_chart(screening, windows_chart(screening, found), f"windows-{link}", charts, json)


def _two_links(
    screening: Screening,
    links: tuple[str, str],
    searches: list[Range | None],
    asked: Asked,
    factors: Range | None,
    points: int,
    json: str | None,
    charts: Path | None,
) -> None:
    from quillshaft.present.windows_json import window_map_json
    from quillshaft.study.window_map import window_map

    with _progress("Lines of the map") as progress:
        found = window_map(
            screening, links[0], links[1], points, (searches[0], searches[1]), *asked, (factors, factors), progress
        )
    if json is not None:
        _put(window_map_json(screening, found), json)
    if json != "-":
        from quillshaft.cli.show_windows import show_window_map

        show_window_map(screening, found, console())
    if charts is not None:
        from quillshaft.present.charts.window_map import window_map_chart

        _write_chart(screening, window_map_chart(screening, found), f"windows-{links[0]}-{links[1]}", charts, json)


def _put(text: str, target: str) -> None:
    """Write JSON text to a file, or to standard output for "-"."""
    from quillshaft.cli.work import _encodable as encodable

    if target == "-":
        sys.stdout.write(encodable(text))
        sys.stdout.flush()
    else:
        write_whole(Path(target), text.encode())


def _write_chart(screening: Screening, figure: Figure, name: str, charts: Path, json: str | None) -> None:
    from quillshaft.present.pdf.figure import write_figure_pdf

    def make() -> bytes:
        stream = io.BytesIO()
        write_figure_pdf(figure, stream, f"{screening.train.title}: {name}")
        return stream.getvalue()

    safe = re.sub(r"[^A-Za-z0-9._-]+", "-", name).strip("-.")
    for path in write_many(charts, {f"{safe}.pdf": make}):
        console(quiet=json == "-").print(f"Wrote {path}")


@contextmanager
def _progress(what: str) -> Iterator[Callable[[int, int], None] | None]:
    """A bar on standard error where that is a terminal and the work takes over two seconds."""
    if not sys.stderr.isatty():
        yield None
        return
    from rich.console import Console
    from rich.progress import Progress

    begun = time.monotonic()
    with Progress(console=Console(stderr=True), transient=True, auto_refresh=False) as bar:
        task = bar.add_task(what, visible=False)

        def report(done: int, total: int) -> None:
            bar.update(task, completed=done, total=total, visible=time.monotonic() - begun > 2.0, refresh=True)

        yield report
