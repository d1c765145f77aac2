"""What every link may carry as alternating torque over speed: stated limits, stress rules, ratings."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from quillshaft.assess.response.mean import torque_words
from quillshaft.assess.response_results import LimitCurve
from quillshaft.elements.coupling_duty import frequency_factor, weighs_by_frequency
from quillshaft.elements.endurance import (
    fatigue_notch_factor,
    notch_sensitivity,
    permitted_alternating,
    shear_strength,
    tensile_share_limits,
    yield_alternating,
)
from quillshaft.elements.propulsion_rule import continuous_limit, passing_limit, propulsion_shaft
from quillshaft.elements.shaft_sections import rectangle_modulus
from quillshaft.elements.stress import Concentration, section_concentration, section_modulus
from quillshaft.graph.network import Floats
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.train.basic_model import Assumed
from quillshaft.train.coupling_model import Coupling
from quillshaft.train.duty_model import ShaftStrength, StressSection
from quillshaft.train.gear_model import Epicyclic, GearMesh
from quillshaft.train.model import Train
from quillshaft.train.shaft_model import Material, Piece, Shaft

RECALLED = "recalled, confirm against your edition"
MPA = 1e6


@dataclass(frozen=True)
class _Section:
    """A section with its place in words, modulus [m³] and what raises the stress there."""

    words: str
    section: StressSection
    modulus_m3: float
    raised: Concentration


@dataclass(frozen=True)
class _Limit:
    """Torque amplitudes (S,) [N·m] of one section, and its basis."""

    continuous_nm: Floats
    passing_nm: Floats
    mpa_per_nm: float | None
    basis: str


def limit_curves(
    train: Train, graph: TorsionalGraph, mean_nm: Floats, speed_ratio: Floats, assumed: list[Assumed]
) -> tuple[LimitCurve, ...]:
    """One curve for each link of the graph in its order.

    mean_nm (links, S) is the mean torque, nan where not known; speed_ratio (S,) is speed over rated speed. What is
    assumed is added to `assumed`.
    """
    elements = {item.name: item for item in (*train.shafts, *train.couplings, *train.gears)}
    curves = []
    for number, link in enumerate(graph.links):
        element = elements.get(link.name)
        mean, known = np.abs(np.nan_to_num(mean_nm[number])), bool(np.isfinite(mean_nm[number]).all())
        if isinstance(element, Shaft):
            curves.append(_shaft(train, element, mean if known else None, speed_ratio, assumed))
        elif isinstance(element, Coupling):
            curves.append(_coupling(element, mean, known))
        elif element is not None:
            at_rated = float(mean[int(np.argmin(np.abs(speed_ratio - 1.0)))])
            curves.append(_gear(train, element, mean, at_rated, assumed))
        else:
            curves.append(_none(link.name, "no limits are kept for this kind of link"))
    return tuple(curves)


def _none(name: str, why: str) -> LimitCurve:
    return LimitCurve(name, None, None, None, why)


def _shaft(train: Train, shaft: Shaft, mean: Floats | None, ratio: Floats, assumed: list[Assumed]) -> LimitCurve:
    own = shaft.strength or ShaftStrength()
    sections = _sections(shaft, own)
    per_nm = None if not sections else max(1.0 / item.modulus_m3 for item in sections) / MPA
    flat = np.ones(len(ratio))
    if own.permitted_torque_nm is not None:
        passing = own.passing_torque_nm or own.permitted_torque_nm
        quick = f", {torque_words(passing)} in passing" if own.passing_torque_nm else ""
        basis = f"torque amplitude stated: {torque_words(own.permitted_torque_nm)}{quick}"
        return LimitCurve(shaft.name, own.permitted_torque_nm * flat, passing * flat, per_nm, basis)
    if own.permitted_stress_pa is not None and sections:
        least = min(sections, key=lambda item: item.modulus_m3)
        passing = own.passing_stress_pa or own.permitted_stress_pa
        quick = f", {passing / MPA:.4g} N/mm² in passing" if own.passing_stress_pa else ""
        stated = f"{own.permitted_stress_pa / MPA:.4g} N/mm²{quick}"
        basis = f"nominal stress amplitude stated: {stated}, at {least.words}"
        modulus = least.modulus_m3
        return LimitCurve(
            shaft.name, own.permitted_stress_pa * modulus * flat, passing * modulus * flat, 1 / modulus / MPA, basis
        )
    rule = own.rule or train.strength.rule
    if rule is None:
        return LimitCurve(shaft.name, None, None, per_nm, "no limit is stated and no rule chosen")
    if not sections:
        return _none(shaft.name, "its section is not known: give pieces, weakest, or permitted-torque")
    material = shaft.material
    if material is None or material.tensile_pa is None:
        return LimitCurve(shaft.name, None, None, per_nm, "its material states no tensile strength")
    if mean is None and rule == "endurance":
        return LimitCurve(shaft.name, None, None, per_nm, "the endurance rule asks for the mean torque: give [power]")
    steady = np.zeros(len(ratio)) if mean is None else mean
    limits = [_by_rule(train, rule, own, item, material, steady, ratio, (shaft.name, assumed)) for item in sections]
    continuous = np.min([item.continuous_nm for item in limits], axis=0)
    passing = np.min([item.passing_nm for item in limits], axis=0)
    governing = min(limits, key=lambda item: float(np.nanmin(item.continuous_nm)))
    return LimitCurve(shaft.name, continuous, passing, governing.mpa_per_nm, governing.basis)


def _by_rule(
    train: Train,
    rule: str,
    own: ShaftStrength,
    item: _Section,
    material: Material,
    mean: Floats,
    ratio: Floats,
    listed: tuple[str, list[Assumed]],
) -> _Limit:
    tensile = material.tensile_pa or 0.0
    per_nm = 1.0 / item.modulus_m3 / MPA
    if rule == "propulsion" and own.propulsion_kind is not None:
        shaft = propulsion_shaft(own.propulsion_kind, own.propulsion_form, tensile, item.section.od_m)
        low = continuous_limit(shaft, ratio)
        quick = np.fmax(passing_limit(shaft, ratio), low)
        basis = f"propulsion shafts, IACS UR M68 ({_edition(train)}), {item.words}: {shaft.words}"
        return _Limit(low * item.modulus_m3, quick * item.modulus_m3, per_nm, basis)
    if rule == "tensile-share":
        steady, quick_pa = tensile_share_limits(tensile)
        flat = np.ones(len(ratio)) * item.modulus_m3
        basis = f"tensile strength / 25 nominal, MIL-STD-167-2 ({_edition(train)}), {item.words}"
        return _Limit(steady * flat, quick_pa * flat, per_nm, basis)
    return _endurance(train, item, material, mean, per_nm, listed)


def _edition(train: Train) -> str:
    return train.strength.edition or RECALLED


def _endurance(
    train: Train, item: _Section, material: Material, mean: Floats, per_nm: float, listed: tuple[str, list[Assumed]]
) -> _Limit:
    criteria, tensile = train.strength, material.tensile_pa or 0.0
    surface = item.section.surface or criteria.surface
    strength = shear_strength(tensile, item.section.od_m, surface, material.yield_pa, material.endurance_pa)
    name, assumed = listed
    for words in strength.assumed:
        entry = Assumed(f"shafts.{name}", "strength", words, "not given by the material (common practice)")
        if entry not in assumed:
            assumed.append(entry)
    radius = item.raised.radius_m
    sensitivity = notch_sensitivity(tensile, radius, criteria.notch)
    notch = fatigue_notch_factor(item.raised.theoretical, sensitivity, item.raised.net)
    stress = mean / item.modulus_m3
    endured = permitted_alternating(criteria.mean_stress, stress, criteria.safety, strength) / notch
    permitted = np.minimum(endured, yield_alternating(stress, criteria.safety, strength))
    basis = (
        f"endurance, {criteria.mean_stress}, safety {criteria.safety:g}, {surface}, {criteria.notch} notch sensitivity "
        f"({_edition(train)}), {item.words}: {item.raised.words or 'no stress raiser stated'}, Kf {notch:.3g}"
    )
    return _Limit(permitted * item.modulus_m3, permitted * item.modulus_m3, per_nm, basis)


def _sections(shaft: Shaft, own: ShaftStrength) -> list[_Section]:
    """Sections to judge: the one stated as weakest, else the smaller end of every round piece and every rectangle."""
    if own.weakest is not None:
        return [_round(f"the weakest section, {_size(own.weakest)}", own.weakest)]
    found = []
    for number, piece in enumerate(shaft.pieces):
        if piece.section_m is not None:
            found.append(_rectangle(shaft.pieces, number, piece.section_m))
        elif not piece.flange:
            section = _piece_section(shaft.pieces, number)
            found.append(_round(f"piece {number + 1}, {_size(section)}", section))
    return found


def _round(words: str, section: StressSection) -> _Section:
    return _Section(words, section, section_modulus(section.od_m, section.id_m), section_concentration(section))


def _rectangle(pieces: tuple[Piece, ...], number: int, sides_m: tuple[float, float]) -> _Section:
    """A rectangular piece: size by a round of its area; a sharp shoulder to its neighbours where no factor is given."""
    piece = pieces[number]
    beside = [max(pieces[other].od_m) for other in (number - 1, number + 1) if 0 <= other < len(pieces)]
    shoulder = max((od for od in beside if od > 0.0), default=None)
    equal = 2.0 * math.sqrt(sides_m[0] * sides_m[1] / math.pi)
    section = StressSection(equal, 0.0, None, shoulder, stress_factor=piece.stress_factor, surface=piece.surface)
    words = f"piece {number + 1}, rectangle {sides_m[0] * 1e3:.4g} by {sides_m[1] * 1e3:.4g} mm"
    return _Section(words, section, rectangle_modulus(*sides_m), section_concentration(section))


def _size(section: StressSection) -> str:
    bore = f"/{section.id_m * 1e3:.4g}" if section.id_m else ""
    return f"{section.od_m * 1e3:.4g}{bore} mm"


def _piece_section(pieces: tuple[Piece, ...], number: int) -> StressSection:
    """The smaller end of a piece with its raisers; a shoulder is the larger of what it leads to."""
    piece = pieces[number]
    small = int(piece.od_m[1] < piece.od_m[0])
    od = piece.spline_minor_m or piece.od_m[small]
    beside = [(pieces[number - 1], 1)] if number else []
    beside += [(pieces[number + 1], 0)] if number + 1 < len(pieces) else []
    ends = {1: piece.od_m[0], 0: piece.od_m[1]}
    steps = [(other.od_m[end], other) for other, end in beside if other.od_m[end] > ends[end] * (1 + 1e-9)]
    shoulder, fillet = None, None
    if steps:
        shoulder, other = max(steps, key=lambda item: item[0])
        fillet = piece.fillet_m or other.fillet_m
    section = StressSection(
        od,
        piece.id_m[small],
        fillet,
        shoulder,
        piece.keyway is not None,
        piece.spline_minor_m is not None,
        piece.cross_hole_m,
        piece.stress_factor,
        piece.surface,
    )
    return section if steps or piece.fillet_m is None else replace(section, fillet_m=None)


def _coupling(coupling: Coupling, mean: Floats, known: bool) -> LimitCurve:
    """Vibratory torque permitted at 10 Hz and below, and in passing what the peak torque leaves beside the mean one."""
    ratings = coupling.ratings
    flat = np.ones(len(mean))
    continuous = passing = None
    words = []
    if ratings is not None and ratings.vibratory_nm is not None:
        weighs = weighs_by_frequency(coupling.kind)
        permitted = ratings.vibratory_nm * (frequency_factor(ratings.reference_hz or 10.0) if weighs else 1.0)
        continuous = permitted * flat
        by_frequency = f" up to 10 Hz, less above by √(10 Hz / f) (DIN 740-2, {RECALLED})" if weighs else ""
        words.append(f"vibratory torque {torque_words(permitted)}{by_frequency}")
    if ratings is not None and ratings.peak_nm is not None and known:
        passing = np.maximum(ratings.peak_nm - mean, 0.0)
        words.append(f"peak torque {torque_words(ratings.peak_nm)} less the mean torque in passing")
    return LimitCurve(coupling.name, continuous, passing, None, "; ".join(words) or "its maker's ratings are not given")


def _gear(
    train: Train, gear: GearMesh | Epicyclic, mean: Floats, at_rated: float, assumed: list[Assumed]
) -> LimitCurve:
    """The share of rated torque, and the mean torque where teeth may not separate."""
    duty, rated = train.duty, gear.rated_torque_nm
    if rated is None:
        rated = at_rated
        if rated == 0.0:
            return _none(gear.name, "neither rated-torque nor a mean torque to take for it is known")
        why = "not given: the mean torque at rated speed is taken for it"
        assumed.append(Assumed(f"gears.{gear.name}", "rated-torque", torque_words(rated), why))
    flat = np.ones(len(mean)) * duty.gear_share * rated
    edition = duty.edition or RECALLED
    basis = f"vibratory torque {duty.gear_share * 100:.3g} % of rated {torque_words(rated)} (class rules, {edition})"
    if duty.gear_reversal == "refused":
        return LimitCurve(gear.name, np.minimum(flat, mean), None, None, f"{basis}; no tooth separation")
    return LimitCurve(gear.name, flat, None, None, basis)
