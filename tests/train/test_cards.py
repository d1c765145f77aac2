"""Indicator cards and tables of harmonics: read as written, refused with file and line, covered by the digest."""

from __future__ import annotations

import hashlib
import math

import numpy as np
import pytest

from quillshaft.train.document import parse_document, read_document
from quillshaft.train.problems import TrainFileError
from quillshaft.train.read import load, train_of
from trains import train_text

ENGINE = {"bore": "170 mm", "stroke": "190 mm", "rod": "350 mm"}


def engine_text(gas, strokes=4, **more):
    cylinders = [{"at": "a", "fires-at": "0 deg"}]
    machine = {"kind": "reciprocating-engine", "strokes": strokes, "cylinders": cylinders, "gas": gas, **more}
    return train_text({"a": 1.0, "b": 2.0}, shafts={"s": ("a", "b", 1e5)}, machines={"engine": {**ENGINE, **machine}})


def pressure(degrees, cycle=720):
    """Invented: a firing peak of 101 bar absolute just after the dead centre."""
    return 1 + 100 * math.exp(20 * (math.cos(math.radians((degrees - 8) * 360 / cycle)) - 1))


def card_lines(start=0, step=2, cycle=720, repeat=True):
    angles = range(start, start + cycle + (step if repeat else 0), step)
    return [f"{angle}, {pressure(angle, cycle)!r}" for angle in angles]


def load_with(tmp_path, lines, gas=None, strokes=4, head="crank angle [deg], pressure [bar]"):
    (tmp_path / "card.csv").write_text("\n".join([head, *lines]) + "\n", encoding="utf-8")
    (tmp_path / "train.toml").write_text(engine_text(gas or {"indicator": "card.csv"}, strokes), encoding="utf-8")
    return load(tmp_path / "train.toml")


def refused(tmp_path, lines, **how):
    with pytest.raises(TrainFileError) as caught:
        load_with(tmp_path, lines, **how)
    return str(caught.value)


def test_a_card_is_read_as_it_was_written(tmp_path):
    card = load_with(tmp_path, card_lines()).machines[0].gas.card
    assert np.degrees(card.angle_rad) == pytest.approx(np.arange(0, 720, 2), abs=1e-12)
    assert card.pressure_pa == pytest.approx([1e5 * pressure(angle) for angle in range(0, 720, 2)], rel=1e-14)


@pytest.mark.parametrize(("start", "repeat"), [(-360, True), (-360, False), (0, False), (-350, True)])
def test_a_card_may_begin_anywhere_and_leave_its_last_point_out(tmp_path, start, repeat):
    whole = load_with(tmp_path, card_lines()).machines[0].gas.card
    other = load_with(tmp_path, card_lines(start, repeat=repeat)).machines[0].gas.card
    assert other.angle_rad == pytest.approx(whole.angle_rad, abs=1e-12)
    assert other.pressure_pa == pytest.approx(whole.pressure_pa, rel=1e-9)


@pytest.mark.parametrize(
    ("head", "row"),
    [
        ("crank angle [deg]; pressure [bar]", lambda a: f"{a};{pressure(a):.9f}".replace(".", ",")),
        ("pressure (MPa)\tangle (rad)", lambda a: f"{pressure(a) / 10!r}\t{math.radians(a)!r}"),
        ("Crank_Angle [deg], note [-], Pressure [psi]", lambda a: f"{a}, 0, {pressure(a) * 1e5 / 6894.757293168361!r}"),
    ],
)
def test_columns_are_known_by_their_headings_and_units(tmp_path, head, row):
    card = load_with(tmp_path, [row(angle) for angle in range(0, 722, 2)], head=head).machines[0].gas.card
    assert card.pressure_pa == pytest.approx([1e5 * pressure(angle) for angle in range(0, 720, 2)], rel=1e-8)


