"""`quillshaft new OUT --from TABLE`: a maker's mass-elastic table becomes a train file; how it was read is said."""

from __future__ import annotations

from pathlib import Path

from quillshaft.cli.output import console, refuse, write_whole
from quillshaft.train.problems import TrainFileError


def new_from_table(out: Path, source: Path, rated: str | None) -> None:
    """Show what was understood, then write the train file; leaves with exit code 2 where the table cannot be used."""
    from quillshaft.graph.build import build_graph
    from quillshaft.train.document import parse_document
    from quillshaft.train.mass_table.cells import MassTableError, read_grids
    from quillshaft.train.mass_table.reading import read_mass_table
    from quillshaft.train.mass_table.writing import train_file_text
    from quillshaft.train.read import train_of

    try:
        written = train_file_text(read_mass_table(read_grids(source)), source.stem, rated)
        build_graph(train_of(parse_document(written.text, str(out)), ()))
    except (MassTableError, TrainFileError) as error:
        refuse(str(error))
    console().print(f"Understood from {source.name}:")
    for sentence in written.said:
        console().print(f"  {sentence}")
    write_whole(out, written.text.encode())
    console().print(f"Wrote {out}. Next: quillshaft check {out}; add machines, power and the running range.")
