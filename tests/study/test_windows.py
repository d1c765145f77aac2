"""Stiffness windows of small trains by hand, the criteria, dismissals, and questions that cannot be answered."""

from __future__ import annotations

import math
from itertools import pairwise

import pytest

from quillshaft.study.link_choice import links_that_clear
from quillshaft.study.window_bands import AskError
from quillshaft.study.windows import stiffness_windows
from trains import screening_of, train_text

TWO_PI = 2 * math.pi
J, K = 10.0, 5e5
"""Two equal inertias on one coupling: ω² = 2 k / J (Den Hartog, Mechanical Vibrations, ch. 2)."""


def pair(frequency: float = 50.0, tolerance=None, stiffness: float = K, **tables):
    coupling = {"between": ["a", "b"], "stiffness": stiffness} | ({"tolerance": tolerance} if tolerance else {})
    stations = tables.pop("stations", {"a": J, "b": J})
    excitations = {"pulse": {"at": "b", "frequency": f"{frequency} Hz"}}
    return screening_of(train_text(stations, couplings={"link": coupling}, excitations=excitations, **tables))


def stiffness_for(hz: float) -> float:
    return (TWO_PI * hz) ** 2 * J / 2


def ends(ranges) -> list[tuple[float, float]]:
    return [(one.from_nm_rad, one.to_nm_rad) for one in ranges]


def test_two_inertias_forbidden_from_ten_per_cent_below_to_ten_per_cent_above():
    windows = stiffness_windows(pair(), "link", sources=["pulse"])
    (one,) = windows.forbidden
    assert ends([one])[0] == pytest.approx((stiffness_for(45), stiffness_for(55)), rel=1e-13)
    assert [(cause.source, cause.mode) for cause in one.because] == [("pulse", 1)]
    assert windows.search_nm_rad == (K / 20, K * 20)
    assert windows.allowed == ((K / 20, one.from_nm_rad), (one.to_nm_rad, K * 20))
    assert windows.recommended == windows.allowed
    assert windows.nominal_verdict == "close"


def test_margin_on_the_natural_frequency_divides_instead():
    windows = stiffness_windows(pair(criteria={"margin-on": "natural"}), "link", sources=["pulse"])
    wanted = (stiffness_for(50 / 1.1), stiffness_for(50 / 0.9))
    assert ends(windows.forbidden)[0] == pytest.approx(wanted, rel=1e-13)


def test_recommended_stands_off_by_the_links_tolerance_all_others_and_the_factors():
    """Softest: 0.9 · 0.8 k on 1.05 J, at least 105 % of 50 Hz; stiffest: 1.1 · 1.3 k on 0.95 J, at most 95 %."""
    stations = {name: {"inertia": J, "tolerance": "5 %"} for name in "ab"}
    criteria = {"separation": "10 %", "worst-case-separation": "5 %"}
    screening = pair(tolerance="10 %", stations=stations, criteria=criteria)
    windows = stiffness_windows(screening, "link", sources=["pulse"], factors=(0.8, 1.3))
    soft_edge = stiffness_for(47.5) * 0.95 / (1.1 * 1.3)
    stiff_edge = stiffness_for(52.5) * 1.05 / (0.9 * 0.8)
    wanted = [(K / 20, soft_edge), (stiff_edge, K * 20)]
    assert [end for reach in windows.recommended for end in reach] == pytest.approx(sum(wanted, ()), rel=1e-13)
    assert ends(windows.forbidden)[0] == pytest.approx((stiffness_for(45), stiffness_for(55)), rel=1e-13)


def test_recommended_keeps_the_nominal_requirement_where_that_asks_for_more():
    criteria = {"separation": "10 %", "worst-case-separation": "0 %"}
    windows = stiffness_windows(pair(tolerance="1 %", criteria=criteria), "link", sources=["pulse"])
    assert windows.recommended == windows.allowed


def test_the_whole_running_range_closes_one_band():
    """2x from 20 to 30 rev/s: 40 Hz less 10 % to 60 Hz and 10 %."""
    operation = {"rated": "1500 rpm", "range": ["1200 rpm", "1800 rpm"]}
    windows = stiffness_windows(pair(operation=operation), "link", sources=["a 2x"])
    assert ends(windows.forbidden)[0] == pytest.approx((stiffness_for(36), stiffness_for(66)), rel=1e-13)


def test_two_running_ranges_leave_the_gap_between_them_open():
    operation = {"rated": "1500 rpm", "range": [["600 rpm", "660 rpm"], ["1470 rpm", "1530 rpm"]]}
    windows = stiffness_windows(pair(operation=operation), "link", sources=["a 2x"], search_nm_rad=(1e3, 1e7))
    wanted = [(18.0, 24.2), (44.1, 56.1)]
    for found, (low, high) in zip(ends(windows.forbidden), wanted, strict=True):
        assert found == pytest.approx((stiffness_for(low), stiffness_for(high)), rel=1e-12)


