"""Charts of the forced response: each answers its question, nothing overlaps, nothing is told by colour alone."""

from __future__ import annotations

import io
import itertools
from dataclasses import replace
from functools import cache

import numpy as np
import pytest
from chart_trains import screened
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from response_records import build, example

from quillshaft.assess.response_results import Response, SeparationMap
from quillshaft.present.charts import (
    coupling_heat_chart,
    link_torque_chart,
    look,
    order_bars_chart,
    order_contributions_chart,
    response_files,
    separation_map_chart,
    wave_chart,
)
from quillshaft.present.charts.look import title_of
from quillshaft.present.charts.response_axes import Scale, value_scale
from quillshaft.present.charts.response_common import above_limit, share_text, stretches, torque_text, uses
from quillshaft.present.charts.response_gears import gear_lines, is_blank
from quillshaft.present.charts.response_orders import leading_lines
from quillshaft.present.pdf.figure import write_figure_pdf
from quillshaft.train.coupling_model import CouplingRatings

PAGE_MM = 200.0
LABELS = {"heading", "end", "tick", "name", "operation", "line", "value", "yardstick", "contour"}


def in_us_units(response: Response) -> Response:
    screening = response.screening
    return replace(response, screening=replace(screening, train=replace(screening.train, units="US")))


def at_rest(response: Response) -> Response:
    """The response with no alternating torque at all and mean torques that are not known."""
    gone = ("alternating_torque_nm", "root_sum_square_nm", "weighted_torque_nm", "heat_w")
    cases = tuple(
        replace(
            case,
            mean_torque_nm=np.nan * case.mean_torque_nm,
            runaway={name: row & False for name, row in case.runaway.items()},
            **{name: 0.0 * getattr(case, name) for name in gone},
        )
        for case in response.cases
    )
    return replace(
        response,
        cases=cases,
        shares=tuple(replace(share, torque_nm=0.0 * share.torque_nm) for share in response.shares),
        waves=tuple(replace(wave, torque_nm=0.0 * wave.torque_nm) for wave in response.waves),
        maps=tuple(replace(item, ratio=np.nan * item.ratio) for item in response.maps),
    )


def coarse(stem: str, **more) -> Response:
    return build(example(stem), **{"speeds": 121, **more})


CASES = {
    "generator": lambda: coarse("dairy-generator"),
    "pump": lambda: coarse("sluice-pump"),
    "boat": lambda: coarse("workboat"),
    "no limits": lambda: coarse("kiln-fan", limits=False),
    "compressor": lambda: coarse("air-compressor"),
    "one speed": lambda: coarse("dairy-generator", speeds=1),
    "US units": lambda: in_us_units(coarse("sluice-pump")),
    "nothing swings": lambda: at_rest(coarse("sluice-pump")),
    "25 stations": lambda: build(screened("long-25"), speeds=81),
    "long names": lambda: build(screened("long-names"), speeds=81),
    "high speeds alone": lambda: coarse("sluice-pump", from_rpm=1300.0),
}


@cache
def response(name: str) -> Response:
    return CASES[name]()


@cache
def figures(name: str) -> dict[str, Figure]:
    return response_files(response(name))


def texts(figure: Figure):
    """Text and box [px] of every label, less a hair of 0.15 mm for side bearings."""
    renderer = FigureCanvasAgg(figure).get_renderer()
    hair = 0.15 / 25.4 * figure.dpi
    for axes in figure.axes:
        for text in axes.texts:
            if text.get_gid() in LABELS and text.get_text():
                box = text.get_window_extent(renderer)
                flat = (hair, 3 * hair) if not text.get_rotation() else (3 * hair, hair)
                yield text.get_text(), (box.x0 + flat[0], box.y0 + flat[1], box.x1 - flat[0], box.y1 - flat[1])


def words(figure: Figure, *kinds: str) -> list[str]:
    return [text.get_text() for axes in figure.axes for text in axes.texts if text.get_gid() in kinds]


def lines(figure: Figure, gid: str):
    return [line for axes in figure.axes for line in axes.lines if line.get_gid() == gid]


