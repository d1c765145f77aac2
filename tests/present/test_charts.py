"""Charts of a screening: they say their answer, nothing overlaps, and nothing is told by colour alone."""

from __future__ import annotations

import io
import itertools
from functools import cache

import pytest
from chart_trains import TRAINS, screened
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from quillshaft.assess.diagram_data import mode_bands, pair_marks, source_lines, top_speed_rpm
from quillshaft.present.charts import chart_files, interference_diagram, look, mode_shapes, train_diagram
from quillshaft.present.charts.lanes import GROUND, take_apart
from quillshaft.present.charts.look import title_of
from quillshaft.present.charts.placing import place
from quillshaft.present.charts.spread import spread
from quillshaft.present.charts.strips import strips

NAMES = tuple(TRAINS)
PAGE_MM = 180.0
"""Height that the report leaves for a figure."""


@cache
def drawn(kind: str, name: str) -> Figure:
    screening = screened(name)
    if kind == "train":
        return train_diagram(screening)
    if kind == "interference":
        return interference_diagram(screening)
    modes = [mode.mode for mode in screening.modes]
    return mode_shapes(screening, modes[:1] if kind == "mode" else modes[:3])


def texts(figure: Figure, *kinds: str) -> list[tuple[str, tuple[float, float, float, float]]]:
    """Text and box [px] of the labels of some kinds, each box less a hair of 0.15 mm for side bearings."""
    renderer = FigureCanvasAgg(figure).get_renderer()
    hair = 0.15 / 25.4 * figure.dpi
    found = []
    for axes in figure.axes:
        for text in axes.texts:
            if text.get_gid() in kinds and text.get_text():
                box = text.get_window_extent(renderer)
                upright = (hair, 3 * hair) if not text.get_rotation() else (3 * hair, hair)
                edges = (box.x0 + upright[0], box.y0 + upright[1], box.x1 - upright[0], box.y1 - upright[1])
                found.append((text.get_text(), edges))
    return found


def overlapping(labels: list[tuple[str, tuple[float, float, float, float]]]) -> list[tuple[str, str]]:
    return [
        (one, other)
        for (one, a), (other, b) in itertools.combinations(labels, 2)
        if a[0] < b[2] and b[0] < a[2] and a[1] < b[3] and b[1] < a[3]
    ]


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("kind", ["train", "interference", "mode", "modes"])
def test_every_chart_renders_without_a_warning_and_fits_its_page(kind: str, name: str) -> None:
    figure = drawn(kind, name)
    stream = io.BytesIO()
    FigureCanvasAgg(figure).print_png(stream)
    width_in, height_in = figure.get_size_inches()
    assert stream.tell() > 3000
    assert width_in * 25.4 == pytest.approx(look.WIDTH_MM, abs=0.01)
    assert height_in * 25.4 < (215.0 if kind == "modes" else PAGE_MM)


LABELS = {
    "train": ("station", "link", "joint"),
    "interference": ("source", "operation", "mode"),
    "mode": ("station", "bar", "caption"),
    "modes": ("station", "bar", "caption"),
}


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("kind", list(LABELS))
def test_no_label_overlaps_another_or_leaves_the_figure(kind: str, name: str) -> None:
    figure = drawn(kind, name)
    labels = texts(figure, *LABELS[kind])
    assert labels
    assert overlapping(labels) == []
    slack = 0.8 / 25.4 * figure.dpi
    outside = [
        text
        for text, box in labels
        if box[0] < -slack or box[2] > figure.bbox.x1 + slack or box[1] < 0 or box[3] > figure.bbox.y1
    ]
    assert outside == []


@pytest.mark.parametrize("name", NAMES)
def test_a_chart_is_drawn_by_the_renderer_of_the_report(name: str) -> None:
    from quillshaft.present.pdf.figure import write_figure_pdf

    stream = io.BytesIO()
    write_figure_pdf(drawn("interference", name), stream, "chart")
    assert stream.getvalue().startswith(b"%PDF")


@pytest.mark.parametrize("kind", ["train", "interference", "modes"])
def test_the_same_screening_gives_the_same_bytes(kind: str) -> None:
    from quillshaft.present.pdf.figure import write_figure_pdf

    first, second = io.BytesIO(), io.BytesIO()
    write_figure_pdf(drawn(kind, "pump"), first, "chart")
    write_figure_pdf(drawn.__wrapped__(kind, "pump"), second, "chart")
    assert first.getvalue() == second.getvalue()