def test_a_two_stroke_card_covers_one_turn(tmp_path):
    card = load_with(tmp_path, card_lines(cycle=360), strokes=2).machines[0].gas.card
    assert len(card.angle_rad) == 180
    assert "runs over 720 degrees" in refused(tmp_path, card_lines(), strokes=2)
    assert "does not close: it covers 360 of 720" in refused(tmp_path, card_lines(cycle=360), strokes=4)


def changed(number, text):
    lines = card_lines()
    lines[number - 2] = text
    return lines


@pytest.mark.parametrize(
    ("lines", "line", "words"),
    [
        (changed(12, "20, low"), 12, "is not a number"),
        (changed(12, "20, nan"), 12, "is not a number"),
        (changed(12, "20"), 12, "has 1 columns"),
        (changed(12, "20, 1, 2"), 12, "has 3 columns"),
        (changed(12, "18, 1.5"), 12, "does not rise"),
        (changed(12, "20, -1.5"), 12, "absolute pressure below zero"),
        (changed(362, "720, 1.5"), 362, "does not close: its ends differ by"),
        (card_lines()[:-20], 342, "does not close: it covers 680 of 720 degrees"),
        (card_lines()[:100] + card_lines()[110:], 102, "a step of 22 degrees"),
    ],
)
def test_a_bad_card_is_refused_with_file_and_line(tmp_path, lines, line, words):
    message = refused(tmp_path, lines)
    assert message.startswith(f"card.csv:{line}: ")
    assert words in message


@pytest.mark.parametrize(
    ("head", "words"),
    [
        ("angle, pressure [bar]", 'the column "angle" has no unit'),
        ("angle [deg], pressure [mm]", 'the column "pressure": "mm" is'),
        ("angle [deg], force [N]", 'no column is headed "pressure"'),
        ("0, 1", "the header row is missing"),
    ],
)
def test_a_bad_header_is_refused_with_its_line(tmp_path, head, words):
    message = refused(tmp_path, card_lines(), head=head)
    assert message.startswith("card.csv:1: ")
    assert words in message


def test_a_card_of_few_points_or_none_is_refused(tmp_path):
    assert "at least 36 a working cycle" in refused(tmp_path, card_lines(step=24))
    assert "no line follows the header" in refused(tmp_path, [])


@pytest.mark.parametrize(
    ("name", "words"), [("none.csv", "there is no such file"), ("/etc/card.csv", "relative to the train file")]
)
def test_a_file_that_is_not_there_is_refused_where_it_is_named(tmp_path, name, words):
    message = refused(tmp_path, card_lines(), gas={"indicator": name})
    assert "[machines.engine] gas.indicator" in message
    assert words in message


def test_a_train_given_as_text_cannot_name_files():
    with pytest.raises(TrainFileError, match="given as a text"):
        train_of(parse_document(engine_text({"indicator": "card.csv"}), "t.toml"))


def test_gauge_pressures_are_taken_as_they_are(tmp_path):
    lines = [f"{angle}, {pressure(angle) - 2!r}" for angle in range(0, 722, 2)]
    card = load_with(tmp_path, lines, gas={"indicator": "card.csv", "pressure": "gauge"}).machines[0].gas.card
    assert card.gauge
    assert min(card.pressure_pa) == pytest.approx(-1e5, rel=1e-3)


def test_harmonics_are_read_by_order(tmp_path):
    (tmp_path / "orders.csv").write_text(
        "order, cosine [bar], sine [bar], dead-cosine [bar], dead-sine [bar]\n"
        "0, 2.7, 0, 0, 0\n0.5, 1.5, 2.5, 0.1, 0.2\n"
    )
    (tmp_path / "train.toml").write_text(engine_text({"harmonics": "orders.csv"}))
    orders = load(tmp_path / "train.toml").machines[0].gas.orders
    assert orders.rows == ((0.0, 2.7e5, 0.0), (0.5, 1.5e5, 2.5e5))
    assert orders.dead == ((0.0, 0.0, 0.0), (0.5, 0.1e5, 0.2e5))


