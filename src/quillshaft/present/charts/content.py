"""What the interference diagram shows and names: lines, bands and marks, and where lines get their labels."""

from __future__ import annotations

from dataclasses import dataclass

from quillshaft.assess.diagram_data import RPM, ModeBand, PairMark, SourceLine
from quillshaft.assess.results import Screening
from quillshaft.present.charts import look
from quillshaft.present.charts.panels import Panel, leaves
from quillshaft.present.words import number

LEFT_MM = 13.0
RIGHT_MM = 36.0
PLOT_MM = look.WIDTH_MM - LEFT_MM - RIGHT_MM
LABEL_MM = look.SMALL_PT * look.POINT_MM * 1.15
NUMBERED = 8
NEAR_RANGE = 0.4
"""A line that leaves the frame below this share of the slowest running speed gets no label of its own."""
Exit = tuple[float, float, str]
"""Where a line leaves a panel [rpm, Hz], and its label."""


@dataclass(frozen=True)
class Content:
    """What the diagram shows, and how far its speed axis runs [rpm]."""

    screening: Screening
    lines: tuple[SourceLine, ...]
    bands: tuple[ModeBand, ...]
    marks: tuple[PairMark, ...]
    top_rpm: float

    def numbered(self, mark: PairMark) -> int | None:
        """Number of a mark in the key; None beyond those listed."""
        place = self.marks.index(mark)
        return place + 1 if place < NUMBERED else None


def _shown(content: Content, line: SourceLine) -> bool:
    """True where a line is labelled: all but minor engine orders, and those of the pairs in the key."""
    keyed = [mark.pair for mark in content.marks[:NUMBERED]]
    return not line.minor or any(pair in keyed for pair in line.pairs)


def _leads(content: Content, line: SourceLine) -> bool:
    """True for the line of the source that the title names."""
    pair = content.screening.governing()
    return pair is not None and pair.source in line.names


def _labelled_in(content: Content, line: SourceLine, plots: tuple[Panel, ...]) -> int | None:
    """The panel that holds a line's label: the highest that it reaches near running speeds; None for no label."""
    operation = content.screening.train.operation
    slow = NEAR_RANGE * min(low for low, _ in operation.ranges_rad_s) * RPM
    named = _leads(content, line)
    for index in range(len(plots) - 1, -1, -1):
        at = leaves(line, plots[index])
        if at is not None and (at[0] >= slow or named) and (_shown(content, line) or named):
            return index
    return None


def not_in_frame(content: Content, plots: tuple[Panel, ...]) -> dict[str, list[str]]:
    """Where -> names of the lines, minor orders apart, that are outside the frame at running speeds, unlabelled."""
    places: dict[str, list[str]] = {}
    for line in content.lines:
        if line.minor or _labelled_in(content, line, plots) is not None:
            continue
        gap = len(plots) > 1 and line.running_hz[1] < plots[1].low_hz
        name = line.names[0]
        if line.kind == "fixed":
            name += f" {number(line.nominal_hz[0])} Hz"
        places.setdefault("in the gap" if gap else "above", []).append(name)
    return places


def line_label(line: SourceLine) -> str:
    """Names of the sources on a line, shortened to what the margin holds."""
    tail = " (not judged)" if line.starting else ""
    text = ", ".join(line.names) + tail
    if look.width_mm(text) > RIGHT_MM - 5.0 and len(line.names) > 1:
        text = f"{line.names[0]} +{len(line.names) - 1}" + tail
    return look.shorten_name(text, RIGHT_MM - 5.0)


def exits_of(content: Content, plots: tuple[Panel, ...], number: int, by_top: bool) -> list[Exit]:
    """Where the lines labelled at a panel's top, or at its right edge, leave it."""
    found: list[tuple[SourceLine, tuple[float, float]]] = []
    for line in content.lines:
        at = leaves(line, plots[number])
        if at is None or _labelled_in(content, line, plots) != number:
            continue
        if (at[0] < content.top_rpm * (1.0 - 1e-9)) == by_top:
            found.append((line, at))
    room = int((PLOT_MM if by_top else plots[number].height_mm) / LABEL_MM)
    found.sort(key=lambda item: (not item[0].pairs, not _leads(content, item[0])))
    return [(*at, line_label(line)) for line, at in found[:room]]
