"""Charts of a screening: the train, its modes, and its interference diagram, each saying its answer."""

from __future__ import annotations

from typing import TYPE_CHECKING

from quillshaft.assess.results import Screening
from quillshaft.present.charts.interference import interference_diagram
from quillshaft.present.charts.modes import mode_shapes
from quillshaft.present.charts.train import train_diagram

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["chart_files", "interference_diagram", "mode_shapes", "train_diagram"]

FEWEST_MODES = 3


def chart_files(screening: Screening) -> dict[str, Figure]:
    """File name -> chart: the train, the interference diagram, one for each judged mode (the first three at least)."""
    modes = sorted({*screening.judged_modes, *(mode.mode for mode in screening.modes[:FEWEST_MODES])})
    return {
        "train.pdf": train_diagram(screening),
        "interference.pdf": interference_diagram(screening),
        **{f"mode-{number}.pdf": mode_shapes(screening, [number]) for number in modes},
    }
