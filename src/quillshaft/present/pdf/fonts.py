"""The fonts of every page and chart: DejaVu Sans and DejaVu Sans Mono, embedded as subsets.

The font files are those that matplotlib carries in its own data, so a report looks the same on every
machine and charts measure their text with the very font that is drawn.
"""

from __future__ import annotations

from functools import cache
from pathlib import Path

import matplotlib
from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.ttfonts import TTFont

SANS = "DejaVuSans"
SANS_BOLD = "DejaVuSans-Bold"
SANS_OBLIQUE = "DejaVuSans-Oblique"
SANS_BOLD_OBLIQUE = "DejaVuSans-BoldOblique"
MONO = "DejaVuSansMono"

ASCENT_EM = 0.76
DESCENT_EM = 0.24


@cache
def register_fonts() -> None:
    """Make the five fonts known to reportlab, once per process, with <b> and <i> mapped within the family.

    Raises FileNotFoundError when matplotlib's font data lack one of the files.
    """
    folder = Path(matplotlib.get_data_path()) / "fonts" / "ttf"
    for name in (SANS, SANS_BOLD, SANS_OBLIQUE, SANS_BOLD_OBLIQUE, MONO):
        file = folder / f"{name}.ttf"
        if not file.is_file():
            raise FileNotFoundError(f"font file {file} is missing from matplotlib's data")
        pdfmetrics.registerFont(TTFont(name, str(file)))
    pdfmetrics.registerFontFamily(SANS, SANS, SANS_BOLD, SANS_OBLIQUE, SANS_BOLD_OBLIQUE)
    pdfmetrics.registerFontFamily(MONO, MONO, MONO, MONO, MONO)


@cache
def drawable_codes(font: str) -> frozenset[int]:
    """Code points that the registered font of this name has a glyph for."""
    register_fonts()
    return frozenset(pdfmetrics.getFont(font).face.charToGlyph)


def text_width_pt(text: str, font: str, size_pt: float) -> float:
    """Width in points of one line of text set in the registered font of this name."""
    register_fonts()
    return float(pdfmetrics.stringWidth(text, font, size_pt))
