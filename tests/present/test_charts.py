"""Charts of a screening: they say their answer, nothing overlaps, and nothing is told by colour alone."""

from __future__ import annotations

import io
import itertools
from collections.abc import Callable
from dataclasses import replace
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from chart_trains import BRANCHES, CLEAR, HEAD, PUMP, TRAINS, screened
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from quillshaft.assess.diagram_data import meeting_rpm, mode_bands, pair_marks, source_lines, top_speed_rpm
from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen
from quillshaft.present.charts import chart_files, interference_diagram, look, mode_shapes, train_diagram
from quillshaft.present.charts.lanes import GROUND, take_apart
from quillshaft.present.charts.look import title_of
from quillshaft.present.charts.panels import panels
from quillshaft.present.charts.phrases import inertia, stiffness
from quillshaft.present.charts.placing import place
from quillshaft.present.charts.spread import spread
from quillshaft.present.charts.strips import strips
from quillshaft.present.charts.verdict_titles import interference_title, pair_words
from quillshaft.present.words import percent
from quillshaft.train.read import load

NAMES = tuple(TRAINS)
PAGE_MM = 180.0
"""Height of the diagrams: they share their page with text."""
TALLEST_MODE_MM = 225.0
"""Height of a page for one mode; where several modes need more, they are drawn one at a time."""
SMALLEST_PT = 6.5


@cache
def drawn(kind: str, name: str) -> Figure:
    screening = screened(name)
    if kind == "train":
        return train_diagram(screening)
    if kind == "interference":
        return interference_diagram(screening)
    modes = [mode.mode for mode in screening.modes]
    return mode_shapes(screening, modes[:1] if kind == "mode" else modes[:3])


@pytest.fixture
def screened_body(tmp_path: Path) -> Callable[[str], Screening]:
    """Screens a train file given without its head."""

    def of(body: str) -> Screening:
        path = tmp_path / "train.toml"
        path.write_text(HEAD + body, encoding="utf-8")
        return screen(load(path))

    return of


def words(figure: Figure, *kinds: str) -> str:
    """All text of a figure, or that of some kinds, in one string."""
    found = [text for axes in figure.axes for text in axes.texts if not kinds or text.get_gid() in kinds]
    return " ".join(text.get_text() for text in found)


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
def test_every_chart_is_made_without_a_warning_and_fits_its_page(kind: str, name: str) -> None:
    figure = drawn(kind, name)
    width_in, height_in = figure.get_size_inches()
    assert width_in * 25.4 == pytest.approx(look.WIDTH_MM, abs=0.01)
    if kind != "modes":
        assert height_in * 25.4 < PAGE_MM


@pytest.mark.parametrize("name", NAMES)
def test_one_mode_never_needs_more_than_a_page_and_no_type_is_smaller_than_six_and_a_half_points(name: str) -> None:
    assert drawn("mode", name).get_size_inches()[1] * 25.4 <= TALLEST_MODE_MM
    figures = [drawn(kind, name) for kind in LABELS]
    written = [text for figure in figures for axes in figure.axes for text in axes.texts if text.get_text()]
    assert min(text.get_fontsize() for text in written) >= SMALLEST_PT