def patches(figure: Figure, gid: str):
    found = [patch for axes in figure.axes for patch in (*axes.patches, *axes.collections)]
    return [patch for patch in found if patch.get_gid() == gid]


# Every figure


@pytest.mark.parametrize("name", list(CASES))
def test_no_label_overlaps_another_or_leaves_the_figure(name):
    for file, figure in figures(name).items():
        found = list(texts(figure))
        clashes = [
            (one, other)
            for (one, a), (other, b) in itertools.combinations(found, 2)
            if a[0] < b[2] and b[0] < a[2] and a[1] < b[3] and b[1] < a[3]
        ]
        assert found, file
        assert clashes == [], file
        slack = 0.8 / 25.4 * figure.dpi
        outside = [
            text
            for text, box in found
            if box[0] < -slack or box[2] > figure.bbox.x1 + slack or box[1] < 0 or box[3] > figure.bbox.y1
        ]
        assert outside == [], file


@pytest.mark.parametrize("name", ["generator", "nothing swings", "one speed"])
def test_every_figure_is_drawn_by_the_renderer_of_the_report(name):
    for figure in figures(name).values():
        stream = io.BytesIO()
        write_figure_pdf(figure, stream, title_of(figure))
        assert stream.getvalue().startswith(b"%PDF")


@pytest.mark.parametrize("name", list(CASES))
def test_every_figure_fits_its_page_and_can_be_read(name):
    for figure in figures(name).values():
        width, height = figure.get_size_inches() * 25.4
        assert width == pytest.approx(look.WIDTH_MM, abs=0.01)
        assert height < PAGE_MM
        sizes = [text.get_fontsize() for axes in figure.axes for text in axes.texts if text.get_text()]
        assert min(sizes) >= 6.5


def test_the_same_response_gives_the_same_bytes():
    first, second = io.BytesIO(), io.BytesIO()
    kinds = ("torque-1", "orders-1", "orders-rated", "wave-1", "heat-1", "gear-1")
    for stream, drawn in ((first, figures("pump")), (second, response_files(CASES["pump"]()))):
        for kind in kinds:
            write_figure_pdf(drawn[f"response-{kind}.pdf"], stream, "chart")
    assert first.getvalue() == second.getvalue()


def test_files_hold_every_link_once_and_every_coupling_and_gear_that_has_something_to_show():
    assert list(figures("boat")) == [
        *(f"response-torque-{page}.pdf" for page in range(1, 6)),
        *(f"response-orders-{page}.pdf" for page in range(1, 4)),
        "response-orders-rated.pdf",
        *(f"response-wave-{page}.pdf" for page in range(1, 4)),
        "response-heat-1.pdf",
        "response-gear-1.pdf",
    ]
    pages = [figure for file, figure in figures("25 stations").items() if file.startswith("response-torque")]
    headed = [text.split(":")[0].split(" ")[1] for page in pages for text in words(page, "heading") if ":" in text]
    links = [link.name for link in response("25 stations").screening.graph.links]
    assert sorted(headed) == sorted(links)


def test_the_first_page_of_torques_holds_the_links_that_use_their_limits_most():
    given = response("boat")
    shares = {link.name: uses(given, link.name)[0].share for link in given.screening.graph.links}
    first = sorted(shares, key=lambda link: -shares[link])[:3]
    heads = words(figures("boat")["response-torque-1.pdf"], "heading")
    assert all(any(link in head for head in heads) for link in first)


@pytest.mark.parametrize("name", ["generator", "pump", "boat"])
def test_curves_differ_without_colour(name):
    for file, figure in figures(name).items():
        if not file.startswith("response-torque"):
            continue
        for axes in figure.axes:
            named = [
                line for line in axes.lines if line.get_gid() in ("normal", "worst dead cylinder", "worst other case")
            ]
            patterns = [line._unscaled_dash_pattern for line in named]
            assert len({str(pattern) for pattern in patterns}) == len(named)


# Torque against limits


