"""Text made safe to draw: what a font cannot show is replaced, what markup would read is escaped.

Right-to-left scripts are drawn in reading order of the file, without reordering or joining of letters.
"""

from __future__ import annotations

import unicodedata
from bisect import bisect_right
from functools import lru_cache
from xml.sax.saxutils import escape

from quillshaft.present.pdf.fonts import MONO, SANS, drawable_codes, text_width_pt

PLACEHOLDER = "\N{WHITE SQUARE}"
TAB_COLUMNS = 4


def printable(text: str, font: str = SANS) -> str:
    """Text with line ends as newlines, tabs as spaces, no invisible characters, and a □ for each character
    that the font has no glyph for.
    """
    text = text.replace("\r\n", "\n").replace("\r", "\n")
    if text.isascii() and text.replace("\n", "").isprintable():
        return text
    codes = drawable_codes(font)
    return "".join(_shown(char, codes) for char in unicodedata.normalize("NFC", text))


def _shown(char: str, codes: frozenset[int]) -> str:
    if char == "\n":
        return char
    if char in "\t\u2028\u2029":
        return " "
    if unicodedata.category(char) == "Cf" or "\ufe00" <= char <= "\ufe0f":
        return ""
    if unicodedata.category(char) in {"Cc", "Cs"}:
        return PLACEHOLDER
    return char if ord(char) in codes else PLACEHOLDER


def escaped(text: str, font: str = SANS) -> str:
    """Plain text as paragraph markup: `&`, `<` and `>` escaped, newlines as line breaks."""
    return escape(printable(text, font)).replace("\n", "<br/>")


def one_line(text: str, font: str = SANS) -> str:
    """Text on a single line, runs of white space reduced to one space."""
    return " ".join(printable(text, font).split())


def cut(text: str, length: int) -> str:
    """Text of at most `length` characters, ended with an ellipsis where something was left out."""
    return text if len(text) <= length else text[: length - 1] + "…"


@lru_cache(maxsize=64)
def fitted(text: str, font: str, size_pt: float, width_pt: float) -> str:
    """One line of text, cut with an ellipsis where it is wider than `width_pt` points."""
    line = one_line(text, font)
    if text_width_pt(line, font, size_pt) <= width_pt:
        return line
    fits = bisect_right(
        range(len(line)), width_pt, key=lambda length: text_width_pt(line[:length] + "…", font, size_pt)
    )
    return line[: max(fits - 1, 0)].rstrip() + "…"


def source_line(line: str) -> str:
    """One line of a file as the monospaced font can show it: tabs expanded to four columns, and any
    character without a visible glyph written as its code, such as `<U+202E>`.
    """
    line = line.expandtabs(TAB_COLUMNS)
    if line.isascii() and line.isprintable():
        return line
    codes = drawable_codes(MONO)
    return "".join(char if _stands_alone(char, codes) else f"<U+{ord(char):04X}>" for char in line)


def _stands_alone(char: str, codes: frozenset[int]) -> bool:
    hidden = unicodedata.category(char) in {"Cc", "Cf", "Cs", "Zl", "Zp", "Mn"}
    return ord(char) in codes and not hidden