def test_a_supply_band_widens_the_band():
    machines = {"motor": {"kind": "induction-motor", "at": "a", "poles": 4, "supply": "50 Hz"}}
    windows = stiffness_windows(pair(machines=machines), "link", sources=["motor line-2x"])
    wanted = (stiffness_for(0.9 * 98), stiffness_for(1.1 * 102))
    assert ends(windows.forbidden)[0] == pytest.approx(wanted, rel=1e-12)


def test_a_line_that_folds_at_zero_forbids_from_no_stiffness_on():
    """|2 N − 50 Hz| with N from 24.5 to 25.5 rev/s reaches 1 Hz, and 1.1 Hz with the separation."""
    screening = screening_of(
        train_text(
            {"a": J, "b": J},
            couplings={"link": ("a", "b", K)},
            excitations={"beat": {"at": "b", "order": 2, "frequency": "-50 Hz"}},
        )
    )
    windows = stiffness_windows(screening, "link", (1.0, 1e6), sources=["beat"])
    assert windows.forbidden[0].from_nm_rad == 0.0
    assert windows.forbidden[0].to_nm_rad == pytest.approx(stiffness_for(1.1), rel=1e-11)


def test_a_meeting_inside_a_barred_range_still_forbids():
    meeting = stiffness_for(2 * 1250 / 60)
    operation = {"rated": "1500 rpm", "range": ["900 rpm", "1500 rpm"]}
    operation |= {"barred": [["1100 rpm", "1400 rpm"]], "barred-because": "mode 1"}
    windows = stiffness_windows(pair(stiffness=meeting, operation=operation), "link", sources=["a 2x"])
    assert windows.nominal_verdict == "barred"
    assert windows.forbidden[0].from_nm_rad < meeting < windows.forbidden[0].to_nm_rad


def test_a_tie_and_a_mesh_and_an_epicyclic_stage_are_links_too():
    """One mode: ω² = k Σ c²/J over the coefficients c of the angles in the twist at the first-named station (a
    unit torque in the link gives J⁻¹c to each; own derivation).
    """
    text = train_text({"a": J}, ties={"grid": ("a", K)}, excitations={"pulse": {"at": "a", "frequency": "30 Hz"}})
    tie = stiffness_windows(screening_of(text), "grid", sources=["pulse"]).forbidden[0]
    assert tie.from_nm_rad == pytest.approx(J * (TWO_PI * 27) ** 2, rel=1e-13)
    mesh = {"between": ["a", "b"], "teeth": [20, 60], "mesh-stiffness": f"{K} N m/rad"}
    text = train_text({"a": 2.0, "b": J}, gears={"g": mesh}, excitations={"pulse": {"at": "a", "frequency": "30 Hz"}})
    gear = stiffness_windows(screening_of(text), "g", sources=["pulse"], search_nm_rad=(1e2, 1e8)).forbidden[0]
    assert gear.from_nm_rad == pytest.approx((TWO_PI * 27) ** 2 / (1 / 2.0 + 9 / J), rel=1e-12)
    stage = {"kind": "epicyclic", "sun": "s", "ring": "r", "carrier": "c", "teeth": {"sun": 20, "ring": 80}}
    stage |= {"planets": 3, "mesh-stiffness": f"{K} N m/rad"}
    text = train_text(
        {"s": 2.0, "r": J, "c": 5.0},
        gears={"g": stage},
        operation={"speeds": {"r": "300 rpm"}},
        excitations={"pulse": {"at": "s", "frequency": "30 Hz"}},
    )
    free = stiffness_windows(screening_of(text), "g", sources=["pulse"], search_nm_rad=(1e2, 1e8)).forbidden[0]
    assert free.from_nm_rad == pytest.approx((TWO_PI * 27) ** 2 / (1 / 2.0 + 16 / J + 25 / 5.0), rel=1e-12)


LOCAL = train_text(
    {"a": 10.0, "b": 10.0, "c": 500.0},
    shafts={"stiff": ("a", "b", 5e5)},
    couplings={"soft": ("b", "c", 1e3)},
    excitations={"pulse": {"at": "a", "frequency": f"{math.sqrt(5e5 / 5) / TWO_PI!r} Hz"}},
)
"""A mode of a against b that the soft coupling hardly moves, and a source on it."""


def test_an_interference_that_no_stiffness_clears_is_named_with_the_link_that_could():
    screening = screening_of(LOCAL)
    windows = stiffness_windows(screening, "soft", sources=["pulse"])
    assert windows.allowed == windows.recommended == ()
    assert [(found.source, found.mode) for found in windows.cannot_clear] == [("pulse", 2)]
    (other,) = links_that_clear(screening, windows)
    assert (other.link, other.clears) == ("stiff", ("pulse",))
    low, high = other.ranges_nm_rad
    assert low[1] == pytest.approx(stiffness_for(0.9 * math.sqrt(5e5 / 5) / TWO_PI), rel=1e-2)
    assert high[0] == pytest.approx(stiffness_for(1.1 * math.sqrt(5e5 / 5) / TWO_PI), rel=1e-2)
    assert other.change == pytest.approx(min(low[1] / 5e5, high[0] / 5e5, key=lambda f: abs(math.log(f))))


