"""`quillshaft screen --csv DIR`: the result tables as files, all of them or none."""

from __future__ import annotations

from pathlib import Path

from quillshaft.assess.results import Screening
from quillshaft.cli.output import check_folder, check_target, write_many


def check_csv_folder(folder: Path, train: Path) -> None:
    """Refuse early a folder that cannot be made, or that holds the train file under a table's name."""
    check_folder(folder)
    for name in ("modes.csv", "shapes.csv", "interferences.csv", "sources.csv", "stations.csv", "links.csv"):
        if folder.exists():
            check_target(folder / name, train)


def put_csv(screening: Screening, folder: Path) -> list[Path]:
    """Write the tables of a screening into a folder; the paths written."""
    from quillshaft.present.results_csv import screening_csv

    return write_many(folder, {name: text.encode for name, text in screening_csv(screening).items()})
