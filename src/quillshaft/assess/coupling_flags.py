"""Oddities of couplings and dampers worth a question (common practice figures throughout)."""

from __future__ import annotations

import math
from collections.abc import Iterator

from quillshaft.assess.results import Flag
from quillshaft.elements.coupling_duty import coupling_twist
from quillshaft.elements.damper import viscous_optimum
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.damper_model import Damper
from quillshaft.train.model import Train

RPM = 30.0 / math.pi
STIFFNESS_OVER_TORQUE = {
    "elastomer": (4.0, 150.0),
    "elastomer-shear": (4.0, 15.0),
    "elastomer-blocks": (15.0, 60.0),
    "steel-spring": (10.0, 60.0),
    "grid": (10.0, 200.0),
    "disc": (100.0, 3000.0),
    "diaphragm": (100.0, 3000.0),
    "gear": (300.0, 6000.0),
}
"""Ordinary coupling stiffness over rated torque [1/rad] by kind."""
VIBRATORY_SHARE = (0.1, 0.5)
PEAK_SHARE = (1.2, 5.0)
"""Ordinary vibratory and peak torque over rated torque."""


def twist_flags(coupling: Coupling) -> Iterator[Flag]:
    """A twist at rated torque that the coupling's kind does not have."""
    rated = coupling.rated_torque_nm
    if rated is None or coupling.kind is None:
        return
    low, high = STIFFNESS_OVER_TORQUE[coupling.kind]
    twist = coupling_twist(coupling, rated)
    if not low <= 1.0 / twist <= high:
        ordinary = f"ordinary for this kind is {low:g} to {high:g}"
        least, most = (math.degrees(1.0 / value) for value in (high, low))
        text = f"stiffness over rated torque is {1.0 / twist:.3g} per rad; {ordinary}"
        angles = f"it twists {math.degrees(twist):.3g}° at rated torque, ordinary {least:.2g}° to {most:.2g}°"
        yield Flag(f"couplings.{coupling.name}", f"{text} ({angles})")


def rating_flags(train: Train) -> Iterator[Flag]:
    """Ratings out of proportion to the rated torque."""
    for coupling in train.couplings:
        where, ratings, rated = f"couplings.{coupling.name}", coupling.ratings, coupling.rated_torque_nm
        if ratings is None:
            continue
        shares = (("vibratory", ratings.vibratory_nm, VIBRATORY_SHARE), ("peak", ratings.peak_nm, PEAK_SHARE))
        for word, value, (low, high) in shares:
            if value is not None and rated is not None and not low <= value / rated <= high:
                share = f"its {word} torque is {value / rated:.3g} × rated; ordinary is {low:g} to {high:g}"
                yield Flag(where, f"{share}: is it an amplitude, half the peak-to-peak?" if word[0] == "v" else share)


def overspeed_flags(train: Train, graph: TorsionalGraph) -> Iterator[Flag]:
    """A coupling that turns faster than it is made for, up to trip."""
    speeds = train.operation
    top = max(speeds.trip_rad_s or 0.0, speeds.ranges_rad_s[-1][1])
    made_for = [(item.name, item.between[0], item.ratings.max_speed_rad_s) for item in train.couplings if item.ratings]
    made_for += [(item.name, item.between[0], item.max_speed_rad_s) for item in train.fluid_couplings]
    for name, station, most in made_for:
        own = top * float(graph.scale[graph.number(station)])
        if most is not None and own > most * (1.0 + 1e-9):
            text = f"it turns at up to {own * RPM:.0f} rpm and is made for {most * RPM:.0f} rpm"
            yield Flag(f"couplings.{name}", text)


def damper_flags(train: Train) -> Iterator[Flag]:
    """What to ask about each damper."""
    for damper in train.dampers:
        kinds = {"viscous": _viscous, "tuned": _tuned, "pendulum": _pendulum}
        yield from kinds[damper.kind](damper)


def _viscous(damper: Damper) -> Iterator[Flag]:
    where = f"dampers.{damper.name}"
    if damper.viscous_nms_rad is None:
        yield Flag(
            where, "no viscous coefficient: what is it, at what temperature, and how far does it fall in service?"
        )
    elif damper.state == "healthy":
        # c = 2 ζ J ω at the optimum, μ = 0.5, tells roughly the frequency that a damper is made for
        zeta = viscous_optimum(0.5).zeta
        frequency = damper.viscous_nms_rad / (2.0 * zeta * damper.inertia_kgm2) / (2.0 * math.pi)
        if not 3.0 <= frequency <= 600.0:
            text = f"its damping would suit a mode near {frequency:.3g} Hz: are its unit and the ring inertia right?"
            yield Flag(where, text)


def _tuned(damper: Damper) -> Iterator[Flag]:
    if damper.swings and damper.loss_factor is None and damper.viscous_nms_rad is None:
        text = "no damping is stated: an undamped ring makes two resonances of one; what damping does it have?"
        yield Flag(f"dampers.{damper.name}", text)


def _pendulum(damper: Damper) -> Iterator[Flag]:
    if not damper.swings:
        return
    text = (
        f"tuned to order {damper.order or 0.0:.4g}: its frequency follows speed, swings are taken as small, and its "
        "tolerances are corner cases, not proven bounds; how far does it swing at the worst order, and how far may it?"
    )
    yield Flag(f"dampers.{damper.name}", text)


def fluid_flags(train: Train) -> Iterator[Flag]:
    """A fluid coupling separates the train torsionally."""
    for coupling in train.fluid_couplings:
        text = (
            "a fluid coupling separates the train torsionally: each side vibrates by itself, with a rigid-body "
            "motion of its own, and what shakes one side is not judged against the modes of the other; does it "
            "have a lock-up clutch?"
        )
        yield Flag(f"couplings.{coupling.name}", text)
