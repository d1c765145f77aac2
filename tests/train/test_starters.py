"""The train files that `quillshaft new` writes: sound, explained, and the same in either system of units."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path

import pytest

from quillshaft.train.document import parse_document
from quillshaft.train.read import train_of
from quillshaft.train.starters import KINDS, starter_text
from train_files import screened

EXAMPLES = sorted((Path(__file__).parents[2] / "examples").glob("*.toml"))


@pytest.mark.parametrize("kind", KINDS)
def test_a_starter_screens_as_it_stands_with_every_mode_proven(kind):
    screening = screened(starter_text(kind))
    assert screening.self_check.all_proven
    assert len(screening.modes) == len(screening.train.stations) - 1


@pytest.mark.parametrize("kind", ["pump", "fan"])
def test_pump_and_fan_starters_are_clear_over_their_tolerances(kind):
    screening = screened(starter_text(kind))
    assert (screening.verdict, screening.worst_verdict) == ("clear", "clear")
    assert screening.flags == ()


def test_the_generator_set_meets_only_minor_orders_at_rated_speed():
    screening = screened(starter_text("generator-set"))
    crossing = {pair.source for pair in screening.interferences if pair.verdict == "crossing"}
    assert crossing == {"engine order-9"}
    assert not any(source.major for source in screening.sources if source.name in crossing)


def test_the_case_of_the_pump_starter_can_be_screened():
    assert screened(starter_text("pump"), "stiffer-spacer").worst_verdict == "clear"


@pytest.mark.parametrize("kind", KINDS)
def test_a_starter_comments_on_every_table(kind):
    bare = [line for line in starter_text(kind).split("\n") if line.startswith("[") and "#" not in line]
    assert bare == []


def _keys(node: object) -> set[str]:
    """Keys that the program chose: names of stations and the like left out."""
    if isinstance(node, list):
        return set().union(*map(_keys, node), set())
    return set(node).union(*map(_keys, node.values())) if isinstance(node, dict) else set()


@pytest.mark.parametrize("kind", KINDS)
def test_a_starter_explains_every_key_it_uses(kind):
    text = starter_text(kind)
    data = tomllib.loads(text)
    comments = " ".join(line.partition("#")[2] for line in text.split("\n"))
    named = ("stations", "shafts", "couplings", "machines", "cases")
    used = {key for table in named for row in data.get(table, {}).values() for key in _keys(row)}
    used |= {key for table in ("operation", "criteria", "train") for key in data[table]} - set(data["stations"])
    used -= set(named) | set(data["couplings"])
    self_explaining = {"title", "rated", "document", "at", "because", "length", "diameter", "stiffness", "default"}
    for key in used - self_explaining:
        at_its_line = re.search(rf"^{key} = .*#", text, re.MULTILINE) or re.search(rf"[{{ ]{key} = .*#", text)
        assert at_its_line or re.search(rf"\b{key}\b", comments), key


def _frequencies(text: str) -> list[float]:
    return [mode.frequency_hz for mode in screened(text).modes]


# Exact by definition: 1 lbf = 4.4482216152605 N, 1 in = 25.4 mm, 1 lb = 0.45359237 kg (international pound and inch).
LBF_IN_NM = 4.4482216152605 * 0.0254
SI = 'units = "SI"'


def in_us_units(text: str) -> str:
    """The pump starter with every number bare or in US units."""

    def changed(match: re.Match[str]) -> str:
        value, unit = float(match[1]), match[2]
        factors = {"kg m^2": 1 / LBF_IN_NM, "MN m/rad": 1e6 / LBF_IN_NM, "mm": 1 / 25.4, "N m": 1 / LBF_IN_NM}
        if unit == "kW":
            return f'"{value * 1000 / (550 * 12 * LBF_IN_NM)!r} hp"'
        return repr(value * factors[unit]) if unit in factors else match[0]

    return re.sub(r'"([0-9.]+) (kg m\^2|MN m/rad|mm|N m|kW)"', changed, text).replace(SI, 'units = "US"')


def test_the_pump_starter_has_the_same_frequencies_in_us_units():
    text = starter_text("pump")
    assert not re.search(r"[0-9] (kg m|MN m|mm|N m|kW)", in_us_units(text))
    assert _frequencies(in_us_units(text)) == pytest.approx(_frequencies(text), rel=1e-9)


def test_wr2_in_us_units_is_the_same_inertia_as_lb_ft_squared():
    text = starter_text("pump")
    inertia = 2.9 / (0.45359237 * 0.3048**2)  # lb ft^2, exact by definition of pound and foot
    wr2 = text.replace('inertia = "2.9 kg m^2"', f'wr2 = "{inertia!r} lb ft^2"')
    assert wr2 != text
    assert _frequencies(wr2) == pytest.approx(_frequencies(text), rel=1e-9)


def test_bare_numbers_mean_the_units_of_the_train():
    bare = 'schema = 1\n[train]\ntitle = "t"\nunits = "{}"\n[operation]\nspeed-at = "a"\nrated = 1500\n'
    rows = "[stations]\na = {{ inertia = {} }}\nb = {{ inertia = {} }}\n"
    rows += "[shafts]\ns = {{ between = ['a', 'b'], stiffness = {} }}\n"
    si = bare.format("SI") + rows.format(2.0, 3.0, 1e6)
    us = bare.format("US") + rows.format(2.0 / LBF_IN_NM, 3.0 / LBF_IN_NM, 1e6 / LBF_IN_NM)
    assert _frequencies(us) == pytest.approx(_frequencies(si), rel=1e-9)


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_an_example_screens_with_each_of_its_cases(path):
    text = path.read_text("utf-8")
    for case in ((), *((name,) for name in parse_document(text, path.name).data.get("cases", {}))):
        assert screened(text, *case).self_check.all_proven
        assert train_of(parse_document(text, path.name), case).cases == case
