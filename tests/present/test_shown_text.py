"""Sentences of the assessment in the units of the file."""

from __future__ import annotations

import pytest

from quillshaft.present.shown_text import shown_text


# 1 in = 25.4 mm, 1 lbf = 4.4482216152605 N (exact definitions)
@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("torque amplitude stated: 13558 N·m", "torque amplitude stated: 120000 lbf·in"),
        ("4 % of 1017 N·m mean", "4 % of 9001 lbf·in mean"),
        ("piece 1, 150/30 mm: plain", "piece 1, 5.906/1.181 in: plain"),
        ("rectangle 70 by 70 mm", "rectangle 2.756 by 2.756 in"),
        ("fillet r 6 mm on 150 mm", "fillet r 0.2362 in on 5.906 in"),
        (
            "yield strength 0.6 of the tensile strength, 414 N/mm²",
            "yield strength 0.6 of the tensile strength, 60050 psi",
        ),
        ("12 N·m·s/rad, 15 N/(mm·µm), 3 N·m/rad, 25 °C", "12 N·m·s/rad, 15 N/(mm·µm), 3 N·m/rad, 25 °C"),
    ],
)
def test_values_in_a_sentence_are_in_us_units_where_the_file_is(text, said):
    assert shown_text(text, "US") == said
    assert shown_text(text, "SI") == text
