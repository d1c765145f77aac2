"""Charts of a screening and of its forced response, each saying its answer."""

from __future__ import annotations

from typing import TYPE_CHECKING

from quillshaft.assess.response_results import Response
from quillshaft.assess.results import Screening
from quillshaft.present.charts.interference import interference_diagram
from quillshaft.present.charts.modes import mode_shapes
from quillshaft.present.charts.response_common import heated_links, ranked_links
from quillshaft.present.charts.response_gears import separation_map_chart
from quillshaft.present.charts.response_heat import coupling_heat_chart
from quillshaft.present.charts.response_order_bars import order_bars_chart
from quillshaft.present.charts.response_orders import order_contributions_chart
from quillshaft.present.charts.response_torque import link_torque_chart
from quillshaft.present.charts.response_waves import has_wave, wave_chart
from quillshaft.present.charts.train import train_diagram

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = [
    "chart_files",
    "coupling_heat_chart",
    "interference_diagram",
    "link_torque_chart",
    "mode_shapes",
    "order_bars_chart",
    "order_contributions_chart",
    "response_files",
    "separation_map_chart",
    "train_diagram",
    "wave_chart",
]

FEWEST_MODES = 3
LINKS_A_FIGURE = 3
CLOSER_LINKS = 3
"""So many links, those that use their limits most, are also shown by order and as waves."""


def chart_files(screening: Screening) -> dict[str, Figure]:
    """File name -> chart: the train, the interference diagram, one for each judged mode (the first three at least)."""
    modes = sorted({*screening.judged_modes, *(mode.mode for mode in screening.modes[:FEWEST_MODES])})
    return {
        "train.pdf": train_diagram(screening),
        "interference.pdf": interference_diagram(screening),
        **{f"mode-{number}.pdf": mode_shapes(screening, [number]) for number in modes},
    }


def response_files(response: Response) -> dict[str, Figure]:
    """File name -> chart: torque in every link, the links that use their limits most first, three a figure.

    For the first three links also the orders and the waves; for each coupling that warms up its heat, for each
    gear with a map where its teeth separate.
    """
    links = ranked_links(response)
    pages = [links[start : start + LINKS_A_FIGURE] for start in range(0, len(links), LINKS_A_FIGURE)]
    closer = links[:CLOSER_LINKS]
    waved = [link for link in closer if has_wave(response, link)]
    found = {_file("torque", at): link_torque_chart(response, page) for at, page in enumerate(pages, start=1)}
    found |= {_file("orders", at): order_contributions_chart(response, link) for at, link in enumerate(closer, start=1)}
    if closer:
        found["response-orders-rated.pdf"] = order_bars_chart(response, closer)
    found |= {_file("wave", at): wave_chart(response, link) for at, link in enumerate(waved, start=1)}
    heated = heated_links(response)
    found |= {_file("heat", at): coupling_heat_chart(response, link) for at, link in enumerate(heated, start=1)}
    maps = enumerate(response.maps, start=1)
    return found | {_file("gear", at): separation_map_chart(response, item.gear) for at, item in maps}


def _file(kind: str, number: int) -> str:
    return f"response-{kind}-{number}.pdf"
