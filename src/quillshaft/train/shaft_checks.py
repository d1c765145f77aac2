"""Checks of [shafts] and [materials] that need both: temperatures must lie where a modulus is stated."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from quillshaft.train.assumptions import ICE_K
from quillshaft.train.overlay import PathParts
from quillshaft.train.shaft_resolve import ROOM_K
from quillshaft.train.validate import Findings, Rows


def check_shaft_temperatures(findings: Findings, rows: Rows) -> None:
    """Every temperature that a shaft's modulus is read at, given or 20 °C, against its material's table."""
    for name, row in rows.keyed["shafts"].items():
        if row.pieces is None and row.equivalent is None and row.throw is None:
            continue
        material = rows.keyed["materials"].get(row.material or "steel")
        points = () if material is None else material.shear_modulus
        for path, kelvin in _temperatures(row):
            _check(findings, ("shafts", name, *path), kelvin, points, row.material or "steel")


def _temperatures(row: Any) -> Iterator[tuple[PathParts, float | None]]:
    yield ("temperature",), row.temperature
    for index, piece in enumerate(row.pieces or ()):
        if piece.temperature is not None:
            yield ("pieces", index, "temperature"), piece.temperature


def _check(
    findings: Findings, path: PathParts, kelvin: float | None, points: tuple[tuple[float, float], ...], material: str
) -> None:
    if len(points) < 2:
        if kelvin is not None:
            message = f"the shear modulus of {material} is not stated against temperature"
            allowed = 'a material with shear-modulus = { "20 degC" = "80 GPa", "200 degC" = "74 GPa" }'
            findings.add(path, message, f"{kelvin - ICE_K:.4g} °C", allowed)
        return
    low, high = points[0][0], points[-1][0]
    value = ROOM_K if kelvin is None else kelvin
    if not low - 1e-9 <= value <= high + 1e-9:
        unsaid = "" if kelvin is not None else " (taken where temperature is not given)"
        message = f"{value - ICE_K:.4g} °C{unsaid} lies beside the shear modulus of {material}"
        findings.add(path, message, None, f"{low - ICE_K:.4g} to {high - ICE_K:.4g} °C")