def test_the_torque_panel_draws_the_normal_case_the_worst_dead_cylinder_and_both_limits():
    given = response("generator")
    figure = link_torque_chart(given, ["crank-56"])
    number = [link.name for link in given.screening.graph.links].index("crank-56")
    normal = lines(figure, "normal")[0]
    assert normal.get_ydata() == pytest.approx(given.normal.alternating_torque_nm[number], rel=1e-12)
    assert normal.get_xdata() == pytest.approx(given.speed_rad_s * 30.0 / np.pi, rel=1e-12)
    dead = np.max([c.alternating_torque_nm[number] for c in given.cases if c.kind == "dead cylinder"], axis=0)
    assert lines(figure, "worst dead cylinder")[0].get_ydata() == pytest.approx(dead, rel=1e-12)
    heavy = lines(figure, "continuous limit")[0].get_ydata()
    assert np.isfinite(heavy).tolist() == given.continuous.tolist()
    passing = lines(figure, "passing limit")[0].get_ydata()
    assert np.isfinite(passing).tolist() == (~given.continuous).tolist()
    assert len(patches(figure, "damping")) == 1
    assert patches(figure, "judged")
    assert all(patch.get_hatch() for patch in patches(figure, "barred"))


def test_the_title_says_where_a_link_exceeds_its_limit_and_the_ring_is_filled_there():
    given = response("generator")
    use = uses(given, "ring")[0]
    figure = link_torque_chart(given, ["ring"])
    assert use.share > 1.0
    assert f"worst {share_text(use.share)} of the passing limit at {use.rpm:.0f} rpm ({use.case.name})" in title_of(
        figure
    )
    ring = lines(figure, "worst")[0]
    assert (ring.get_xdata()[0], ring.get_ydata()[0]) == pytest.approx((use.rpm, use.torque_nm), rel=1e-12)
    assert ring.get_markerfacecolor() == look.INK
    assert len(lines(figure, "above")) == len(above_limit(given, "ring"))


def test_the_ring_is_open_and_no_bar_is_drawn_where_every_limit_holds():
    given = response("generator")
    figure = link_torque_chart(given, ["generator-shaft"])
    assert uses(given, "generator-shaft")[0].share < 1.0
    assert title_of(figure).startswith("Shaft generator-shaft: at most ")
    assert lines(figure, "worst")[0].get_markerfacecolor() == look.PAPER
    assert lines(figure, "above") == []


def test_the_title_over_several_links_counts_those_above_and_names_those_below():
    title = title_of(link_torque_chart(response("generator"), ["ring", "crank-56", "generator-shaft"]))
    assert title.startswith("Two links exceed their limits: crank-56 the most, at ")
    assert title.endswith("then ring; generator-shaft stays below its limit")
    title = title_of(link_torque_chart(response("pump"), ["rubber-blocks", "reduction"]))
    assert title.startswith("Two links stay below their limits; rubber-blocks comes nearest, ")


def test_the_judged_use_is_the_largest_ratio_over_judged_cases_alone():
    given = response("generator")
    number = [link.name for link in given.screening.graph.links].index("crank-56")
    limit = given.limits[number]
    rows = np.array([c.alternating_torque_nm[number] for c in given.cases if c.judged])
    zone = {use.continuous: use.share for use in uses(given, "crank-56")}
    assert zone[True] == pytest.approx(np.max((rows / limit.continuous_nm)[:, given.continuous]), rel=1e-12)
    assert zone[False] == pytest.approx(np.max((rows / limit.passing_nm)[:, ~given.continuous]), rel=1e-12)
    loud = replace(given.cases[-1], alternating_torque_nm=1e9 + given.cases[-1].alternating_torque_nm)
    beside = replace(given, cases=(*given.cases[:-1], loud))
    assert uses(beside, "crank-56")[0].share == pytest.approx(max(zone.values()), rel=1e-12)


def test_stress_has_a_scale_of_its_own_where_it_is_known():
    assert any(
        text.startswith("nominal stress, MPa") for text in words(figures("boat")["response-torque-1.pdf"], "name")
    )
    stressed = link_torque_chart(in_us_units(response("pump")), ["pump-shaft"])
    assert any(text.startswith("nominal stress, psi") for text in words(stressed, "name"))
    assert not any("stress" in text for text in words(link_torque_chart(response("generator"), ["ring"]), "name"))


