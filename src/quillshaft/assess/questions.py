"""What to ask each supplier: data that decide a verdict, look odd, are missing, or had to be assumed."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Literal

from quillshaft.assess.mode_results import part_energy
from quillshaft.assess.results import Interference, ModeResult, Screening
from quillshaft.elements.coupling import is_rubber
from quillshaft.elements.epicyclic import ring_mesh_name
from quillshaft.records import dataclass
from quillshaft.train.basic_model import Assumed, Provenance, Tolerance
from quillshaft.train.gear_model import Epicyclic
from quillshaft.train.model import Train

DECISIVE = 0.25
"""Share of a critical mode's uncertainty from which one value decides."""
OPERATOR = "operator of the train"
TABLE = {
    "shaft": "shafts",
    "coupling": "couplings",
    "mesh": "gears",
    "epicyclic": "gears",
    "belt": "belts",
    "tie": "ties",
    "damper": "dampers",
}
OWN_CHOICE = ("operation", "criteria", "assumptions")
Kind = Literal["decisive", "odd", "missing", "assumed"]

ASKED = {
    "entrained": "Is the stated inertia of {element} dry, or does it hold the water that turns with it, and how much "
    "is that? It was taken as it stands.",
    "shaft-in-hub": "Does the stated stiffness of {element} hold the shaft ends inside its hubs? It was taken not to "
    "hold them.",
    "own-inertia": "Do the inertias stated at the ends of {element} hold the shaft's own inertia already? They were "
    "taken not to, and half of it was added at each end.",
    "material": "Of what material is {element}? {value} was assumed.",
    "shear-modulus, density": "What shear modulus and density does the maker's certificate state for {element}? "
    "{value} was assumed.",
    "hub-rule": "How do the hubs on {element} grip the shaft, by shrink fit, key or flange? {value} of the "
    "engagement was counted as free length.",
    "operating-temperature": "Between what temperatures does {element} work in service? {value} was assumed.",
    "vanes": "How many vanes has {element}? Without the number its vane passing is not screened.",
    "blades": "How many blades has {element}? Without the number its blade passing is not screened.",
    "slip": "What is the slip of {element} at rated load? {value} was assumed.",
    "undamped": "How much of its ring does the maker of {element} count with the station in undamped modes? It was "
    "taken as {value}.",
    "reference-frequency": "For what frequency does the vibratory torque of {element} stand? {value} was assumed.",
    "mesh stiffness by rule": "What mesh stiffness does the maker of {element} give? That of {value} was used ({why}).",
    "blanks and rack": "Are the wheels of {element} solid steel blanks, and what dedendum has their rack? {value} was "
    "assumed.",
    "contact-ratio": "What is the transverse contact ratio of {element}? It was worked out from the teeth.",
    "planet teeth": "How many teeth has one planet of {element}? {value} was assumed.",
    "planet-mass": "Does the carrier's inertia hold the mass of the planets of {element}? It was taken to.",
    "spans": "How many spans of {element} stay taut under load? {value} was assumed.",
    "creep": "By how much does {element} creep at rated load? {value} was assumed.",
    "status": "What is the maker's own value for {element}? The value in use is marked as assumed ({why}).",
}
"""Question for each key that had to be assumed."""
OTHERWISE = "What is the {key} of {element}? {value} was assumed ({why})."
LIMITS = "Within what limits does the {main} of {element} stay? {value} was assumed ({why})."
LIMITS_OF_SEVERAL = "Within what limits does the {main} of each of these stay: {element}? {value} was assumed ({why})."
TOLERANCES = ("tolerance", "inertia-tolerance")
UNIT = "Is the {key} of {element} meant as it was read: {value}?"


@dataclass(frozen=True)
class SupplierQuestion:
    """One question in full sentences.

    supplier   the source that the file names for the element, else "not named: " and the element
    number     counts from 1 for each supplier
    element    the element asked about, several joined by commas
    kind       decisive: a large share of a critical mode's uncertainty; odd: a flag; missing; assumed
    """

    supplier: str
    number: int
    element: str
    kind: Kind
    text: str


def supplier_questions(screening: Screening) -> tuple[SupplierQuestion, ...]:
    """Questions grouped by supplier, those named in the file first, the most urgent kind first."""
    sources = {element: item.source for element, item in _provenance(screening.train).items()}
    asked: dict[str, list[tuple[str, Kind, str]]] = {source: [] for source in sources.values() if source}

    def put(kind: Kind, element: str, text: str) -> None:
        known = sources.get(element.split(", ", maxsplit=1)[0]) or f"not named: {element}"
        supplier = OPERATOR if element.split(".", maxsplit=1)[0] in OWN_CHOICE else known
        asked.setdefault(supplier, []).append((element, kind, text))

    drafts: dict[Kind, Iterator[tuple[str, str]]] = {
        "decisive": _decisive(screening),
        "odd": _odd(screening),
        "missing": _missing(screening.train),
        "assumed": _assumed(screening, sources),
    }
    for kind, items in drafts.items():
        for element, text in items:
            put(kind, element, text)
    return tuple(
        SupplierQuestion(supplier, number, element, kind, text)
        for supplier, items in asked.items()
        for number, (element, kind, text) in enumerate(items, start=1)
    )