def test_a_name_with_dollar_signs_is_written_as_it_stands() -> None:
    figure = look.frame("$a$ and $b$", 20.0).figure
    look.put(look.millimetre_axes(look.Frame(figure, 161.5, 20.0, 20.0), 0.0, 20.0), 1.0, 1.0, "$x_1$")
    FigureCanvasAgg(figure).print_png(io.BytesIO())
    assert figure.axes[0].texts[0].get_parse_math() is False
    assert title_of(figure) == "$a$ and $b$"


# What the titles say


@pytest.mark.parametrize(
    ("name", "facts"),
    [
        ("pump", ["Seven stations", "two shaft lines", "elastomer coupling flex-block", "softest"]),
        ("clear", ["Two stations", "one shaft line", "main is the only elastic link"]),
        ("branches", ["13 stations", "four shaft lines"]),
        ("sprung-ring", ["Seven stations", "three shaft lines"]),
        ("long-40", ["40 stations", "coupling flex is the softest link"]),
    ],
)
def test_the_title_of_the_train_counts_it_and_names_its_softest_link(name: str, facts: list[str]) -> None:
    title = title_of(drawn("train", name))
    assert [fact for fact in facts if fact not in title] == []


def test_the_title_of_a_mode_names_the_bodies_and_the_link_that_holds_the_strain() -> None:
    screening = screened("pump")
    title = title_of(mode_shapes(screening, [2]))
    mode = screening.mode(2)
    assert title.startswith("Mode 2, 89.96 Hz: impeller swings against gear-hub")
    assert f"pump-shaft holds {mode.strain_energy['pump-shaft'] * 100:.0f} % of the strain" in title
    node = next(node for node in mode.nodes if node.link == "pump-shaft")
    assert f"node {node.share * 100:.0f} % along it from pump-hub" in title


def test_a_figure_of_modes_takes_one_to_three_of_them() -> None:
    with pytest.raises(ValueError, match="not 4"):
        mode_shapes(screened("pump"), [1, 2, 3, 4])
    with pytest.raises(ValueError, match="not 0"):
        mode_shapes(screened("pump"), [])


def test_the_title_of_the_interference_diagram_names_the_worst_pair_and_counts_the_rest() -> None:
    screening = screened("pump")
    title = title_of(drawn("interference", "pump"))
    assert "Mode 2" in title
    assert "below interharmonic and meets it over the tolerances" in title
    assert "one more pair" in title
    assert len(screening.not_clear()) == 2


def test_the_title_of_a_clear_train_says_how_near_the_nearest_source_is() -> None:
    title = title_of(drawn("interference", "clear"))
    assert "clear of every source" in title
    assert "fan blade-pass" in title
    assert "10 % required" in title


def test_a_dismissed_pair_is_not_the_answer_but_is_counted_and_marked() -> None:
    title = title_of(drawn("interference", "dismissed"))
    assert "motor line-2x" in title
    assert "one pair dismissed" in title
    shape = look.MARKERS["dismissed"][0]
    markers = [line.get_marker() for axes in drawn("interference", "dismissed").axes for line in axes.lines]
    assert shape in markers


# Black and white


def test_kinds_of_lines_and_verdicts_differ_without_colour() -> None:
    shapes = [shape for shape, _ in look.MARKERS.values()]
    patterns = [str(pattern) for pattern in look.DASHES.values()]
    assert len(set(shapes)) == len(shapes)
    assert len(set(patterns)) == len(patterns)


def test_every_colour_is_a_grey_or_nearly_so() -> None:
    from matplotlib.colors import to_rgb

    colours = (look.INK, look.QUIET, look.FAINT, look.ACCENT, look.SHADE, look.PALE, look.PAPER)
    assert max(max(to_rgb(colour)) - min(to_rgb(colour)) for colour in colours) < 0.13


def test_a_mark_is_open_where_only_the_tolerances_make_it_bad() -> None:
    faces = {mark.pair.source: mark.nominal for mark in pair_marks(screened("pump")) if mark.pair.mode == 2}
    assert faces == {"interharmonic": False, "motor line-2x": False}
    assert all(mark.nominal for mark in pair_marks(screened("engine")) if mark.pair.verdict == "crossing")


def test_strain_is_hatched_and_kinetic_energy_solid() -> None:
    hatches = {patch.get_hatch() for axes in drawn("mode", "pump").axes for patch in axes.patches}
    assert hatches == {None, "/////"}


# Numbers of the diagram