def test_a_coupling_with_a_vibratory_rating_is_held_against_its_weighted_torque():
    given = response("generator")
    train = given.screening.train
    rated = tuple(replace(c, ratings=CouplingRatings(vibratory_nm=900.0, reference_hz=10.0)) for c in train.couplings)
    given = replace(given, screening=replace(given.screening, train=replace(train, couplings=rated)))
    number = [link.name for link in given.screening.graph.links].index("ring")
    figure = link_torque_chart(given, ["ring"])
    case = given.normal
    held = np.where(given.continuous, case.weighted_torque_nm[number], case.alternating_torque_nm[number])
    assert lines(figure, "normal")[0].get_ydata() == pytest.approx(held, rel=1e-12)
    assert any("weighted" in text for text in words(figure, "name"))


def test_a_link_without_limit_shows_its_torque_alone():
    given = response("no limits")
    figure = link_torque_chart(given, ["fan-shaft"])
    assert title_of(figure).startswith("Shaft fan-shaft: no limit given; at most ")
    assert lines(figure, "continuous limit") == lines(figure, "worst") == []


def test_one_speed_alone_is_drawn_as_points_and_limits_as_level_lines():
    figure = link_torque_chart(response("one speed"), ["crank-34"])
    markers = [
        line for axes in figure.axes for line in axes.lines if line.get_marker() == "o" and len(line.get_xdata()) == 1
    ]
    assert [line.get_xdata()[0] for line in markers] == pytest.approx([1500.0] * len(markers))
    assert len(markers) == 4
    low, high = lines(figure, "continuous limit")[0].get_xdata()
    assert low < 1500.0 < high


@pytest.mark.parametrize("links", [[], ["nose", "ring", "crank-12", "crank-23"]])
def test_a_figure_of_torques_takes_one_to_three_links(links):
    with pytest.raises(ValueError, match=f"not {len(links)}"):
        link_torque_chart(response("generator"), links)


def test_an_unknown_link_is_refused():
    with pytest.raises(KeyError):
        link_torque_chart(response("generator"), ["axle"])


@pytest.mark.parametrize(("small", "log"), [(0.3, False), (0.05, True)])
def test_a_scale_is_logarithmic_where_the_smaller_curve_would_not_be_read(small, log):
    scale = value_scale([np.array([0.01, 1.0]), np.array([small])], 0.0, 50.0)
    assert scale.log is log
    assert scale.low <= small
    assert scale.at(scale.high) == pytest.approx(50.0, abs=1e-9)


def test_ticks_stay_on_the_axis_and_apart():
    scale = Scale(-3.0, 17.0, 10.0, 60.0)
    places = [scale.at(tick) for tick in scale.ticks(9.0)]
    assert places[0] >= 10.0
    assert places[-1] <= 70.0
    assert min(np.diff(places)) >= 9.0


# Orders


def test_lanes_show_the_largest_lines_and_sum_up_the_rest():
    given = response("generator")
    number = [link.name for link in given.screening.graph.links].index("crank-end")
    lanes = leading_lines(given, "crank-end")
    tops = sorted((float(share.torque_nm[number].max()) for share in given.shares), reverse=True)
    single = [lane for lane in lanes if lane.lines == 1]
    assert [lane.top_nm for lane in single] == pytest.approx(tops[: len(single)], rel=1e-12)
    total = np.sum([lane.torque_nm for lane in lanes], axis=0)
    assert total == pytest.approx(np.sum([share.torque_nm[number] for share in given.shares], axis=0), rel=1e-9)
    figure = order_contributions_chart(given, "crank-end")
    assert [text for text in words(figure, "line") if text != "all together"] == [lane.name for lane in lanes]
    assert f"In shaft crank-end, {single[0].name} leads with " in title_of(figure)


def test_lanes_keep_one_scale_of_torque():
    figure = order_contributions_chart(response("generator"), "crank-end")
    scales = []
    for axes in figure.axes:
        if axes.lines and axes.lines[0].get_gid():
            scales.append(axes.get_ylim()[1] / axes.get_position().height)
    assert len(scales) > 4
    assert scales == pytest.approx([scales[0]] * len(scales), rel=1e-9)


