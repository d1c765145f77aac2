"""Two links at once: lines of the map, boxes proven clear, and what a map refuses."""

from __future__ import annotations

import itertools
import random

import pytest
from window_trains import at_first_named, case_of, elastic_links, nominal, refitted

from quillshaft.study.window_bands import AskError
from quillshaft.study.window_map import window_map
from quillshaft.study.windows import stiffness_windows
from trains import screening_of, train_text

CHAIN = {
    "shafts": {"first": ("a", "b", 4e5), "second": ("b", "c", 9e5)},
    "excitations": {"pulse": {"at": "a", "frequency": "30 Hz"}, "beat": {"at": "c", "frequency": "80 Hz"}},
    "assumptions": {"tolerances": "default"},
}
STATIONS = {"a": 10.0, "b": 4.0, "c": 6.0}


def chain(second: float = 9e5):
    shafts = {"first": ("a", "b", 4e5), "second": ("b", "c", second)}
    return screening_of(train_text(STATIONS, **{**CHAIN, "shafts": shafts}))


def test_each_line_holds_the_windows_of_the_first_link_at_that_stiffness_of_the_second():
    found = window_map(chain(), "first", "second", points=5)
    for line in found.lines:
        windows = stiffness_windows(chain(line.other_nm_rad), "first", found.search_nm_rad[0])
        for mine, own in ((line.allowed, windows.allowed), (line.recommended, windows.recommended)):
            assert [end for reach in mine for end in reach] == pytest.approx(
                [end for reach in own for end in reach], rel=1e-12
            )


def two_links(seed: int):
    """A random case with two links to ask about, tolerances and a map; None where there are not two."""
    case = case_of(seed, assumptions={"tolerances": "default"})
    others = [] if case is None else [name for name in elastic_links(case.draft) if name != case.link]
    if not others:
        return None
    other = random.Random(seed).choice(others)
    return case, other, window_map(case.screening, case.link, other, points=17)


def test_every_stiffness_in_a_proven_box_is_clear_when_screened():
    inside = 0
    rng = random.Random(3)
    for found in itertools.islice((found for found in map(two_links, range(300, 360)) if found is not None), 20):
        case, other, chart = found
        for box in chart.boxes:
            for _ in range(4):
                both = [rng.uniform(*box.first_nm_rad), rng.uniform(*box.second_nm_rad)]
                scale = case.screening.graph.link(other).stiffness_nm_rad / nominal(case.draft, other)
                stated = both[0] * nominal(case.draft, case.link) / at_first_named(case, nominal(case.draft, case.link))
                draft = refitted(refitted(case.draft, case.link, stated), other, both[1] / scale)
                result = screening_of(draft.text(**case.tables))
                assert result.verdict == "clear"
                assert not box.recommended or result.worst_verdict == "clear"
                inside += 1
    assert inside > 100


def test_a_forbidden_strip_between_two_lines_of_the_grid_keeps_a_box_from_being_proven():
    """Two lines on either side of the band of the second link: each is clear, the box between them is not."""
    text = train_text(
        {"a": 10.0, "b": 1000.0, "c": 10.0},
        shafts={"first": ("a", "b", 4e5), "second": ("b", "c", 9e5)},
        excitations={"pulse": {"at": "c", "frequency": "48 Hz"}},
        excitations_off=dict.fromkeys([f"{name} {order}x" for name in "abc" for order in (1, 2)], "not asked"),
    )
    screening = screening_of(text)
    wide = window_map(screening, "first", "second", points=2, searches_nm_rad=((4e4, 5e4), (1e5, 9e6)))
    assert all(line.recommended == (wide.search_nm_rad[0],) for line in wide.lines)
    assert wide.boxes == ()


def test_the_box_that_holds_the_nominal_values_comes_first():
    found = window_map(chain(), "first", "second")
    assert found.boxes[0].holds(4e5, 9e5) == any(box.holds(4e5, 9e5) for box in found.boxes)
    assert found.nominal_nm_rad == (4e5, 9e5)


@pytest.mark.parametrize(
    ("links", "points", "said"),
    [
        (("first", "first"), 5, "link first: a map needs two different links"),
        (("first", "secnd"), 5, 'link secnd: there is none of this name; did you mean "second"?'),
        (("first", "second"), 1, "1 points: a map needs two at least"),
    ],
)
def test_a_map_that_cannot_be_drawn_says_why(links, points, said):
    with pytest.raises(AskError) as caught:
        window_map(chain(), *links, points=points)
    assert said in str(caught.value)