LABELS = {
    "train": ("station", "link", "joint", "speed", "letter"),
    "interference": ("source", "operation", "mode", "key"),
    "mode": ("station", "bar", "caption", "value"),
    "modes": ("station", "bar", "caption", "value"),
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
    leading = screening.governing()
    assert leading is not None
    assert leading.mode == 2
    assert f"Mode 2 is {percent(abs(leading.margin))} below {leading.source} and meets it over the tolerances" in title
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
    assert "all else is clear apart from one dismissed pair (mode 2 and interharmonic)" in title
    shape = look.MARKERS["dismissed"][0]
    markers = [line.get_marker() for axes in drawn("interference", "dismissed").axes for line in axes.lines]
    assert shape in markers


def test_a_dismissed_pair_that_is_not_clear_is_named_in_the_title_of_an_otherwise_clear_train() -> None:
    screening = screened("dismissed")
    kept = tuple(pair for pair in screening.interferences if pair.verdict == pair.worst_verdict == "clear")
    dismissed = tuple(pair for pair in screening.not_clear() if pair.dismissed is not None)
    title = interference_title(replace(screening, interferences=(*kept, *dismissed)))
    assert title.startswith(
        "Clear apart from one dismissed pair (mode 2 and interharmonic); the nearest counted, mode "
    )
    assert "all" not in title.lower().split()


def test_the_title_names_the_governing_pair_of_the_screening() -> None:
    for name in NAMES:
        screening, title = screened(name), title_of(drawn("interference", name))
        leading = screening.governing()
        assert leading is None or f"ode {leading.mode}" in title
        assert leading is None or leading.source in title


def test_the_title_says_which_sources_are_switched_off(screened_body: Callable[[str], Screening]) -> None:
    off = '[excitations-off]\n"rotor 2x" = "no coupling"\n'
    title = interference_title(screened_body(CLEAR + off))
    assert "clear of every source that is on" in title
    assert title.endswith("; one source switched off (rotor 2x)")
    every = "".join(f'"{source.name}" = "measured"\n' for source in screened("clear").sources)
    title = interference_title(screened_body(CLEAR + "[excitations-off]\n" + every))
    assert title.startswith("Nothing is judged: all four sources of this train (")
    assert title.endswith("are switched off")


def test_the_title_says_why_nothing_is_judged() -> None:
    screening = replace(screened("clear"), interferences=(), judged_modes=())
    assert "no continuous source reaches a natural frequency" in interference_title(screening)
    assert interference_title(replace(screening, sources=())) == "Nothing is judged: this train has no source"


def test_a_barred_range_that_is_too_narrow_is_said_with_what_is_left_at_its_edges() -> None:
    screening = screened("engine")
    pair = next(pair for pair in screening.interferences if pair.verdict == "barred")
    narrow = replace(pair, free_margin=0.04, free_worst_margin=0.0, required=0.1, worst_required=0.1)
    assert "inside a barred range that is too narrow: 4.00 % is left at its edges, nothing over" in pair_words(
        screening, narrow
    )


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
    for band in mode_bands(screened("pump"), 1600.0):
        # (f natural − f source) / f source at either edge
        for _, low, high in band.free[0]:
            assert (band.nominal_hz - low) / low == pytest.approx(band.required, rel=1e-9)
            assert (high - band.nominal_hz) / high == pytest.approx(band.required, rel=1e-9)


def test_a_frequency_that_follows_speed_is_drawn_along_it() -> None:
    screening = screened("engine")
    rows = ((700.0, 40.0, 38.0, 42.0), (1100.0, 50.0, 48.0, 52.0), (1500.0, 70.0, 67.0, 73.0))
    moved = replace(screening.modes[0], frequency_hz=70.0, frequency_along=rows)
    changed = replace(screening, modes=(moved, *screening.modes[1:]))
    band = mode_bands(changed, 1725.0)[0]
    assert (band.rpm, band.along_hz) == ((700.0, 1100.0, 1500.0), (40.0, 50.0, 70.0))
    assert [row[0] for row in band.free[0]] == pytest.approx([700.0, 1100.0, 1500.0], rel=1e-12)
    lines = [tuple(line.get_ydata()) for axes in interference_diagram(changed).axes for line in axes.lines]
    assert (40.0, 50.0, 70.0) in lines


def test_modes_bend_where_a_coupling_follows_mean_torque() -> None:
    screening = screened("follows-torque")
    mode = next(mode for mode in screening.modes if mode.mode in screening.judged_modes)
    assert mode.frequency_along is not None
    rpm, nominal, low, high = zip(*mode.frequency_along, strict=True)
    # the coupling stiffens with the square of speed, and the first mode with it
    assert nominal[-1] > 1.02 * nominal[0]
    lines = [
        (tuple(line.get_xdata()), tuple(line.get_ydata()))
        for axes in drawn("interference", "follows-torque").axes
        for line in axes.lines
    ]
    assert (rpm, nominal) in lines
    band = mode_bands(screening, top_speed_rpm(screening))[0]
    assert (band.low_hz, band.high_hz) == (low, high)


def test_a_mark_of_a_meeting_lies_on_the_bent_line_of_its_mode() -> None:
    screening = screened("follows-torque")
    bands = {band.mode: band for band in mode_bands(screening, top_speed_rpm(screening))}
    met = [mark for mark in pair_marks(screening) if meeting_rpm(screening, mark.pair) is not None]
    assert met
    for mark in met:
        band = bands[mark.pair.mode]
        # the track is interpolated between its speeds
        assert mark.frequency_hz == pytest.approx(np.interp(mark.rpm, band.rpm, band.along_hz), rel=2e-3)


def test_a_meeting_outside_the_barred_range_is_the_one_that_is_shown() -> None:
    screening = screened("engine")
    pair = next(pair for pair in screening.interferences if pair.verdict == "crossing")
    # barred from 770 to 930 rpm, rated 1500 rpm
    pair = replace(pair, critical_speeds_rpm=(800.0, 1450.0, 1700.0), judged_at_rpm=800.0)
    assert meeting_rpm(screening, pair) == 1450.0
    assert meeting_rpm(screening, replace(pair, verdict="close")) is None


# Marks, key and notes


def marks_outside(figure: Figure) -> list[str]:
    """Numbers of marks that lie outside the plot they are drawn in."""
    renderer = FigureCanvasAgg(figure).get_renderer()
    outside = []
    for axes in figure.axes:
        frame = axes.get_window_extent(renderer)
        for text in axes.texts:
            if text.get_gid() != "mark":
                continue
            box = text.get_window_extent(renderer)
            inside = frame.x0 <= box.x0 and box.x1 <= frame.x1 and frame.y0 <= box.y0 and box.y1 <= frame.y1
            outside += [] if inside else [text.get_text()]
    return outside


@pytest.mark.parametrize("name", NAMES)
def test_every_numbered_mark_lies_in_the_frame(name: str) -> None:
    screening = screened(name)
    assert marks_outside(drawn("interference", name)) == []
    top = top_speed_rpm(screening)
    marks = pair_marks(screening)
    plots = panels(mode_bands(screening, top), source_lines(screening, top), marks)
    held = {band.mode: plot for plot in plots for band in plot.bands}
    for mark in marks:
        assert held[mark.pair.mode].low_hz <= mark.frequency_hz <= held[mark.pair.mode].high_hz
        assert 0.0 <= mark.rpm <= top


def test_the_frame_is_raised_to_hold_a_mark_above_it(screened_body: Callable[[str], Screening]) -> None:
    loose = CLEAR.replace('stiffness = "2.4 MN m/rad"', 'stiffness = "2.4 MN m/rad", tolerance = "40 %"')
    screening = screened_body(loose + '[excitations]\ntone = { at = "rotor", frequency = "111 Hz" }\n')
    mark = next(mark for mark in pair_marks(screening) if mark.pair.source == "tone")
    top = top_speed_rpm(screening)
    bands, lines = mode_bands(screening, top), source_lines(screening, top)
    # a natural frequency of 84 Hz nominal, up to 102 Hz over the tolerances: 111 Hz is 8 % above that
    assert panels(bands, ())[-1].high_hz < mark.frequency_hz
    assert panels(bands, lines, pair_marks(screening))[-1].high_hz > mark.frequency_hz + 1.0
    assert marks_outside(interference_diagram(screening)) == []


def test_a_fixed_line_between_the_panels_is_named_with_its_frequency(
    screened_body: Callable[[str], Screening],
) -> None:
    body = PUMP.replace('stiffness = "0.145 MN m/rad"', 'stiffness = "0.010 MN m/rad"').replace("92 Hz", "335 Hz")
    screening = screened_body(body.replace("1.565 MN m/rad", "18 MN m/rad"))
    note = words(interference_diagram(screening))
    assert "Outside the frame at running speeds, in the gap: " in note
    assert "motor line-2x 100 Hz" in note
    assert "leave the frame" not in note


def test_no_entry_of_the_key_is_cut(screened_body: Callable[[str], Screening]) -> None:
    long = "interharmonic-of-the-converter-on-the-north-bay-roll-drive-of-that-line"
    tones = "".join(f'{long}-{hz} = {{ at = "motor-core", frequency = "{hz} Hz" }}\n' for hz in (86, 90, 94, 335, 345))
    figure = interference_diagram(screened_body(PUMP + tones))
    key = words(figure, "key")
    assert "…" not in key
    assert f"mode 2, {long}-90" in key
    assert overlapping(texts(figure, "key")) == []


def test_the_note_of_a_mode_says_which_way_actual_angles_are_positive() -> None:
    note = words(drawn("mode", "pump"))
    assert "positive in its own direction of rotation" in " ".join(note.split())


# Units


def test_a_us_train_shows_us_units_in_every_chart() -> None:
    screening = screened("pump")
    us = replace(screening, train=replace(screening.train, units="US"))
    text = " ".join(words(figure) for figure in chart_files(us).values())
    assert [unit for unit in ("kg", "N·m/rad", "MN") if unit in text] == []
    # 19.6 kg·m² / 0.0421401 kg·m² per lb·ft² (lb = 0.45359237 kg, ft = 0.3048 m)
    assert "465 lb·ft²" in text
    # 0.145 MN·m/rad / 0.112985 N·m per lbf·in (g = 9.80665 m/s²)
    assert "1.28×10⁶ lbf·in/rad" in text


@pytest.mark.parametrize(
    ("value", "units", "text"),
    [
        (1.45e5, "SI", "0.145 MN·m/rad"),
        (1.5e3, "SI", "1.5 kN·m/rad"),
        (3.0e10, "SI", "30 GN·m/rad"),
        (1.129848290276167e6, "US", "10×10⁶ lbf·in/rad"),
        (1.129848290276167e2, "US", "1×10³ lbf·in/rad"),
        (0.1129848290276167, "US", "1 lbf·in/rad"),
    ],
)
def test_a_stiffness_is_shown_in_a_readable_power_of_the_declared_unit(value: float, units: str, text: str) -> None:
    # 1 lbf·in = 0.1129848290276167 N·m
    assert stiffness(value, units) == text


def test_an_inertia_is_shown_in_the_declared_unit() -> None:
    assert inertia(0.0421401100938048 * 22.5, "US") == "22.5 lb·ft²"
    assert inertia(6.2, "SI") == "6.2 kg·m²"


# Laying out


def test_a_train_of_many_branches_leaves_out_only_what_does_not_fit_a_page(
    screened_body: Callable[[str], Screening],
) -> None:
    body = BRANCHES
    for number in range(1, 8):
        body = body.replace("[shafts]", f'pinion-{number} = {{ inertia = "0.2 kg m^2" }}\n[shafts]')
        body = body.replace("[shafts]", f'wheel-{number} = {{ inertia = "0.3 kg m^2" }}\n[shafts]')
        shaft = f'stub-{number} = {{ between = ["pinion-{number}", "wheel-{number}"], stiffness = "0.3 MN m/rad" }}'
        body = body.replace("[couplings]", f"{shaft}\n[couplings]")
        mesh = f'mesh-{number} = {{ between = ["bull", "pinion-{number}"], teeth = [211, {40 + number}] }}'
        body = body.replace("[machines]", f"{mesh}\n[machines]")
    screening = screened_body(body)
    figure = mode_shapes(screening, [1])
    height_mm = figure.get_size_inches()[1] * 25.4
    assert PAGE_MM < height_mm <= TALLEST_MODE_MM
    assert "Not drawn: " in words(figure)
    assert overlapping(texts(figure, *LABELS["mode"])) == []


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


def test_a_single_station_has_charts_without_modes() -> None:
    files = chart_files(screened("alone"))
    assert list(files) == ["train.pdf", "interference.pdf"]
    assert title_of(files["train.pdf"]) == "One station on one shaft line"
    assert title_of(files["interference.pdf"]).startswith("Nothing is judged")


def test_a_number_is_not_parted_from_its_unit_at_the_end_of_a_line() -> None:
    lines = look.wrap("holds 57 % of it at 1200 rpm", look.width_mm("holds 57 "))
    assert any("57 %" in line for line in lines)
    assert any("1200 rpm" in line for line in lines)
