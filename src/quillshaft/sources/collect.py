"""All sources of a train: implied and given, merged where they are one line, without those off."""

from __future__ import annotations

from dataclasses import replace

from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.records import dataclass
from quillshaft.sources.implied import gear_sources, machine_sources, shaft_sources
from quillshaft.sources.joints import joint_sources
from quillshaft.sources.line import Action, Source
from quillshaft.train.model import Excitation, Train
from quillshaft.train.problems import TrainFileError, did_you_mean
from quillshaft.train.validate import Findings

FAMILIES: tuple[str, ...] = (
    *("default", "shaft", "1x", "2x", "gear", "mesh", "planet-pass", "line", "line-1x", "line-2x"),
    *("converter", "out-1x", "out-2x", "out-6x", "out-12x", "switch", "beat", "grid", "slip"),
    *(
        "pass",
        "vane-pass",
        "vane-pass 2x",
        "blade-pass",
        "blade-pass 2x",
        "diffuser-pass",
        "engine",
        "joint",
        "excitation",
    ),
)


@dataclass(frozen=True)
class SourceSet:
    """The sources of a train in their order of appearance, and those switched off with the reason."""

    active: tuple[Source, ...]
    off: tuple[tuple[Source, str], ...]


def collect_sources(train: Train, graph: TorsionalGraph) -> SourceSet:
    """Every source of the train.

    Raises TrainFileError where a machine contradicts the speeds, or [excitations-off] or [criteria] name
    what is not there.
    """
    findings = Findings(train.file, train.cases)
    sources = [
        *shaft_sources(graph),
        *gear_sources(train, graph),
        *joint_sources(train, graph),
        *machine_sources(train, graph, findings),
        *(_given(excitation, graph, findings) for excitation in train.excitations),
    ]
    _check_names(sources, train, findings)
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))
    on = [source for source in sources if _reason_off(source, train) is None]
    off = [(source, reason) for source in sources if (reason := _reason_off(source, train)) is not None]
    return SourceSet(tuple(_stated(source, train) for source in _merged(on, _phased(train))), tuple(off))


def _reason_off(source: Source, train: Train) -> str | None:
    return next((reason for name, reason in train.excitations_off.items() if source.answers_to(name)), None)


def _given(excitation: Excitation, graph: TorsionalGraph, findings: Findings) -> Source:
    if excitation.at in graph.stations:
        station = graph.number(excitation.at)
        action = Action("point", (station,), (0.0,))
    else:
        station = graph.link(excitation.at).stations[0]
        action = Action("link", link=excitation.at)
    if excitation.order and graph.speed_ratio[station] == 0:
        message = f"an order needs a station that turns, and {excitation.at} stands still"
        findings.add(("excitations", excitation.name, "order"), message, excitation.order)
    return Source(
        excitation.name,
        (excitation.name,),
        ((excitation.name, "excitation", "default"),),
        excitation.at,
        station,
        excitation.order,
        excitation.frequency_hz,
        0.0,
        abs(float(graph.speed_ratio[station])),
        excitation.when,
        action,
        None,
        _amplitude(excitation.torque_nm, excitation.torque_share),
    )


def _amplitude(torque_nm: float | None, share: float | None) -> str | None:
    """An amplitude in words; None where there is none."""
    if share is not None:
        return f"{share * 100:.3g} % of mean torque"
    return None if torque_nm is None else f"{torque_nm:.4g} N·m"


def _stated(source: Source, train: Train) -> Source:
    """The source with the amplitude that [amplitudes] states for it."""
    stated = [item for item in train.amplitudes if source.answers_to(item.source)]
    words = dict.fromkeys(_amplitude(item.torque_nm, item.torque_share) for item in stated)
    return replace(source, torque=" + ".join(word for word in words if word)) if stated else source


def _check_names(sources: list[Source], train: Train, findings: Findings) -> None:
    names = [source.name for source in sources]
    for excitation in train.excitations:
        if names.count(excitation.name) > 1:
            findings.add(("excitations", excitation.name), "another source already has this name")
    for name in train.excitations_off:
        if not any(source.answers_to(name) for source in sources):
            hint = did_you_mean(name, names)
            findings.add(
                ("excitations-off", name),
                f"there is no source of this name{hint}",
                None,
                "as `check` lists it",
            )
    labels = {label for source in sources for chain in source.labels for label in chain} | set(FAMILIES)
    labels |= {machine.name for machine in train.machines} | {machine.kind for machine in train.machines}
    for key, table in (
        ("separation", train.criteria.separation),
        ("worst-case-separation", train.criteria.worst_case),
    ):
        for kind in table:
            said_before = key != "separation" and kind in train.criteria.separation
            if kind not in labels and not said_before:
                hint = did_you_mean(kind, sorted(labels))
                allowed = "a source as `check` lists it, or one of: " + ", ".join(FAMILIES)
                findings.add(("criteria", key, kind), f"no source is of this kind{hint}", None, allowed)


def _phased(train: Train) -> frozenset[str]:
    """Excitations that keep a phase, and what they keep it to."""
    locked = [item for item in train.excitations if item.locked_with is not None]
    return frozenset(name for item in locked for name in (item.name, item.locked_with or ""))


def _merged(sources: list[Source], phased: frozenset[str]) -> tuple[Source, ...]:
    """Sources on the same stations and the same line as one row that lists all its origins, `phased` ones apart."""
    rows: dict[object, Source] = {}
    for source in sources:
        sign = -1.0 if (source.order or source.frequency_hz) < 0 else 1.0
        line = (
            source.action,
            round(abs(source.order) * source.speed_ratio, 9),
            round(sign * source.frequency_hz, 9),
            source.band,
            source.when,
            source.name if source.name in phased else "",
        )
        first = rows.get(line)
        if first is None:
            rows[line] = source
        else:
            rows[line] = replace(
                first,
                origins=(*first.origins, *source.origins),
                labels=(*first.labels, *source.labels),
                aliases=(*first.aliases, *source.aliases),
                torque=first.torque or source.torque,
            )
    return tuple(rows.values())