def test_bars_at_rated_speed_show_amplitudes_side_by_side():
    given = response("generator")
    figure = order_bars_chart(given, ["ring", "nose"])
    at = int(np.argmin(np.abs(given.speed_rad_s - given.screening.train.operation.rated_rad_s)))
    number = [link.name for link in given.screening.graph.links].index("nose")
    largest = max(given.shares, key=lambda share: share.torque_nm[number][at])
    assert words(figure, "heading") == ["ring", "nose"]
    assert largest.source in words(figure, "line")
    assert torque_text(given, float(largest.torque_nm[number][at])) in words(figure, "value")
    assert title_of(figure).startswith("At 1500 rpm ")
    with pytest.raises(ValueError, match="not 5"):
        order_bars_chart(given, ["ring"] * 5)


# Waves


def test_the_wave_chart_says_where_the_torque_reverses_and_hatches_it():
    given = response("pump")
    figure = wave_chart(given, "rubber-blocks")
    number = [link.name for link in given.screening.graph.links].index("rubber-blocks")
    lowest = [wave.torque_nm[number].min() for wave in given.waves]
    assert f"reverses in {sum(low < 0 for low in lowest)} of {len(lowest)} waves" in title_of(figure)
    assert len(patches(figure, "turned")) == sum(low < 0 for low in lowest)
    assert all(patch.get_hatch() for patch in patches(figure, "turned"))
    assert len(lines(figure, "wave")) == len(given.waves)
    assert len(lines(figure, "zero")) == 2


def test_torque_against_a_negative_mean_reverses_where_it_is_positive():
    given = response("pump")
    turned = replace(given, waves=tuple(replace(wave, torque_nm=-wave.torque_nm) for wave in given.waves))
    title = title_of(wave_chart(turned, "rubber-blocks"))
    assert title == title_of(wave_chart(given, "rubber-blocks")).replace("−", "")


def test_a_wave_that_keeps_its_direction_says_how_far_it_falls():
    given = response("pump")
    number = [link.name for link in given.screening.graph.links].index("rubber-blocks")
    waves = given.waves[:1]
    title = title_of(wave_chart(replace(given, waves=waves), "rubber-blocks"))
    left = torque_text(given, float(waves[0].torque_nm[number].min()))
    said = "At the speeds shown the torque in elastomer coupling rubber-blocks does not reverse"
    assert title == f"{said}; at 1486 rpm it falls to {left}"


def test_a_wave_without_mean_torque_swings_about_zero():
    given = response("generator")
    number = [link.name for link in given.screening.graph.links].index("nose")
    centred = tuple(replace(w, torque_nm=w.torque_nm - w.torque_nm.mean(axis=1, keepdims=True)) for w in given.waves)
    figure = wave_chart(replace(given, waves=centred), "nose")
    assert np.ptp(centred[0].torque_nm[number]) > 0
    assert "swings about zero" in title_of(figure)
    assert lines(figure, "mean") == patches(figure, "turned") == []


def test_waves_beyond_three_speeds_are_counted_and_none_at_all_is_refused():
    given = response("pump")
    many = tuple(replace(given.waves[0], speed_rpm=1000.0 + step) for step in range(5))
    figure = wave_chart(replace(given, waves=many), "reduction")
    assert "Two more waves not drawn." in " ".join(text.get_text() for axes in figure.axes for text in axes.texts)
    with pytest.raises(ValueError, match="no wave of reduction"):
        wave_chart(replace(given, waves=()), "reduction")


# Heat


def test_the_heat_chart_holds_loss_against_the_permitted_one_and_marks_runaway():
    given = response("generator")
    number = [link.name for link in given.screening.graph.links].index("ring")
    figure = coupling_heat_chart(given, "ring")
    loss, warm = (line.get_ydata() for line in lines(figure, "normal"))
    assert loss == pytest.approx(given.normal.heat_w[number], rel=1e-12)
    assert warm == pytest.approx(given.normal.temperature_k["ring"] - 273.15, rel=1e-12, nan_ok=True)
    assert [set(np.round(line.get_ydata(), 6)) for line in lines(figure, "limit")] == [{620.0}, {90.0}]
    away = np.any([case.runaway["ring"] for case in given.cases if case.judged], axis=0)
    spans = stretches(given, away)
    assert len(patches(figure, "runaway")) == 2 * len(spans)
    most = max(case.heat_w[number][given.continuous].max() for case in given.cases if case.judged)
    assert ("gives off too little heat" in title_of(figure)) == (most > 620.0)
    assert "it runs away at " in title_of(figure)


