"""A file printed as it stands: monospaced, numbered lines, long lines wrapped and marked."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from reportlab.platypus import Flowable

from quillshaft.present.pdf.fonts import MONO, text_width_pt
from quillshaft.present.pdf.style import QUIET, RULE, TEXT, TEXT_WIDTH_PT, VERBATIM_PT
from quillshaft.present.pdf.text import source_line

_LEADING_PT = 9.2
_GUTTER_GAP_PT = 8.0
_FEWEST_LINES = 3
CONTINUED = "↪"


@dataclass(frozen=True)
class PrintedLine:
    """One line on the page: the label in the gutter (number or continuation mark) and the text."""

    label: str
    text: str


class VerbatimLines(Flowable):  # type: ignore[misc]
    """Lines of a file with their labels in a gutter; splits between any two lines."""

    def __init__(self, lines: Sequence[PrintedLine], gutter_pt: float) -> None:
        super().__init__()
        self.lines = tuple(lines)
        self.gutter_pt = gutter_pt
        self.spaceAfter = 8

    def wrap(self, avail_width: float, avail_height: float) -> tuple[float, float]:  # noqa: ARG002
        """Width and height in points."""
        self.width, self.height = avail_width, len(self.lines) * _LEADING_PT + 2
        return self.width, self.height

    def split(self, avail_width: float, avail_height: float) -> list[Any]:  # noqa: ARG002
        """The lines that fit and the rest; nothing where only a few would fit."""
        count = int((avail_height - 2) / _LEADING_PT)
        if count < min(_FEWEST_LINES, len(self.lines)):
            return []
        return [VerbatimLines(part, self.gutter_pt) for part in (self.lines[:count], self.lines[count:])]

    def draw(self) -> None:
        """Labels right-aligned in the gutter, a thin line, the text."""
        canvas, left = self.canv, self.gutter_pt + _GUTTER_GAP_PT
        canvas.setFont(MONO, VERBATIM_PT)
        for index, line in enumerate(self.lines):
            y = self.height - (index + 1) * _LEADING_PT + 1.6
            canvas.setFillColor(QUIET)
            canvas.drawRightString(self.gutter_pt, y, line.label)
            canvas.setFillColor(TEXT)
            canvas.drawString(left, y, line.text)
        canvas.setStrokeColor(RULE)
        canvas.setLineWidth(0.4)
        canvas.line(left - 4, 0, left - 4, self.height)


def verbatim(text: str) -> VerbatimLines:
    """The text of a file with line numbers. Lines too long for the page continue behind a ↪ in the gutter;
    a character that cannot be shown stands as its code, such as `<U+0007>`.
    """
    lines = re.split(r"\r\n|\n|\r", text)
    if len(lines) > 1 and not lines[-1]:
        lines.pop()
    character_pt = text_width_pt("0", MONO, VERBATIM_PT)
    gutter_pt = character_pt * len(str(len(lines)))
    columns = int((TEXT_WIDTH_PT - gutter_pt - _GUTTER_GAP_PT) / character_pt)
    printed = []
    for number, line in enumerate(lines, start=1):
        shown = source_line(line)
        pieces = [shown[i : i + columns] for i in range(0, len(shown), columns)] or [""]
        printed.append(PrintedLine(str(number), pieces[0]))
        printed += [PrintedLine(CONTINUED, piece) for piece in pieces[1:]]
    return VerbatimLines(printed, gutter_pt)