def test_nothing_is_tried_elsewhere_where_the_link_has_an_allowed_stiffness():
    screening = screening_of(LOCAL)
    assert links_that_clear(screening, stiffness_windows(screening, "stiff", sources=["pulse"])) == ()


def dismissed_pair(stiffness: float = K):
    own = math.sqrt(2 * K / J) / TWO_PI
    note = {"source": "pulse", "mode": 1, "frequency": f"{own!r} Hz", "because": "measured", "by": "A. N."}
    off = dict.fromkeys(("a 1x", "a 2x", "b 1x", "b 2x"), "not asked about")
    return own, pair(frequency=own, stiffness=stiffness, dismissals={"ok": note}, excitations_off=off)


def test_a_dismissal_holds_within_three_per_cent_of_its_frequency_and_is_shown():
    own, screening = dismissed_pair()
    windows = stiffness_windows(screening, "link")
    assert windows.nominal_verdict == screening.verdict == "clear"
    found = [end for reach in ends(windows.forbidden) for end in reach]
    wanted = [stiffness_for(share * own) for share in (0.9, 0.97, 1.03, 1.1)]
    assert found == pytest.approx(wanted, rel=1e-12)
    (shown,) = windows.dismissed
    assert (shown.source, shown.mode) == ("pulse", 1)
    assert (shown.from_nm_rad, shown.to_nm_rad) == pytest.approx(tuple(wanted[1:3]), rel=1e-12)


@pytest.mark.parametrize("share", [0.88, 0.92, 0.965, 0.975, 1.025, 1.035, 1.08, 1.12])
def test_screening_drops_a_dismissal_at_the_stiffnesses_where_the_windows_do(share: float):
    own, screening = dismissed_pair()
    stiffness = stiffness_for(share * own)
    windows = stiffness_windows(screening, "link")
    forbidden = any(low < stiffness < high for low, high in ends(windows.forbidden))
    assert forbidden == (dismissed_pair(stiffness)[1].verdict != "clear")


def test_filters_by_mode_and_by_engine_orders():
    screening = screening_of(LOCAL)
    windows = stiffness_windows(screening, "soft", modes=[1], sources=["pulse"])
    assert windows.forbidden == ()
    assert windows.nominal_verdict == "clear"
    cylinders = [{"at": "a", "fires-at": f"{180 * i} deg"} for i in range(4)]
    engine = {"kind": "reciprocating-engine", "strokes": 4, "cylinders": cylinders}
    screening = pair(machines={"engine": engine})
    every = stiffness_windows(screening, "link")
    major = stiffness_windows(screening, "link", orders="major")
    assert "engine order-2" in major.sources
    assert set(every.sources) - set(major.sources) >= {"engine order-0.5", "engine order-1.5"}


def test_forbidden_ranges_are_joined_where_they_overlap_and_cover_what_allowed_leaves():
    windows = stiffness_windows(pair(), "link")
    low, high = windows.search_nm_rad
    reaches = sorted([*ends(windows.forbidden), *windows.allowed])
    assert reaches[0][0] <= low
    assert reaches[-1][1] >= high
    for (_, end), (start, _) in pairwise(reaches):
        assert start == end
    sources = {cause.source for one in windows.forbidden for cause in one.because}
    assert sources == {"a 1x", "a 2x", "b 1x", "b 2x", "pulse"}


@pytest.mark.parametrize(
    ("link", "more", "said"),
    [
        ("lnk", {}, 'link lnk: there is none of this name; did you mean "link"? Springs of this train: link'),
        ("mesh", {}, "link mesh: this gear mesh is rigid, not a spring"),
        ("link", {"search_nm_rad": (2e5, 1e5)}, "the range must start above zero and end above its start"),
        ("link", {"search_nm_rad": (0.0, 1e5)}, "the range must start above zero and end above its start"),
        ("link", {"sources": ["puls"]}, 'source puls: there is none of this name; did you mean "pulse"?'),
        ("link", {"sources": ["jolt"]}, "source jolt: it acts only at a start or a fault"),
        ("link", {"sources": ["a 2x"]}, "source a 2x: it is switched off (no play)"),
        ("link", {"modes": [9]}, "mode 9: there is no such mode; this train has modes 1 to 1"),
        ("link", {"orders": "many"}, "orders many: this is neither major nor all"),
        ("link", {"factors": (1.2, 0.8)}, "factors 1.2 to 0.8: they must be above zero, the lower first"),
    ],
)
def test_a_question_that_cannot_be_answered_says_why(link, more, said):
    excitations = {
        "pulse": {"at": "b", "frequency": "50 Hz"},
        "jolt": {"at": "b", "frequency": "50 Hz", "when": "start"},
    }
    text = train_text(
        {"a": J, "b": J, "c": 1.0},
        couplings={"link": ("a", "b", K)},
        gears={"mesh": ("b", "c", 20, 40)},
        excitations=excitations,
        excitations_off={"a 2x": "no play"},
    )
    with pytest.raises(AskError) as caught:
        stiffness_windows(screening_of(text), link, **more)
    assert said in str(caught.value)