@pytest.mark.parametrize(
    ("row", "words"), [("0.7, 1, 1", "not an order of this working cycle"), ("0.5, 1, 1", "an order given twice")]
)
def test_bad_orders_are_refused_with_file_and_line(tmp_path, row, words):
    (tmp_path / "orders.csv").write_text(f"order, cosine [bar], sine [bar]\n0.5, 1.5, 2.5\n{row}\n")
    (tmp_path / "train.toml").write_text(engine_text({"harmonics": "orders.csv"}))
    with pytest.raises(TrainFileError) as caught:
        load(tmp_path / "train.toml")
    assert str(caught.value).startswith("orders.csv:3: ")
    assert words in str(caught.value)


def test_the_digest_covers_the_files_that_the_train_names(tmp_path):
    load_with(tmp_path, card_lines())
    first = read_document(tmp_path / "train.toml")
    text = (tmp_path / "train.toml").read_bytes()
    card = hashlib.sha256((tmp_path / "card.csv").read_bytes()).hexdigest()
    expected = f"{hashlib.sha256(text).hexdigest()}\n{card}  card.csv\n"
    assert first.sha256 == hashlib.sha256(expected.encode()).hexdigest()
    load_with(tmp_path, card_lines(repeat=False))
    assert read_document(tmp_path / "train.toml").sha256 != first.sha256


def test_a_card_that_only_a_case_names_is_covered_too(tmp_path):
    load_with(tmp_path, card_lines())
    text = (tmp_path / "train.toml").read_text() + '[cases.light]\nmachines.engine.gas = { indicator = "light.csv" }\n'
    (tmp_path / "light.csv").write_text((tmp_path / "card.csv").read_text().replace("bar", "psi"))
    (tmp_path / "train.toml").write_text(text)
    assert [file.name for file in read_document(tmp_path / "train.toml").files] == ["card.csv", "light.csv"]
    light, full = load(tmp_path / "train.toml", ("light",)), load(tmp_path / "train.toml")
    assert light.machines[0].gas.card.name == "light.csv"
    assert light.file.sha256 == full.file.sha256


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"bore": "17 m"}, "20 mm to 2 m"),
        ({"rod": "150 mm"}, "0.1 to 0.5, ordinarily 0.2 to 0.33"),
        ({"reciprocating-mass": "94 t"}, "0.02 kg to 20 t per cylinder"),
        ({"dead-cylinders": [2]}, "there is no cylinder 2"),
        ({"gas": {"cycle": {"compression-ratio": 15.5, "imep": "170 bar", "peak": "155 bar"}}}, "0.1 to 50 bar"),
        ({"gas": {"cycle": {"compression-ratio": 155, "imep": "17 bar", "peak": "155 bar"}}}, "at most 30"),
        ({"gas": {"indicator": "a.csv", "harmonics": "b.csv"}}, "one of indicator, harmonics, cycle"),
        ({"gas": {}}, "one of indicator, harmonics, cycle"),
    ],
)
def test_numbers_out_of_range_are_refused_with_the_range(changes, words):
    machine = {"gas": {"cycle": {"compression-ratio": 15.5, "imep": "17 bar", "peak": "155 bar"}}, **changes}
    with pytest.raises(TrainFileError) as caught:
        train_of(parse_document(engine_text(**machine), "t.toml"))
    assert words in str(caught.value)


@pytest.mark.parametrize("key", ["bore", "stroke", "rod"])
def test_gas_needs_the_whole_slider_crank(key):
    text = engine_text({"cycle": {"compression-ratio": 15.5, "imep": "17 bar", "peak": "155 bar"}})
    size = f'"{key}" = "{ENGINE[key]}", '
    assert size in text
    with pytest.raises(TrainFileError, match=f"{key} is missing"):
        train_of(parse_document(text.replace(size, ""), "t.toml"))
