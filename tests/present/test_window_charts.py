"""Charts of stiffness windows: they say their answer, no label overlaps another or leaves the figure."""

from __future__ import annotations

import itertools
from functools import cache
from pathlib import Path

import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from quillshaft import load, screen
from quillshaft.present.charts.look import title_of
from quillshaft.present.charts.window_map import window_map_chart
from quillshaft.present.charts.windows import windows_chart
from quillshaft.study.window_curves import window_curves
from quillshaft.study.window_map import window_map
from quillshaft.study.windows import stiffness_windows
from trains import screening_of, train_text

ROOT = Path(__file__).resolve().parents[2]
LABELS = {"source", "mode", "range", "tick", "nominal", "bar", "name", "key"}
CASES = {
    "pump, one range": ("sluice-pump", "rubber-blocks", {}),
    "pump, three ranges": ("sluice-pump", "slow-gear", {}),
    "pump, mesh": ("sluice-pump", "reduction", {}),
    "generator, hopeless": ("dairy-generator", "ring", {}),
    "generator, major orders": ("dairy-generator", "ring", {"orders": "major"}),
    "generator, nominal outside": ("dairy-generator", "ring", {"search_nm_rad": (1e5, 3e5)}),
}


@cache
def example(stem: str):
    return screen(load(ROOT / "examples" / f"{stem}.toml"))


@cache
def drawn(name: str) -> Figure:
    stem, link, more = CASES[name]
    return windows_chart(example(stem), stiffness_windows(example(stem), link, **more))


@cache
def mapped(second: str) -> Figure:
    screening = example("sluice-pump")
    return window_map_chart(screening, window_map(screening, "rubber-blocks", second, points=49))


def boxes(figure: Figure):
    """Text and box [px] of every label, less a hair of 0.15 mm for side bearings."""
    renderer = FigureCanvasAgg(figure).get_renderer()
    hair = 0.15 / 25.4 * figure.dpi
    for axes in figure.axes:
        for text in axes.texts:
            if text.get_gid() in LABELS:
                extent = text.get_window_extent(renderer)
                yield text.get_text(), (extent.x0 + hair, extent.y0 + hair, extent.x1 - hair, extent.y1 - hair)


def check_labels(figure: Figure) -> None:
    found = list(boxes(figure))
    width, height = figure.get_size_inches() * figure.dpi
    outside = [text for text, box in found if box[0] < -1 or box[1] < -1 or box[2] > width + 1 or box[3] > height + 1]
    clashes = [
        (one, other)
        for (one, a), (other, b) in itertools.combinations(found, 2)
        if a[0] < b[2] and b[0] < a[2] and a[1] < b[3] and b[1] < a[3]
    ]
    assert len(found) > 8
    assert not outside
    assert not clashes


@pytest.mark.parametrize("name", list(CASES))
def test_no_label_of_the_windows_chart_overlaps_another_or_leaves_the_figure(name):
    check_labels(drawn(name))


@pytest.mark.parametrize("second", ["slow-gear", "pump-shaft"])
def test_no_label_of_the_map_overlaps_another_or_leaves_the_figure(second):
    check_labels(mapped(second))


@pytest.mark.parametrize(
    ("name", "said"),
    [
        ("pump, one range", "With rubber-blocks at 0.1182 to 0.1406"),
        ("pump, three ranges", "1.528 to 2.253, 19.52 to 22.89 and 28.21 to 420"),
        ("generator, hopeless", "No stiffness of ring clears engine order-6 (mode 2) and engine order-6.5 (mode 2)"),
        ("generator, major orders", "(minor engine orders left out)"),
    ],
)
def test_the_title_says_the_answer(name, said):
    assert said in title_of(drawn(name))


def test_the_title_of_the_map_says_the_box_of_the_nominal_values():
    assert "is clear over the tolerances; the nominal values are inside" in title_of(mapped("slow-gear"))


def test_forbidden_ranges_are_hatched_and_recommended_ones_filled():
    windows = stiffness_windows(example("sluice-pump"), "slow-gear")
    patches = [patch for axes in drawn("pump, three ranges").axes for patch in axes.patches]
    assert sum(bool(patch.get_hatch()) for patch in patches) == len(windows.forbidden)


def test_curves_pass_the_nominal_frequencies_at_nominal_stiffness_exactly():
    screening = example("sluice-pump")
    curves = window_curves(screening, stiffness_windows(screening, "rubber-blocks"))
    row = curves.stiffness_nm_rad.tolist().index(125000.0)
    assert curves.frequency_hz[row].tolist() == [mode.frequency_hz for mode in screening.modes]


def test_a_train_without_sources_still_has_a_chart():
    screening = screening_of(train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", 1e5)}))
    windows = stiffness_windows(screening, "s", sources=[])
    assert windows.forbidden == ()
    assert title_of(windows_chart(screening, windows)).startswith("With s at")
