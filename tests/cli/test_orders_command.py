"""`quillshaft orders`, its star diagrams, and the report's section: the numbers of the study, shown."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from commands import command

from pdf_texts import page_texts
from quillshaft.assess.orders import order_study
from quillshaft.assess.screening import screen
from quillshaft.present.charts.look import TALLEST_MM, title_of
from quillshaft.present.charts.stars import star_diagrams
from quillshaft.train.read import load

EXAMPLE = Path(__file__).parents[2] / "examples" / "dairy-generator.toml"
GAS = ("bore", "stroke ", "rod", "reciprocating-mass", "gas")
"""Keys of the engine without which its torques are not known."""
CASES = """
[cases.dead-3]
because = "one injector fails"
machines.engine.dead-cylinders = [3]
"""


@pytest.fixture
def engine(tmp_path):
    path = tmp_path / "engine.toml"
    path.write_text(EXAMPLE.read_text("utf-8") + CASES, "utf-8")
    return path


@pytest.fixture
def without_gas(tmp_path):
    lines = EXAMPLE.read_text("utf-8").splitlines()
    start = lines.index("[machines.engine]")
    kept = [line for number, line in enumerate(lines) if number < start or not line.startswith(GAS)]
    path = tmp_path / "without-gas.toml"
    path.write_text("\n".join(kept) + "\n", "utf-8")
    return path


def test_orders_prints_major_orders_and_torques(engine):
    done = command("orders", engine)
    assert done.code == 0
    assert "Major orders: 3, 6, 9, 12. Of 6 cylinders 6 fire." in done.out
    assert "rigid crank, of 6" in done.out
    assert "they are indicative only" in done.out


def test_orders_as_json_are_those_of_the_study(engine):
    result = json.loads(command("orders", engine, "--json", "-").out)
    study = order_study(screen(load(engine)))
    assert result["machine"] == "engine"
    assert result["input_sha256"] == load(engine).file.sha256
    assert [row["order"] for row in result["orders"]] == [row.order for row in study.rows]
    assert [row["torque_nm"] for row in result["orders"]] == [row.torque_nm for row in study.rows]
    assert result["orders"][5]["mode_sums"][0] == {"mode": 1, "sum": study.rows[5].mode_sums[1]}
    assert [item["dead_centre_deg"] for item in result["cylinders"]] == pytest.approx([0, 480, 240, 600, 120, 360])


def test_an_engine_without_gas_says_that_torques_are_not_known(without_gas):
    done = command("orders", without_gas)
    assert "torques are not known" in done.out
    assert "N·m" not in done.out


def test_a_train_without_engine_is_refused():
    done = command("orders", EXAMPLE.with_name("sluice-pump.toml"))
    assert done.code == 2
    assert "no reciprocating-engine" in done.err
    done = command("report", EXAMPLE.with_name("sluice-pump.toml"), "--orders", "--out", "never.pdf")
    assert done.code == 2
    assert not Path("never.pdf").exists()


def test_star_diagrams_are_written_and_say_which_orders_add_up(engine, tmp_path):
    done = command("orders", engine, "--case", "dead-3", "--charts", tmp_path / "charts")
    assert done.code == 0
    text = page_texts(tmp_path / "charts" / "orders-engine.pdf")[0]
    assert "3, 6, 9 and 12 (5 of 6 act)" in text
    assert "Rigid crank" in text
    assert "sum 1.00 of 5" in text


def test_star_diagrams_fit_a_page_with_uneven_firing(engine):
    text = engine.read_text("utf-8")
    for number, angle in enumerate((0, 481, 243, 604, 127, 371), start=1):
        even = {1: 0, 2: 480, 3: 240, 4: 600, 5: 120, 6: 360}[number]
        text = text.replace(
            f'at = "throw-{number}", fires-at = "{even} deg"', f'at = "throw-{number}", fires-at = "{angle} deg"'
        )
    engine.write_text(text, "utf-8")
    figure = star_diagrams(order_study(screen(load(engine))))
    assert figure.get_figheight() * 25.4 <= TALLEST_MM + 8.0
    assert "add up in orders" in title_of(figure)


def test_the_mean_of_a_star_is_its_sum_over_the_cylinders(engine):
    study = order_study(screen(load(engine, ("dead-3",))))
    figure = star_diagrams(study)
    bars = [line for axes in figure.axes for line in axes.lines if line.get_gid() == "mean"]
    assert bars
    lengths = [
        ((line.get_xdata()[1] - line.get_xdata()[0]) ** 2 + (line.get_ydata()[1] - line.get_ydata()[0]) ** 2) ** 0.5
        for line in bars[:6]
    ]
    sums = [row.rigid_sum for row in study.rows[:6]]
    assert lengths == pytest.approx([7.5 * value / 5 for value in sums], rel=1e-9)


def test_the_report_holds_the_orders_the_data_of_the_engine_and_the_files_that_the_train_names(engine, tmp_path):
    (tmp_path / "orders.csv").write_text("order, cosine [bar], sine [bar]\n0, 2.7, 0\n0.5, 1.5, 2.5\n")
    text = engine.read_text("utf-8")
    start = text.index("gas = {")
    engine.write_text(text[:start] + 'gas = { harmonics = "orders.csv" }' + text[text.index("\n", start) :], "utf-8")
    out = tmp_path / "report.pdf"
    assert command("report", engine, "--orders", "--out", out).code == 0
    text = " ".join(page_texts(out))
    assert "Orders of engine at 1500 rpm" in text
    assert "Major orders: 3, 6, 9, 12" in text
    assert "reciprocating mass 11.2 kg a cylinder" in text
    assert "bore 170 mm" in text
    assert "tangential-pressure harmonics orders.csv, 2 orders" in text
    assert "It names these files, and its digest covers them: orders.csv, SHA-256" in text


def test_the_issued_report_of_the_engine_holds_its_compression_ratio():
    pages = page_texts(EXAMPLE.parents[1] / "reports" / "dairy-generator.pdf")
    assert any("compression ratio 15" in page for page in pages[:8])


def test_an_engine_of_which_no_cylinder_fires_still_shows_its_torques(engine, tmp_path):
    text = engine.read_text("utf-8").replace("dead-cylinders = [3]", "dead-cylinders = [1, 2, 3, 4, 5, 6]")
    engine.write_text(text, "utf-8")
    done = command("orders", engine, "--case", "dead-3", "--charts", tmp_path / "charts")
    assert done.code == 0
    assert "Of 6 cylinders 0 fire." in done.out
    assert "a dead one" in done.out
    assert "torques are not known" not in done.out
    assert "indicated" not in done.out
