"""Text of PDF pages."""

from __future__ import annotations

from pathlib import Path

from pypdfium2 import PdfDocument


def page_texts(pdf: bytes | Path) -> list[str]:
    """Text of every page, runs of white space as one blank."""
    document = PdfDocument(pdf)
    try:
        return [" ".join(page.get_textpage().get_text_range().split()) for page in document]
    finally:
        document.close()
