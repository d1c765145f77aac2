"""Calls that several commands share, with problems of the input turned into lines and exit code 2."""

from __future__ import annotations

import io
import json
import re
import sys
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen, screen_alone
from quillshaft.cli.output import make_folder, refuse, write_whole
from quillshaft.graph.states import Temperature
from quillshaft.train.document import read_document
from quillshaft.train.overlay import case_names
from quillshaft.train.problems import TrainFileError
from quillshaft.train.quantity import QuantityError, read_quantity
from quillshaft.train.read import load, train_of

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from quillshaft.present.report.studies import Studies


def temperature_of(text: str | None) -> Temperature:
    """State of the couplings from the command line; leaves with exit code 2 where it is none."""
    if text is None:
        return "reference"
    if text == "cold":
        return "cold"
    if text == "hot":
        return "hot"
    try:
        return float(read_quantity(text, "temperature", "SI").value)
    except QuantityError as error:
        refuse(f'--at {text}: {error.message}. Allowed: cold | hot | a temperature such as "65 degC"')


def screened(path: Path, cases: list[str] | None, temperature: Temperature = "reference") -> Screening:
    """Load and screen; leaves with exit code 2 and every problem on standard error when the file is bad."""
    try:
        train = load(path, tuple(cases or ()))
        return screen(train, temperature)
    except TrainFileError as error:
        refuse(str(error))


def screened_alone(path: Path, cases: list[str] | None, temperature: Temperature = "reference") -> Screening:
    """The same without the cases of the file beside it."""
    try:
        return screen_alone(load(path, tuple(cases or ())), temperature)
    except TrainFileError as error:
        refuse(str(error))


def check_all_cases(path: Path) -> None:
    """Read and screen every case of the file too; leaves with exit code 2 where one is bad."""
    document = read_document(path)
    problems: list[str] = []
    for name in case_names(document.data):
        try:
            screen(train_of(document, (name,)))
        except TrainFileError as error:
            problems.append(f"In case {name}:\n{error}")
    if problems:
        refuse("\n".join(problems))


def put_json(screening: Screening, target: str) -> None:
    """Write the numbers to a file, or to standard output for "-"."""
    from quillshaft.present.results_json import screening_json

    text = screening_json(screening)
    if target == "-":
        sys.stdout.write(_encodable(text))
        sys.stdout.flush()
    else:
        write_whole(Path(target), text.encode())


def _encodable(text: str) -> str:
    """JSON text as standard output can hold it: with escapes where its encoding is not Unicode."""
    try:
        text.encode(sys.stdout.encoding or "utf-8")
    except UnicodeEncodeError:
        return json.dumps(json.loads(text), indent=1) + "\n"
    return text


def report_bytes(screening: Screening, studies: Studies | None = None) -> bytes:
    """The report as PDF, with the studies asked for."""
    from quillshaft.present.report import report_pdf

    return report_pdf(screening, studies)


def chart_makers(screening: Screening) -> dict[str, Callable[[], bytes]]:
    """File name -> function that makes the chart's PDF."""
    from quillshaft.present.charts import chart_files
    from quillshaft.present.pdf.figure import write_figure_pdf

    def maker(name: str, figure: Figure) -> Callable[[], bytes]:
        def make() -> bytes:
            stream = io.BytesIO()
            write_figure_pdf(figure, stream, f"{screening.train.title}: {name}")
            return stream.getvalue()

        return make

    return {name: maker(name, figure) for name, figure in chart_files(screening).items()}


def check_pdf(path: Path) -> None:
    """Refuse a report under a name that does not say PDF."""
    if path.suffix.lower() != ".pdf":
        refuse(f"{path}: the report is a PDF; name it something.pdf")


def report_path(screening: Screening) -> Path:
    """reports/ and a name from document or tag, revision and cases."""
    train = screening.train
    words = [train.sign_off.document or train.tag or train.title]
    if train.sign_off.revision:
        words.append(f"rev {train.sign_off.revision}")
    words += train.cases
    name = re.sub(r"[^A-Za-z0-9._-]+", "-", " ".join(words)).strip("-.") or "report"
    folder = Path("reports")
    make_folder(folder)
    return folder / f"{name}.pdf"
