"""Dampers in the graph: the stations and links they add, what else they weigh, and pendulums at a speed."""

from __future__ import annotations

from fractions import Fraction

from quillshaft.elements.damper import pendulum_stiffness
from quillshaft.graph.links import LinkDraft
from quillshaft.graph.states import with_stiffness
from quillshaft.graph.torsional import InertiaPart, TorsionalGraph, ViscousRing
from quillshaft.train.basic_model import Tolerance
from quillshaft.train.damper_model import Damper
from quillshaft.train.model import Train
from quillshaft.train.validate import Findings


def damper_parts(train: Train, number: dict[str, int]) -> tuple[InertiaPart, ...]:
    """What dampers weigh: at a station of their own, or with the station they sit at."""
    parts = []
    for damper in train.dampers:
        at = number[damper.added_station] if damper.swings else number[damper.at]
        share = 1.0 if damper.swings else _share_held(damper)
        if share > 0:
            element = f"dampers.{damper.name}"
            parts.append(InertiaPart(at, element, damper.inertia_kgm2 * share, damper.inertia_tolerance))
    return tuple(parts)


def _share_held(damper: Damper) -> float:
    """Part of the inertia that moves with the station a damper sits at, where it adds none of its own."""
    if damper.kind == "viscous":
        return damper.moving_share
    return 1.0 if damper.state == "seized" else 0.0


def damper_drafts(
    train: Train, number: dict[str, int], ratios: tuple[Fraction, ...], findings: Findings
) -> list[LinkDraft]:
    """The springs of tuned dampers and pendulums, the latter at rated speed; problems go to `findings`."""
    drafts = []
    for damper in train.dampers:
        ratio = ratios[number[damper.at]]
        if damper.kind == "pendulum" and ratio == 0:
            findings.add(("dampers", damper.name, "at"), "pendulums need a station that turns", damper.at)
        if not damper.swings:
            continue
        stiffness = damper.stiffness_nm_rad
        tolerance = damper.tolerance
        if damper.kind == "pendulum":
            speed = train.operation.rated_rad_s * abs(float(ratio))
            stiffness = pendulum_stiffness(damper.inertia_kgm2, damper.order or 0.0, speed or 1.0)
            tolerance = pendulum_tolerance(damper)
        ends = (number[damper.at], number[damper.added_station])
        drafts.append(
            LinkDraft(
                damper.name,
                "damper",
                ends,
                stiffness,
                tolerance,
                0.0 if damper.kind == "pendulum" else damper.loss_factor,
                "spring",
                ratio_text=f"order {damper.order:.4g}" if damper.order else "",
                viscous=damper.viscous_nms_rad,
            )
        )
    return drafts


def pendulum_tolerance(damper: Damper) -> Tolerance:
    """Tolerance on the stiffness of a pendulum's link, J (n₀ Ω)²: both that of the order and of the inertia."""
    low, high = (
        (1.0 + order) ** 2 * (1.0 + inertia) - 1.0
        for order, inertia in zip(damper.tolerance, damper.inertia_tolerance, strict=True)
    )
    return low, high


def viscous_rings(train: Train, number: dict[str, int]) -> tuple[ViscousRing, ...]:
    """Rings that fluid alone joins to their stations, for solutions that hold damping."""
    return tuple(
        ViscousRing(
            damper.name,
            number[damper.at],
            damper.inertia_kgm2,
            damper.inertia_kgm2 * damper.moving_share,
            damper.viscous_nms_rad,
        )
        for damper in train.dampers
        if damper.kind == "viscous" and damper.state in ("healthy", "half-damping")
    )


def follows_pendulums(train: Train) -> bool:
    """True where a pendulum damper swings, so that natural frequencies follow speed."""
    return any(damper.kind == "pendulum" and damper.swings for damper in train.dampers)


def with_pendulums(train: Train, graph: TorsionalGraph, speed_rad_s: float) -> TorsionalGraph:
    """The graph with its pendulums at a speed [rad/s] of `speed-at`, above 0."""
    stiffness = {}
    for damper in train.dampers:
        if damper.kind == "pendulum" and damper.swings:
            speed = speed_rad_s * float(graph.scale[graph.number(damper.at)])
            stiffness[damper.name] = pendulum_stiffness(damper.inertia_kgm2, damper.order or 0.0, speed)
    return with_stiffness(graph, stiffness)
