"""Building blocks of a report: headings, paragraphs, lists, boxes, the verdict stamp, signature lines.

Every text argument is plain text: markup characters in it are shown, not obeyed, unless a function says
otherwise. Newlines are line breaks.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import zip_longest
from typing import Any, Literal, get_args

from reportlab.lib.colors import Color, white
from reportlab.platypus import Flowable, KeepTogether, Paragraph, Table

from quillshaft.present.pdf.fonts import SANS
from quillshaft.present.pdf.pieces import paragraph_pieces
from quillshaft.present.pdf.style import ACCENT, QUIET, RULE, TEXT_WIDTH_PT, TINT, styles
from quillshaft.present.pdf.text import cut, escaped, one_line

Tone = Literal["pass", "restriction", "fail"]

ROOM_BELOW_HEADING_PT = 64.0
ROOM_LIMIT_PT = 560.0
_OUTLINE_TITLE_LENGTH = 120


class Heading(Paragraph):  # type: ignore[misc]
    """A heading that enters the outline and moves to the next page when too little would follow it."""

    level = 1
    outline_title = ""
    room_below = ROOM_BELOW_HEADING_PT

    def wrap(self, avail_width: float, avail_height: float) -> tuple[float, float]:
        """Width and height in points; more than is available where what follows would not fit."""
        width, height = super().wrap(avail_width, avail_height)
        self.text_height = height
        room = min(self.room_below, ROOM_LIMIT_PT - height)
        crowded = height <= avail_height < height + room
        return width, (avail_height + 1 if crowded and self.outline_title else height)

    def split(self, avail_width: float, avail_height: float) -> list[Any]:
        """Parts of a heading taller than the page; the first enters the outline."""
        if self.text_height <= avail_height:
            return []
        parts: list[Any] = super().split(avail_width, avail_height)
        for part in parts[:1]:
            part.outline_title, part.level, part.room_below = self.outline_title, self.level, 0.0
        return parts

    def draw(self) -> None:
        """Draw the text and mark its place in the outline."""
        if self.outline_title and hasattr(self.canv, "mark"):
            self.canv.mark(self.outline_title, self.level - 1, self.text_height)
        super().draw()


def heading(text: str, level: int = 1) -> Heading:
    """A heading of level 1, 2 or 3. Raises ValueError when the level is another."""
    if level not in (1, 2, 3):
        raise ValueError(f"heading level {level}: allowed are 1, 2 and 3")
    block = Heading(escaped(text), styles().headings[level - 1])
    block.level = level
    block.outline_title = cut(one_line(text), _OUTLINE_TITLE_LENGTH) or "(untitled)"
    return block


def paragraph(text: str, markup: bool = False) -> Paragraph:
    """A paragraph of body text. With `markup` the text may hold <b>, <i>, <super> and <sub>; user text in it
    must then pass through `escaped` first, and broken markup raises ValueError.
    """
    return Paragraph(text if markup else escaped(text), styles().body)


def note(text: str) -> Paragraph:
    """A paragraph in small type, for remarks below a table."""
    return Paragraph(escaped(text), styles().note)


class KeptTogether(KeepTogether):  # type: ignore[misc]
    """Blocks that stand on one page, with `parts` open to whoever needs their height."""

    def __init__(self, parts: Sequence[Flowable]) -> None:
        super().__init__(list(parts))
        self.parts = tuple(parts)


def captioned(block: Flowable, text: str) -> KeptTogether:
    """A figure or a short table with its caption below, kept on one page."""
    return KeptTogether([block, Paragraph(escaped(text), styles().caption)])


def bullets(items: Sequence[str]) -> list[Paragraph]:
    """One paragraph with a bullet per item; the list may stand in a story as it is."""
    return [Paragraph(escaped(item), styles().bullet, bulletText="•") for item in items]


def key_values(pairs: Sequence[tuple[str, str]], label_width_pt: float = 130.0) -> Table:
    """Labels and values in two columns without lines. `label_width_pt` is the width of the labels."""
    cells = styles().cells["l"]
    rows: list[list[Any]] = []
    for label, text in pairs:
        words = f'<font color="{_hex(QUIET)}">{escaped(cut(one_line(label), 200))}</font>'
        labels = [Paragraph(words, cells)]
        values = paragraph_pieces(text, cells, TEXT_WIDTH_PT - label_width_pt - 6)
        rows += [list(pair) for pair in zip_longest(labels, values, fillvalue="")]
    return Table(
        rows or [["", ""]],
        colWidths=[label_width_pt, TEXT_WIDTH_PT - label_width_pt],
        hAlign="LEFT",
        spaceAfter=6,
        style=[
            ("FONTNAME", (0, 0), (-1, -1), SANS),
            ("VALIGN", (0, 0), (-1, -1), "TOP"),
            ("LEFTPADDING", (0, 0), (-1, -1), 0),
            ("TOPPADDING", (0, 0), (-1, -1), 1.5),
            ("BOTTOMPADDING", (0, 0), (-1, -1), 1.5),
        ],
    )


def caution_box(text: str, title: str = "Caution") -> Table:
    """A tinted box with a heavy bar at its left, for what a reader must not miss."""
    body = styles().body
    rows = [["", Paragraph(f"<b>{escaped(cut(one_line(title), 300))}</b>", body)]]
    rows += [["", piece] for piece in paragraph_pieces(text, body, TEXT_WIDTH_PT - 24)]
    return Table(
        rows,
        colWidths=[3, TEXT_WIDTH_PT - 3],
        hAlign="LEFT",
        spaceBefore=6,
        spaceAfter=8,
        style=[
            ("FONTNAME", (0, 0), (-1, -1), SANS),
            ("BACKGROUND", (0, 0), (0, -1), ACCENT),
            ("BACKGROUND", (1, 0), (1, -1), TINT),
            ("LEFTPADDING", (0, 0), (-1, -1), 11),
            ("RIGHTPADDING", (0, 0), (-1, -1), 10),
            ("TOPPADDING", (0, 0), (-1, 0), 6),
            ("TOPPADDING", (0, 1), (-1, -1), 0),
            ("BOTTOMPADDING", (0, 0), (-1, -2), 0),
            ("BOTTOMPADDING", (0, -1), (-1, -1), 4),
        ],
    )


def stamp(text: str, tone: Tone, detail: str = "") -> Table:
    """The verdict: a framed plate over the full width, a few words in large type and a line of detail.

    A pass is a plain frame, a restriction has a heavy bar at its left, a failure is white on dark, so that
    the three differ in black and white. Raises ValueError when `tone` is none of them.
    """
    if tone not in get_args(Tone):
        raise ValueError(f"stamp tone {tone!r}: allowed are {', '.join(get_args(Tone))}")
    large, small = styles().stamp, styles().stamp_detail
    if tone == "fail":
        large, small = (style.clone(f"{style.name}-light", textColor=white) for style in (large, small))
    rows = [["", Paragraph(escaped(cut(one_line(text), 400)), large)]]
    if detail:
        rows += [["", piece] for piece in paragraph_pieces(detail, small, TEXT_WIDTH_PT - 34)]
    background = {"pass": [], "restriction": [("BACKGROUND", (0, 0), (0, -1), ACCENT)]}.get(
        tone, [("BACKGROUND", (0, 0), (-1, -1), ACCENT)]
    )
    return Table(
        rows,
        colWidths=[9, TEXT_WIDTH_PT - 9],
        hAlign="LEFT",
        spaceBefore=6,
        spaceAfter=10,
        style=[
            ("FONTNAME", (0, 0), (-1, -1), SANS),
            ("BOX", (0, 0), (-1, -1), 1.2, ACCENT, 2, None, 0),
            ("LEFTPADDING", (0, 0), (-1, -1), 11),
            ("RIGHTPADDING", (0, 0), (-1, -1), 14),
            ("TOPPADDING", (0, 0), (-1, 0), 9),
            ("BOTTOMPADDING", (0, -1), (-1, -1), 11),
            ("BOTTOMPADDING", (0, 0), (-1, -2), 2),
            *background,
        ],
    )


def _hex(colour: Color) -> str:
    return f"#{colour.hexval()[2:]}"


@dataclass(frozen=True)
class SignatureRow:
    """One line to sign: what for ("Prepared"), and name and date where they are known."""

    role: str
    name: str = ""
    date: str = ""


def signature_block(rows: Sequence[SignatureRow]) -> KeptTogether:
    """Lines to sign on, one per row, with role, name, signature and date; what is unknown stays blank."""
    cells, heads = styles().cells["l"], styles().head_cells["l"]
    data = [[Paragraph(title, heads) for title in ("", "Name", "Signature", "Date")]]
    for row in rows:
        texts = (row.role, row.name, "", row.date)
        data.append([Paragraph(escaped(one_line(text)[:160]), cells) for text in texts])
    shares = (0.17, 0.31, 0.33, 0.19)
    table = Table(
        data,
        colWidths=[share * TEXT_WIDTH_PT for share in shares],
        hAlign="LEFT",
        spaceBefore=8,
        spaceAfter=8,
        style=[
            ("FONTNAME", (0, 0), (-1, -1), SANS),
            ("VALIGN", (0, 0), (-1, -1), "BOTTOM"),
            ("LEFTPADDING", (0, 0), (0, -1), 0),
            ("TOPPADDING", (0, 1), (-1, -1), 17),
            ("BOTTOMPADDING", (0, 0), (-1, -1), 3),
            ("LINEBELOW", (0, 0), (-1, 0), 0.8, ACCENT, 0),
            ("LINEBELOW", (0, 1), (-1, -1), 0.4, RULE, 0),
        ],
    )
    return KeptTogether([table])