def _provenance(train: Train) -> dict[str, Provenance]:
    """Where the data of every element come from, by element."""
    out = {f"stations.{item.name}": item.provenance for item in train.stations}
    out |= {f"shafts.{item.name}": item.provenance for item in train.shafts}
    out |= {f"couplings.{item.name}": item.provenance for item in train.couplings}
    out |= {f"gears.{item.name}": item.provenance for item in train.gears}
    rings = [item for item in train.gears if isinstance(item, Epicyclic) and item.wheels is not None]
    out |= {f"gears.{ring_mesh_name(item)}": item.provenance for item in rings}
    out |= {f"belts.{item.name}": item.provenance for item in train.belts}
    out |= {f"joints.{item.name}": item.provenance for item in train.joints}
    out |= {f"ties.{item.name}": item.provenance for item in train.ties}
    out |= {f"dampers.{item.name}": item.provenance for item in train.dampers}
    out |= {f"couplings.{item.name}": item.provenance for item in train.fluid_couplings}
    out |= {f"machines.{item.name}": item.provenance for item in train.machines}
    return out | {f"excitations.{item.name}": item.provenance for item in train.excitations}


def _critical(screening: Screening) -> list[tuple[ModeResult, Interference]]:
    """Modes that decide the verdict with their worst pair: those not clear, or the governing one."""
    pairs = [pair for pair in screening.not_clear() if pair.dismissed is None]
    governing = screening.governing()
    if not pairs and governing is not None:
        pairs = [governing]
    first = {pair.mode: pair for pair in reversed(pairs)}
    return [(screening.mode(number), first[number]) for number in sorted(first)]


def uncertainty_shares(screening: Screening, mode: ModeResult) -> dict[tuple[str, str], float]:
    """Share (0 to 1) of each value, by (element, "stiffness" or "inertia"), in what a mode's frequency may be off.

    First order: half the energy share times the tolerance (the larger side), over the sum of all (d ln f / d ln k is
    half the strain energy share: Rayleigh's principle, common practice); empty where nothing has a tolerance.
    """
    graph = screening.graph
    parts: dict[tuple[str, str], float] = {}
    for link in graph.links:
        key = f"{TABLE[link.kind]}.{link.name}", "stiffness"
        parts[key] = mode.strain_energy[link.name] * _width(link.tolerance)
    for part in graph.parts:
        key = part.element, "inertia"
        moved = part_energy(graph, mode, part) * _width(part.tolerance)
        parts[key] = parts.get(key, 0.0) + moved
    total = sum(parts.values())
    return {key: value / total for key, value in parts.items()} if total > 0 else {}


def _width(tolerance: Tolerance) -> float:
    return max(abs(tolerance[0]), abs(tolerance[1]))


def _decisive(screening: Screening) -> Iterator[tuple[str, str]]:
    """(element, question) for every value that holds a large share of a critical mode's uncertainty."""
    held: dict[tuple[str, str], list[str]] = {}
    for mode, pair in _critical(screening):
        low, high = mode.bounds_hz
        clear = pair.verdict == pair.worst_verdict == "clear"
        words = "the nearest to a source" if clear else f"not clear of {pair.source}"
        for key, share in uncertainty_shares(screening, mode).items():
            if share >= DECISIVE:
                held.setdefault(key, []).append(
                    f"{share * 100:.0f} % of the uncertainty of mode {mode.mode} ({low:.2f} to {high:.2f} Hz, {words})"
                )
    guessed = {item.element for item in screening.assumed if item.key in ("tolerance", "inertia-tolerance")}
    for (element, quantity), shares in held.items():
        limits = "its limits were assumed and" if element in guessed else "it"
        verb = "hold" if element in guessed else "holds"
        text = f"How sure is the {quantity} of {element}, and within what limits does it stay? As it stands, {limits} "
        yield element, f"{text}{verb} {'; '.join(shares)}."


def _odd(screening: Screening) -> Iterator[tuple[str, str]]:
    for flag in screening.flags:
        text = f"About {flag.element}: {flag.text}"
        yield flag.element, text if text.endswith("?") else f"{text}. Please confirm or correct."


def _missing(train: Train) -> Iterator[tuple[str, str]]:
    for coupling in train.couplings:
        element = f"couplings.{coupling.name}"
        if coupling.rated_torque_nm is None:
            yield element, f"What is the rated torque of {element}? Its mean torque could not be judged without it."
        if coupling.kind is None:
            yield element, f"Of what kind is {element}? Where nothing else is stated it was taken as rubber."
        if is_rubber(coupling.kind) and coupling.loss_factor is coupling.viscous_nms_rad is None:
            low = f"ζ = {train.zeta[0] * 100:.3g} %"
            yield element, f"What is the relative damping ψ of {element}, and at what temperature? {low} was used."


def _assumed(screening: Screening, sources: dict[str, str | None]) -> Iterator[tuple[str, str]]:
    """(element, question) for what was assumed; equal limits of one supplier's elements are asked for together."""
    decided = {element for element, _ in _decisive(screening)}
    limits: dict[tuple[str, ...], list[Assumed]] = {}
    for item in screening.assumed:
        if item.element.split(".")[0] in OWN_CHOICE:
            continue
        if item.key not in TOLERANCES:
            yield item.element, _assumed_question(item)
        elif item.element not in decided:
            place = sources.get(item.element) or item.element
            limits.setdefault((place, _main(item), item.value, item.why), []).append(item)
    for items in limits.values():
        names = ", ".join(dict.fromkeys(item.element for item in items))
        pattern = LIMITS_OF_SEVERAL if len(items) > 1 else LIMITS
        yield names, pattern.format(main=_main(items[0]), element=names, value=items[0].value, why=items[0].why)


def _main(item: Assumed) -> str:
    inertia = item.element.startswith("stations.") or item.key == "inertia-tolerance"
    return "inertia" if inertia else "stiffness"


def _assumed_question(item: Assumed) -> str:
    pattern = UNIT if item.why == "how the unit was read" else ASKED.get(item.key, OTHERWISE)
    return pattern.format(element=item.element, key=item.key, value=item.value, why=item.why)
