"""Which modes a reader is shown: all of them, save those that only the cutting of a distributed shaft makes."""

from __future__ import annotations

from quillshaft.assess.results import ModeResult, Screening


def listed_modes(screening: Screening) -> tuple[ModeResult, ...]:
    """The modes that tables list: with distributed shafts the judged ones alone: higher ones are not converged."""
    if all(link.cut is None for link in screening.graph.links):
        return screening.modes
    return screening.modes[: max(screening.judged_modes, default=1)]


def unlisted_sentence(screening: Screening) -> str:
    """Says how many modes are left out of the tables, with a space before it; empty where none is."""
    left = len(screening.modes) - len(listed_modes(screening))
    if not left:
        return ""
    what = "1 higher mode is" if left == 1 else f"{left} higher modes are"
    return f" {what} left out: they depend on how the distributed shafts are cut."
