"""Dismissals: which of the file apply to the train as it stands, and why the others do not."""

from __future__ import annotations

from quillshaft.assess.results import ModeResult, StaleDismissal
from quillshaft.sources.line import Source
from quillshaft.train.model import Dismissal, Train
from quillshaft.train.problems import TrainFileError, did_you_mean
from quillshaft.train.validate import Findings

MATCH = 0.03
"""A dismissal holds while the mode keeps its frequency within this share."""


def check_dismissals(train: Train, sources: tuple[Source, ...]) -> None:
    """A dismissal of a source that is not there: raises TrainFileError in the base train; in a case it is stale."""
    findings = Findings(train.file, train.cases)
    for dismissal in train.dismissals:
        if not train.cases and not any(source.answers_to(dismissal.source) for source in sources):
            hint = did_you_mean(dismissal.source, [source.name for source in sources])
            path = ("dismissals", dismissal.name, "source")
            findings.add(path, f"there is no source of this name{hint}", dismissal.source, "as `check` lists it")
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))


def sort_dismissals(
    train: Train, modes: tuple[ModeResult, ...], sources: tuple[Source, ...]
) -> tuple[tuple[Dismissal, ...], tuple[StaleDismissal, ...]]:
    """Those that apply, and those that do not with the reason."""
    applied, stale = [], []
    for item in train.dismissals:
        why = _why_stale(item, train, modes, sources)
        if why is None:
            applied.append(item)
        else:
            stale.append(StaleDismissal(item, why))
    return tuple(applied), tuple(stale)


def _why_stale(item: Dismissal, train: Train, modes: tuple[ModeResult, ...], sources: tuple[Source, ...]) -> str | None:
    if not any(source.answers_to(item.source) for source in sources):
        return f"there is no source {item.source} in this train as it stands"
    if not set(train.cases) <= set(item.cases):
        missing = ", ".join(case for case in train.cases if case not in item.cases)
        return f"it is not stated for the case {missing}"
    if item.mode > len(modes):
        return f"there is no mode {item.mode}"
    frequency = modes[item.mode - 1].frequency_hz
    if abs(frequency - item.frequency_hz) > MATCH * item.frequency_hz:
        return f"mode {item.mode} is now at {frequency:.2f} Hz, dismissed at {item.frequency_hz:.2f} Hz"
    return None
