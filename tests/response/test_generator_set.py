"""The generator-set example at rated speed, and what a dead cylinder does to it."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path

import numpy as np
import pytest
from response_trains import RPM, place

import quillshaft
from quillshaft.assess.response.respond import respond
from quillshaft.train.document import parse_document
from quillshaft.train.read import train_of

EXAMPLE = Path(__file__).parents[2] / "examples" / "dairy-generator.toml"


@lru_cache(maxsize=1)
def response():
    return respond(quillshaft.screen(quillshaft.load(EXAMPLE)))


def laid(case: str, name: str):
    """The response of the example with one more case laid over it."""
    document = parse_document(f"{EXAMPLE.read_text()}\n{case}", "train.toml")
    return respond(quillshaft.screen(train_of(document, (name,))))


def at_rated() -> int:
    return int(np.argmin(np.abs(response().speed_rad_s - 1500 * RPM)))


def leading(found, link: str, count: int) -> list[float]:
    """The orders of the engine that are largest in a link at rated speed, in order of size."""
    at = int(np.argmin(np.abs(found.speed_rad_s - 1500 * RPM)))
    own = [share for share in found.shares if share.group == "engine"]
    return [share.order for share in sorted(own, key=lambda share: -share.torque_nm[place(found, link), at])[:count]]


@pytest.mark.parametrize("link", ["ring", "generator-shaft"])
def test_orders_three_and_six_lead_in_normal_firing(link):
    """Six cylinders, four strokes, even firing: multiples of three add up (phase vectors, Den Hartog ch. 5)."""
    assert leading(response(), link, 2) == [3.0, 6.0]


@pytest.mark.parametrize("link", ["ring", "generator-shaft"])
def test_on_a_stiff_crank_orders_three_six_and_nine_lead(link):
    """The other orders come through the crank's own twist alone: a hundred times stiffer, they are gone."""
    cranks = ("nose", "crank-12", "crank-23", "crank-34", "crank-45", "crank-56", "crank-end")
    changes = "".join(f'shafts.{name} = {{ stiffness = "1e9 N m/rad" }}\n' for name in cranks)
    stiff = laid(f'[cases.stiff]\nbecause = "crank as good as rigid"\n{changes}', "stiff")
    assert leading(stiff, link, 3) == [3.0, 6.0, 9.0]


@pytest.mark.parametrize("link", ["ring", "generator-shaft"])
def test_vibratory_torque_rises_with_any_dead_cylinder(link):
    number = place(response(), link)
    normal = response().normal.alternating_torque_nm[number, at_rated()]
    dead = [case for case in response().cases if case.kind == "dead cylinder" and case.name.endswith("dead")]
    assert len(dead) == 6
    for case in dead:
        assert case.alternating_torque_nm[number, at_rated()] > 3 * normal


def test_half_orders_appear_with_a_dead_cylinder():
    """A fresh run of the case as the user would lay it: one cylinder dead in the file."""
    case = '[cases.dead-1]\nbecause = "cylinder 1 does not fire"\nmachines.engine = { dead-cylinders = [1] }\n'
    dead = laid(case, "dead-1")
    number = place(dead, "ring")
    at = int(np.argmin(np.abs(dead.speed_rad_s - 1500 * RPM)))
    own = {share.order: share.torque_nm[number, at] for share in dead.shares if share.group == "engine"}
    usual = {share.order: share.torque_nm[place(response(), "ring"), at_rated()] for share in response().shares}
    assert own[0.5] > 20 * usual[0.5]
    assert own[1.0] > 20 * usual[1.0]
    same = next(case for case in response().cases if case.name == "engine cylinder 1 dead")
    assert dead.normal.alternating_torque_nm[number, at] == pytest.approx(
        same.alternating_torque_nm[place(response(), "ring"), at_rated()], rel=1e-9
    )


def test_mean_torque_falls_by_the_dead_cylinder_share():
    number = place(response(), "ring")
    normal = response().normal.mean_torque_nm[number, at_rated()]
    dead = next(case for case in response().cases if case.kind == "dead cylinder")
    assert dead.mean_torque_nm[number, at_rated()] == pytest.approx(normal * 5 / 6, rel=1e-9)


def test_every_case_asked_for_is_there_and_only_damping_and_damper_faults_are_not_judged():
    kinds = {case.kind for case in response().cases}
    assert {"normal", "dead cylinder", "light load", "temperature", "tolerance", "high damping"} <= kinds
    assert {case.kind for case in response().cases if not case.judged} <= {"high damping", "damper"}
