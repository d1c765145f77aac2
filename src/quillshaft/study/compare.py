"""A train before and after: what differs in the input, and what that does to modes, margins and couplings."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

from quillshaft.assess.results import Interference, LinkDuty, Screening, StaleDismissal, Verdict
from quillshaft.sources.line import Source
from quillshaft.study.differences import PHYSICAL, InputChange, input_changes
from quillshaft.study.matching import Match, match_modes
from quillshaft.train.problems import TrainFileError

LOW_SIMILARITY = 0.6
"""Below this similarity a match is said to be doubtful."""
SAME_SHARE = 1e-9


@dataclass(frozen=True)
class MatchedMode:
    """A mode before and after; frequencies and their bounds over the tolerances in Hz.

    similarity   of the two shapes (1: the same shape)
    steps        1 where the shapes were compared at once, more where the mode was followed along the change
    """

    mode_base: int
    mode_case: int
    similarity: float
    steps: int
    from_hz: float
    to_hz: float
    from_bounds_hz: tuple[float, float]
    to_bounds_hz: tuple[float, float]

    @property
    def renumbered(self) -> bool:
        """True where the mode has another number after the change."""
        return self.mode_base != self.mode_case

    @property
    def doubtful(self) -> bool:
        """True where the shape has changed so much that the match says little."""
        return self.similarity < LOW_SIMILARITY


@dataclass(frozen=True)
class PairChange:
    """One pair of source and matched mode before and after.

    mode_base, mode_case   None where no mode of that train matches
    before, after          the judged pair; None where that train does not judge it
    known_before, known_after   True where that train has this source and this mode: a pair that is known and not
                           judged lies above every source, and is clear
    """

    source: str
    mode_base: int | None
    mode_case: int | None
    before: Interference | None
    after: Interference | None
    known_before: bool
    known_after: bool

    def verdicts(self, worst: bool) -> tuple[Verdict | None, Verdict | None]:
        """Verdicts before and after, nominal or over the tolerances; None where the pair does not exist."""
        return (
            _verdict(self.before, self.known_before, worst),
            _verdict(self.after, self.known_after, worst),
        )

    def changed(self, worst: bool) -> bool:
        """True where the verdict changed, or a barred range became too narrow or wide enough.

        A pair that appears or goes counts only where it is not clear.
        """
        before, after = self.verdicts(worst)
        narrow = [side is not None and side.bar_too_narrow for side in (self.before, self.after)]
        return (before or "clear") != (after or "clear") or narrow[0] != narrow[1]


def _verdict(pair: Interference | None, known: bool, worst: bool) -> Verdict | None:
    if pair is None:
        return "clear" if known else None
    return pair.worst_verdict if worst else pair.verdict


@dataclass(frozen=True)
class DutyChange:
    """Mean torque and wind-up of one link before and after, and what a coupling's rated torque [N·m] is.

    before, after   None where the train has no such link
    """

    link: str
    kind: str
    before: LinkDuty | None
    after: LinkDuty | None
    rated_before_nm: float | None
    rated_after_nm: float | None

    @property
    def changed(self) -> bool:
        """True where torque, wind-up or rated torque differ by more than rounding."""
        old, new = ((duty.mean_torque_nm, duty.wind_up_rad) if duty else (None, None) for duty in self.sides)
        pairs = [*zip(old, new, strict=True), (self.rated_before_nm, self.rated_after_nm)]
        return any(_differ(a, b) for a, b in pairs) or (self.before is None) != (self.after is None)

    @property
    def sides(self) -> tuple[LinkDuty | None, LinkDuty | None]:
        """Before and after."""
        return self.before, self.after


def _differ(a: float | None, b: float | None) -> bool:
    if a is None or b is None:
        return a is not b
    return abs(a - b) > SAME_SHARE * max(abs(a), abs(b))


@dataclass(frozen=True)
class ReApproval:
    """Something that has to be approved anew after the change.

    kind      data: parts whose data changed; running: how the train is run, loaded or judged; verdict: a pair
              judged otherwise; dismissal: no longer applied; duty: a coupling above its rated torque
    """

    kind: Literal["data", "running", "verdict", "dismissal", "duty"]
    subject: str
    pair: PairChange | None = None
    stale: StaleDismissal | None = None
    duty: DutyChange | None = None


@dataclass(frozen=True)
class CaseComparison:
    """One case against the base.

    matched        matched modes in order of the base
    only_base, only_case   numbers of the modes that have no counterpart
    """

    name: str
    because: str
    screening: Screening
    changes: tuple[InputChange, ...]
    matched: tuple[MatchedMode, ...]
    only_base: tuple[int, ...]
    only_case: tuple[int, ...]
    pairs: tuple[PairChange, ...]
    duties: tuple[DutyChange, ...]
    reapprovals: tuple[ReApproval, ...]

    def verdict_changes(self, worst: bool) -> tuple[PairChange, ...]:
        """Pairs whose verdict changed, nominal or over the tolerances."""
        return tuple(pair for pair in self.pairs if pair.changed(worst))

    def now(self, mode_base: int) -> MatchedMode | None:
        """What a mode of the base has become; None without a counterpart."""
        return next((item for item in self.matched if item.mode_base == mode_base), None)


@dataclass(frozen=True)
class Comparison:
    """The base and every case against it."""

    base: Screening
    cases: tuple[CaseComparison, ...]


def compare(base: Screening, cases: dict[str, Screening]) -> Comparison:
    """Set every case against the base: inputs that differ, modes matched by shape, margins, duties, verdicts.

    Raises ValueError without any case, TrainFileError when a file's cases cannot be laid.
    """
    if not cases:
        raise ValueError("a comparison needs a case to set against the base")
    return Comparison(base, tuple(_against(base, name, case) for name, case in cases.items()))


def compare_cases(base: Screening, names: tuple[str, ...]) -> Comparison:
    """Compare the base with the named cases of its own file, each laid alone over the base.

    Raises TrainFileError for a case that is unknown, changes nothing or cannot be screened.
    """
    from quillshaft.assess.screening import screen
    from quillshaft.train.read import train_of

    screened: dict[str, Screening] = {}
    problems: list[TrainFileError] = []
    for name in names:
        try:
            screened[name] = screen(train_of(base.train.file, (*base.train.cases, name)), base.temperature)
        except TrainFileError as error:
            problems.append(error)
    if problems:
        raise TrainFileError(tuple(problem for error in problems for problem in error.problems))
    return compare(base, screened)


def _against(base: Screening, name: str, case: Screening) -> CaseComparison:
    matches = match_modes(base, case)
    changes = input_changes(base.train, case.train)
    pairs = tuple(_pair_changes(base, case, matches))
    duties = _duty_changes(base, case)
    return CaseComparison(
        name=name,
        because=case.train.cases_because[-1] if case.train.cases_because else "",
        screening=case,
        changes=changes,
        matched=tuple(_matched(base, case, match) for match in matches),
        only_base=_unmatched(len(base.modes), {match.base for match in matches}),
        only_case=_unmatched(len(case.modes), {match.case for match in matches}),
        pairs=pairs,
        duties=duties,
        reapprovals=tuple(_reapprovals(base, case, changes, pairs, duties)),
    )


def _unmatched(count: int, taken: set[int]) -> tuple[int, ...]:
    return tuple(number + 1 for number in range(count) if number not in taken)


def _matched(base: Screening, case: Screening, match: Match) -> MatchedMode:
    before, after = base.modes[match.base], case.modes[match.case]
    return MatchedMode(
        before.mode,
        after.mode,
        match.similarity,
        match.steps,
        before.frequency_hz,
        after.frequency_hz,
        before.bounds_hz,
        after.bounds_hz,
    )


def _pair_changes(base: Screening, case: Screening, matches: tuple[Match, ...]) -> Iterator[PairChange]:
    """Every pair that either train judges, in order of the base's modes, then of the case's new ones."""
    numbers: list[tuple[int | None, int | None]] = [(match.base + 1, match.case + 1) for match in matches]
    numbers += [(number, None) for number in _unmatched(len(base.modes), {match.base for match in matches})]
    numbers += [(None, number) for number in _unmatched(len(case.modes), {match.case for match in matches})]
    before, after = ({(pair.source, pair.mode): pair for pair in screening.interferences} for screening in (base, case))
    sources = _source_pairs(base, case)
    for old_mode, new_mode in numbers:
        for old, new in sources:
            was = before.get((old, old_mode)) if old is not None and old_mode is not None else None
            now = after.get((new, new_mode)) if new is not None and new_mode is not None else None
            if was is None and now is None:
                continue
            known = old is not None and old_mode is not None, new is not None and new_mode is not None
            yield PairChange(old or new or "", old_mode, new_mode, was, now, *known)


def _source_pairs(base: Screening, case: Screening) -> list[tuple[str | None, str | None]]:
    """Names of the judged sources of both trains, paired by any of their names."""
    left = [source for source in case.sources if source.when == "continuous"]
    out: list[tuple[str | None, str | None]] = []
    for source in base.sources:
        if source.when != "continuous":
            continue
        same = next((other for other in left if _same_source(source, other)), None)
        out.append((source.name, None if same is None else same.name))
        left = [other for other in left if other is not same]
    return out + [(None, source.name) for source in left]


def _same_source(one: Source, other: Source) -> bool:
    return other.answers_to(one.name) or one.answers_to(other.name)


def _duty_changes(base: Screening, case: Screening) -> tuple[DutyChange, ...]:
    before, after = ({duty.link: duty for duty in screening.duties} for screening in (base, case))
    rated = [{item.name: item.rated_torque_nm for item in screening.train.couplings} for screening in (base, case)]
    kinds = {link.name: link.kind for screening in (case, base) for link in screening.graph.links}
    return tuple(
        DutyChange(name, kinds[name], before.get(name), after.get(name), rated[0].get(name), rated[1].get(name))
        for name in dict.fromkeys((*before, *after))
    )


def _reapprovals(
    base: Screening,
    case: Screening,
    changes: tuple[InputChange, ...],
    pairs: tuple[PairChange, ...],
    duties: tuple[DutyChange, ...],
) -> Iterator[ReApproval]:
    for subject in dict.fromkeys(change.subject for change in changes if change.table in PHYSICAL):
        yield ReApproval("data", subject)
    others = ("operation", "power", "criteria", "excitations", "excitations-off", "assumptions")
    for subject in dict.fromkeys(change.subject for change in changes if change.table in others):
        yield ReApproval("running", subject)
    for pair in pairs:
        if pair.changed(worst=False) or pair.changed(worst=True):
            yield ReApproval("verdict", pair.source, pair=pair)
    known = {item.dismissal.name for item in base.stale_dismissals}
    for item in case.stale_dismissals:
        if item.dismissal.name not in known:
            yield ReApproval("dismissal", item.dismissal.name, stale=item)
    for duty in duties:
        if _overloaded(duty.after, duty.rated_after_nm) and duty.changed:
            yield ReApproval("duty", duty.link, duty=duty)


def _overloaded(duty: LinkDuty | None, rated_nm: float | None) -> bool:
    if duty is None or duty.mean_torque_nm is None or rated_nm is None:
        return False
    return abs(duty.mean_torque_nm) > rated_nm