def test_a_coupling_that_gives_off_its_heat_says_how_much_it_uses():
    title = title_of(coupling_heat_chart(response("one speed"), "ring"))
    assert title.startswith("Elastomer coupling ring can give off its heat: it loses at most ")
    assert "runs away" not in title


def test_a_link_without_temperature_shows_its_loss_alone():
    figure = coupling_heat_chart(response("generator"), "nose")
    assert len(lines(figure, "normal")) == 1
    assert "no permitted loss is given" in title_of(figure)


# Separation of teeth


def given_map(rows: list[list[float]], load: list[float]) -> Response:
    """The pump with a map of three speeds: below the judged range, in it, above it."""
    base = build(example("sluice-pump"), speeds=3)
    found = SeparationMap("reduction", np.array(load), np.array(rows))
    return replace(base, continuous=np.array([False, True, False]), maps=(found,))


def test_the_map_says_up_to_which_load_teeth_separate_in_the_judged_range():
    rows = [[0.4, 4.0, 0.4], [0.2, 2.0, 0.2], [0.1, 0.5, 0.1]]
    given = given_map(rows, [0.1, 0.2, 0.4])
    # between 20 and 40 % load the ratio falls from 2 to 1/2: 1 is reached half-way of its logarithm
    title = title_of(separation_map_chart(given, "reduction"))
    assert title == "Teeth of gear reduction separate in the judged range up to 30 % load, at 1486 rpm"


def test_the_map_says_where_else_teeth_separate():
    title = title_of(separation_map_chart(given_map([[3.0, 0.4, 0.4], [0.2, 0.2, 0.2]], [0.1, 0.5]), "reduction"))
    assert title.startswith(
        "Teeth of gear reduction stay in contact in the judged range down to 10 % load; they separate"
    )
    title = title_of(separation_map_chart(given_map([[0.3] * 3, [0.2] * 3], [0.1, 0.5]), "reduction"))
    assert title.endswith("and at all other speeds")


def test_the_separating_field_is_hatched_and_contours_are_labelled():
    figure = figures("pump")["response-gear-1.pdf"]
    assert {"0.3", "0.5", "1", "teeth separate"} <= set(words(figure, "contour"))
    hatches = [hatch for axes in figure.axes for item in axes.collections for hatch in getattr(item, "hatches", ())]
    assert "//////" in hatches


def test_a_map_of_one_load_is_drawn_as_points_and_infinite_ratios_count_as_separated():
    given = given_map([[np.inf, 0.4, 0.4]], [0.1])
    figure = separation_map_chart(given, "reduction")
    faces = [line.get_markerfacecolor() for axes in figure.axes for line in axes.lines if line.get_marker() == "o"]
    assert faces == [look.INK, look.PAPER, look.PAPER]
    with pytest.raises(KeyError):
        separation_map_chart(given, "slow-gear")


def test_an_unknown_mean_torque_is_said_in_the_title():
    title = title_of(figures("nothing swings")["response-gear-1.pdf"])
    assert title.startswith("The mean torque of gear reduction is not known")


def test_a_gear_that_keeps_contact_at_every_load_needs_no_map_and_an_idle_one_has_none():
    given = response("pump")
    (gear,) = given.screening.train.gears
    calm = replace(given, maps=tuple(replace(item, ratio=0.0 * item.ratio + 0.1) for item in given.maps))
    assert is_blank(calm.maps[0])
    assert any(gear.name in line and "stay in contact" in line for line in gear_lines(calm))
    number = [link.name for link in given.screening.graph.links].index(gear.name)
    mean = given.normal.mean_torque_nm.copy()
    mean[number] = 0.0
    idle = replace(given, cases=(replace(given.normal, mean_torque_nm=mean), *given.cases[1:]), maps=())
    assert gear_lines(idle) == [f"No mean torque passes gear {gear.name}: any alternating torque separates its teeth"]