def test_a_source_line_follows_order_times_speed() -> None:
    lines = source_lines(screened("clear"), 1200.0)
    blades = next(line for line in lines if "fan blade-pass" in line.names)
    assert blades.kind == "order"
    # 11 blades at 1200 rpm pass 11 · 20 times a second
    assert blades.nominal_hz == pytest.approx((0.0, 220.0), abs=1e-9)


def test_a_supply_line_is_level_with_its_variation_beside_it() -> None:
    lines = source_lines(screened("pump"), 1600.0)
    supply = next(line for line in lines if "motor line-2x" in line.names)
    assert supply.kind == "fixed"
    # twice 50 Hz, varying by the default 2 %
    assert supply.nominal_hz == pytest.approx((100.0, 100.0), rel=1e-12)
    assert supply.low_hz == pytest.approx((98.0, 98.0), rel=1e-12)
    assert supply.high_hz == pytest.approx((102.0, 102.0), rel=1e-12)


def test_sources_on_the_same_line_share_one_line_and_one_mark() -> None:
    lines = source_lines(screened("engine"), 1725.0)
    twice = next(line for line in lines if "nose 2x" in line.names)
    assert {"nose 2x", "generator-hub 2x", "engine order-2", "alternator line-1x"} <= set(twice.names)
    marks = [mark for mark in pair_marks(screened("engine")) if mark.pair.source in twice.names]
    assert len({mark.pair.mode for mark in marks}) == len(marks)


def test_no_pair_that_is_not_clear_is_without_a_mark() -> None:
    for name in NAMES:
        screening = screened(name)
        marked = sum(1 + len(mark.others) for mark in pair_marks(screening))
        assert marked == len(screening.not_clear())


def test_the_diagram_runs_to_trip_or_a_tenth_above_the_range() -> None:
    assert top_speed_rpm(screened("engine")) == pytest.approx(1725.0, rel=1e-12)
    assert top_speed_rpm(screened("branches")) == pytest.approx(1.1 * 1250.0, rel=1e-12)


def test_a_source_at_the_edge_of_the_free_band_has_just_the_required_margin() -> None:
    for band in mode_bands(screened("pump")):
        # (f natural − f source) / f source at either edge
        for edge in (band.free_from_hz, band.free_to_hz):
            assert abs(band.nominal_hz - edge) / edge == pytest.approx(band.required, rel=1e-9)


# Laying out


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("widest", [5, 8, 14])
def test_every_station_and_link_stands_once_and_no_two_beads_share_a_place(name: str, widest: int) -> None:
    graph = screened(name).graph
    parts = take_apart(graph, widest)
    beads = [bead for lane in parts.lanes for bead in lane.beads if bead != GROUND]
    assert sorted(beads) == list(range(len(graph.stations)))
    links = [link for lane in parts.lanes for link in lane.links] + [joint.link for joint in parts.joints]
    assert set(links) == set(range(len(graph.links)))
    plan = place(parts, widest)
    spots = [(lane.row, column) for lane in plan.placed for column in lane.columns]
    assert len(set(spots)) == len(spots)
    assert len(plan.straight) + len(plan.lettered) == len(parts.joints)


def test_a_joint_that_cannot_be_straight_is_told_by_a_letter_at_both_ends() -> None:
    assert [text for text, _ in texts(drawn("train", "loop"), "letter")].count("A") == 2


def test_strips_hold_every_station_and_each_branch_starts_where_it_leaves() -> None:
    for name in NAMES:
        graph = screened(name).graph
        runs = strips(graph)
        own = [station for run in runs for station in (run.stations[1:] if run.lead else run.stations)]
        assert sorted(own) == list(range(len(graph.stations)))


def test_spread_labels_do_not_overlap_and_stay_near() -> None:
    centres = spread([1.0, 1.1, 1.2, 9.0], [2.0] * 4, 0.0, 20.0)
    assert all(b - a >= 2.0 - 1e-12 for a, b in itertools.pairwise(centres))
    assert centres[3] == pytest.approx(9.0, abs=1e-12)
    # three of size 2 want a mean of 1.1, but none may start below 0
    assert centres[0] == pytest.approx(1.0, abs=1e-12)


def test_a_long_name_keeps_its_end_when_it_is_cut() -> None:
    short = look.shorten_name("intermediate-line-north-bay-roll-7", 25.0)
    assert short.endswith("roll-7")
    assert look.width_mm(short) <= 25.0


def test_chart_files_hold_the_train_the_diagram_and_each_judged_mode() -> None:
    screening = screened("engine")
    files = chart_files(screening)
    assert list(files)[:2] == ["train.pdf", "interference.pdf"]
    assert {f"mode-{number}.pdf" for number in screening.judged_modes} <= set(files)
