"""Stiffness windows as JSON: the keys that other programs rely on, stiffnesses in N·m/rad."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any

from quillshaft.assess.results import Screening
from quillshaft.present.results_json import to_json
from quillshaft.study.link_choice import OtherLink
from quillshaft.study.window_map import WindowMap
from quillshaft.study.window_ranges import Range
from quillshaft.study.window_tally import Blocked
from quillshaft.study.windows import Forbidden, Pair, Windows
from quillshaft.version import __version__


def _ranges(ranges: Iterable[Range]) -> list[dict[str, float | None]]:
    return [{"from_nm_rad": low, "to_nm_rad": high if math.isfinite(high) else None} for low, high in ranges]


def _causes(causes: Iterable[Blocked | Pair]) -> list[dict[str, Any]]:
    pairs = dict.fromkeys((cause.source, cause.mode) for cause in causes)
    return [{"source": source, "mode": mode} for source, mode in pairs]


def _forbidden(ranges: Iterable[Forbidden]) -> list[dict[str, Any]]:
    return [{**_ranges([(one.from_nm_rad, one.to_nm_rad)])[0], "because": _causes(one.because)} for one in ranges]


def _head(screening: Screening) -> dict[str, Any]:
    train = screening.train
    return {
        "schema": 1,
        "version": __version__,
        "input_sha256": train.file.sha256,
        "train": {"title": train.title, "tag": train.tag, "cases": list(train.cases)},
    }


def windows_data(screening: Screening, windows: Windows, others: tuple[OtherLink, ...] = ()) -> dict[str, Any]:
    """The windows of one link as plain data; a forbidden range from 0 has no lower end, one to null no upper end."""
    return {
        **_head(screening),
        "link": windows.link,
        "nominal_nm_rad": windows.nominal_nm_rad,
        "tolerance": list(windows.tolerance),
        "factors": list(windows.factors),
        "search_nm_rad": list(windows.search_nm_rad),
        "sources": list(windows.sources),
        "modes": None if windows.modes is None else list(windows.modes),
        "orders": windows.orders,
        "forbidden": _forbidden(windows.forbidden),
        "allowed": _ranges(windows.allowed),
        "not_recommended": _forbidden(windows.not_recommended),
        "recommended": _ranges(windows.recommended),
        "nominal_verdict": windows.nominal_verdict,
        "worst_verdict": windows.worst_verdict,
        "cannot_clear": _causes(windows.cannot_clear),
        "cannot_clear_worst": _causes(windows.cannot_clear_worst),
        "dismissed": [
            {"source": cause.source, "mode": cause.mode, **_ranges([(cause.from_nm_rad, cause.to_nm_rad)])[0]}
            for cause in windows.dismissed
        ],
        "other_links": [
            {
                "link": other.link,
                "nominal_nm_rad": other.nominal_nm_rad,
                "clears": list(other.clears),
                "ranges": _ranges(other.ranges_nm_rad),
                "recommended": _ranges(other.recommended_nm_rad),
            }
            for other in others
        ],
        "over_speeds": windows.over_speeds,
    }


def windows_json(screening: Screening, windows: Windows, others: tuple[OtherLink, ...] = ()) -> str:
    """The windows of one link as JSON text."""
    return to_json(windows_data(screening, windows, others))


def window_map_json(screening: Screening, found: WindowMap) -> str:
    """The map of two links as JSON text: lines of exact windows, and boxes proven clear."""
    data = {
        **_head(screening),
        "links": list(found.links),
        "nominal_nm_rad": list(found.nominal_nm_rad),
        "tolerance": [list(one) for one in found.tolerance],
        "search_nm_rad": [list(one) for one in found.search_nm_rad],
        "sources": list(found.sources),
        "lines": [
            {
                "other_nm_rad": line.other_nm_rad,
                "allowed": _ranges(line.allowed),
                "recommended": _ranges(line.recommended),
            }
            for line in found.lines
        ],
        "boxes": [
            {
                "first_nm_rad": list(box.first_nm_rad),
                "second_nm_rad": list(box.second_nm_rad),
                "recommended": box.recommended,
            }
            for box in found.boxes
        ],
    }
    return to_json(data)
