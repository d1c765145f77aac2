"""Questions to suppliers as rows, lines and a table: the same for terminal and report."""

from __future__ import annotations

from itertools import groupby

from quillshaft.assess.questions import SupplierQuestion, supplier_questions
from quillshaft.assess.results import Screening

QUESTION_HEADS = ("No.", "Element", "Question")
"""Headings of each supplier's rows."""


def question_rows(screening: Screening) -> list[tuple[str, str, str, str]]:
    """(supplier, number, element, question) of every question, grouped by supplier."""
    return [(item.supplier, f"{item.number}", item.element, item.text) for item in supplier_questions(screening)]


def questions_by_supplier(screening: Screening) -> list[tuple[str, list[SupplierQuestion]]]:
    """Each supplier with its questions; what has no named source stands together under "source not named"."""
    groups: list[tuple[str, list[SupplierQuestion]]] = []
    for supplier, items in groupby(supplier_questions(screening), key=lambda item: item.supplier):
        groups.append((supplier, list(items)))
    return groups


def question_lines(screening: Screening) -> list[str]:
    """The list as text: a line with the supplier, then its numbered questions."""
    lines: list[str] = []
    for supplier, items in questions_by_supplier(screening):
        lines.append(f"To {supplier}" if not supplier.startswith("not named") else f"Supplier {supplier}")
        lines += [f"  {item.number}. {item.text}" for item in items]
    return lines or ["There is nothing to ask: every value is stated and none of them decides a verdict alone."]
