"""Viscous damping of links and stations in words and rows."""

from __future__ import annotations

import math
from typing import Protocol

from quillshaft.assess.results import Screening
from quillshaft.present.units import SHOWN, ShownUnits
from quillshaft.present.words import number
from quillshaft.train.model import Station

VISCOUS_HEADS = ("Element", "viscous", "acts as loss factor in mode 1", "why negative")


class Viscous(Protocol):
    """Anything of the train that may state a viscous coefficient [N·m·s/rad]."""

    @property
    def viscous_nms_rad(self) -> float | None:
        """Viscous coefficient [N·m·s/rad]; None where none is stated."""


def coefficient_words(viscous_nms_rad: float, units: ShownUnits) -> str:
    """A viscous coefficient with its unit."""
    return f"{number(viscous_nms_rad * units.per_nm, 5)} {units.torque}·s/rad".replace("-", "−")


def viscous_words(element: Viscous, units: ShownUnits) -> str:
    """What an element's line of data says of its viscous damping; empty where it states none."""
    if not element.viscous_nms_rad:
        return ""
    if not isinstance(element, Station):
        return f", viscous {coefficient_words(element.viscous_nms_rad, units)}"
    why = f" ({element.viscous_because})" if element.viscous_because else ""
    return f", viscous to ground {coefficient_words(element.viscous_nms_rad, units)}{why}"


def viscous_rows(screening: Screening) -> list[tuple[str, ...]]:
    """One row for each link and station that states viscous damping, under VISCOUS_HEADS."""
    graph, units = screening.graph, SHOWN[screening.train.units]
    omega = screening.modes[0].omega_rad_s if screening.modes else math.nan
    rows: list[tuple[str, ...]] = [
        (
            link.name,
            coefficient_words(link.viscous_nms_rad, units),
            number(link.viscous_nms_rad * omega / link.stiffness_nm_rad),
            "",
        )
        for link in graph.links
        if link.viscous_nms_rad and link.stiffness_nm_rad
    ]
    rows += [
        (
            f"{station.name} to ground",
            coefficient_words(station.viscous_nms_rad, units),
            "–",
            station.viscous_because or "",
        )
        for station in screening.train.stations
        if station.viscous_nms_rad
    ]
    return rows
