"""Rows of the tables that terminal and report share, as text in the units the file declares."""

from __future__ import annotations

import math

from quillshaft.assess.results import Interference, Screening
from quillshaft.present.shown_text import shown_text
from quillshaft.present.units import SHOWN
from quillshaft.present.words import VERDICT_WORDS, hertz, number, percent, plain, source_line, source_names


def pair_row(screening: Screening, pair: Interference) -> tuple[str, ...]:
    """One judged pair as cells."""
    critical = pair.critical_speed_rpm
    return (
        f"{pair.mode}",
        hertz(screening.mode(pair.mode).frequency_hz),
        pair.source,
        "–" if critical is None else f"{critical:.0f}",
        percent(pair.margin, True).removesuffix(" %"),
        percent(pair.worst_margin, True).removesuffix(" %"),
        plain(pair.required).removesuffix(" %"),
        "–" if pair.excitability is None else f"{pair.excitability:.3f}",
        VERDICT_WORDS[pair.verdict],
        VERDICT_WORDS[pair.worst_verdict] + (" (dismissed)" if pair.dismissed else ""),
    )


def station_rows(screening: Screening) -> list[tuple[str, ...]]:
    """(station, inertia, speed ratio, rpm at rated, referred inertia, made of) per station, in shown units."""
    graph = screening.graph
    factor = SHOWN[screening.train.units].per_kgm2
    rpm = screening.train.operation.rated_rad_s * 30.0 / math.pi
    rows: list[tuple[str, ...]] = []
    for index, name in enumerate(graph.stations):
        ratio, scale = graph.speed_ratio[index], float(graph.scale[index])
        parts = [part for part in graph.parts if part.station == index and part.inertia_kgm2]
        made_of = " + ".join(f"{part.element.split('.', 1)[1]} {number(part.inertia_kgm2 * factor)}" for part in parts)
        inertia = float(graph.inertia_kgm2[index]) * factor
        rows.append(
            (
                name,
                number(inertia, 5),
                str(abs(ratio)) if ratio else "at rest",
                f"{rpm * float(ratio):.1f}",
                number(inertia * scale**2, 5),
                made_of if len(parts) > 1 else "",
            )
        )
    return rows


def station_heads(screening: Screening) -> tuple[str, ...]:
    """Headings of `station_rows`."""
    unit = SHOWN[screening.train.units].inertia
    return ("Station", f"inertia, {unit}", "speed ratio", "rpm at rated", f"referred, {unit}", "made of")


def link_rows(screening: Screening) -> list[tuple[str, ...]]:
    """(link, kind, between, stiffness, referred, tolerance, mean torque, wind-up, teeth) in shown units."""
    graph, units = screening.graph, SHOWN[screening.train.units]
    rows: list[tuple[str, ...]] = []
    for link, duty in zip(graph.links, screening.duties, strict=True):
        ends = " – ".join(graph.stations[station] for station in link.stations)
        torque, wind = duty.mean_torque_nm, duty.wind_up_rad
        low, high = link.tolerance
        unknown = "not given" if screening.train.power is None else "indeterminate"
        stiffness, referred = (
            "rigid" if value is None else number(value * units.per_nm_rad, 5)
            for value in (link.stiffness_nm_rad, link.referred_nm_rad)
        )
        rows.append(
            (
                link.name,
                link.kind,
                ends if link.kind != "tie" else f"{ends} – ground",
                stiffness,
                referred,
                "–" if low == high == 0 else tolerance_words(link.tolerance),
                unknown if torque is None else number(torque * units.per_nm),
                "–" if wind is None else f"{math.degrees(wind):.3f}",
                link.ratio_text,
            )
        )
    return rows


def tolerance_words(tolerance: tuple[float, float]) -> str:
    """A relative tolerance: "±5 %" or "−5 / +20 %"."""
    low, high = tolerance
    if abs(low + high) < 1e-12:
        return f"±{high * 100:.3g} %"
    return f"−{abs(low) * 100:.3g} / +{high * 100:.3g} %"


def link_heads(screening: Screening) -> tuple[str, ...]:
    """Headings of `link_rows`."""
    units = SHOWN[screening.train.units]
    words = ("Link", "kind", "between", f"stiffness, {units.stiffness}", "referred", "tolerance")
    return (*words, f"mean torque, {units.torque}", "wind-up, °", "teeth")


def source_rows(screening: Screening) -> list[tuple[str, ...]]:
    """(source, at, line, speed ratio, when, order, remark) per source, those switched off last."""
    rows: list[tuple[str, ...]] = [
        (
            source_names(source),
            source.at,
            source_line(source),
            f"{source.speed_ratio:.6g}",
            source.when,
            "" if source.major is None else ("major" if source.major else "minor"),
            shown_text(source.torque or "", screening.train.units),
        )
        for source in screening.sources
    ]
    rows += [
        (source.name, source.at, source_line(source), f"{source.speed_ratio:.6g}", "switched off", "", why)
        for source, why in screening.sources_off
    ]
    return rows
