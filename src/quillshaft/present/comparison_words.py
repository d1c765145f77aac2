"""Sentences of a comparison: what a change does, where numbers crossed, what must be approved anew."""

from __future__ import annotations

from quillshaft.assess.results import Interference, Screening, Verdict
from quillshaft.present.units import SHOWN
from quillshaft.present.words import VERDICT_WORDS, hertz, number, percent, verdict_sentence
from quillshaft.study.compare import CaseComparison, MatchedMode, PairChange, ReApproval


def verdict_word(verdict: Verdict | None) -> str:
    """A verdict in words, "not there" where the pair does not exist."""
    return "not there" if verdict is None else VERDICT_WORDS[verdict]


def change_of(before: float, after: float) -> str:
    """Relative change in per cent with sign; "0" where nothing changed to two decimals."""
    share = after / before - 1.0 if before else 0.0
    return "0" if abs(share) < 5e-5 else percent(share, True).removesuffix(" %")


def case_title(case: CaseComparison) -> str:
    """The case with its reason."""
    return f"{case.name}: {case.because}" if case.because else case.name


def outcome_lines(name: str, screening: Screening) -> list[str]:
    """The verdicts of one side, nominal and over the tolerances."""
    return [
        f"{name}, nominal: {verdict_sentence(screening, worst=False)}",
        f"{name}, over the tolerances: {verdict_sentence(screening, worst=True)}",
    ]


def mode_notes(case: CaseComparison) -> list[str]:
    """What has to be said about the matching: numbers that crossed, doubtful matches, modes without counterpart."""
    lines = []
    for item in case.matched:
        if item.renumbered:
            lines.append(_renumbered(item))
        if item.doubtful:
            lines.append(
                f"Mode {item.mode_base} of the base and mode {item.mode_case} of the case are alike by only "
                f"{item.similarity:.2f}: the shape has changed, and the match says little."
            )
        elif item.steps > 1:
            lines.append(
                f"Mode {item.mode_base} of the base was followed along the change in {item.steps} steps to mode "
                f"{item.mode_case} of the case (similarity of the ends {item.similarity:.2f})."
            )
    lines += [f"Mode {mode} of the base has no counterpart in the case." for mode in case.only_base]
    lines += [f"Mode {mode} of the case has no counterpart in the base." for mode in case.only_case]
    return lines


def _renumbered(item: MatchedMode) -> str:
    return (
        f"Mode {item.mode_base} of the base is mode {item.mode_case} of the case "
        f"({hertz(item.from_hz)} to {hertz(item.to_hz)} Hz): the numbering crosses."
    )


def mode_name(pair: PairChange) -> str:
    """ "Mode 2", "Mode 3 (now mode 2)", or "Mode 4 of the case"."""
    if pair.mode_base is None:
        return f"Mode {pair.mode_case} of the case"
    if pair.mode_case in (None, pair.mode_base):
        return f"Mode {pair.mode_base}"
    return f"Mode {pair.mode_base} (now mode {pair.mode_case})"


def margin_word(pair: Interference | None, worst: bool, known: bool = True) -> str:
    """A margin in per cent; "above all" for a mode above every source, "–" where there is no such pair."""
    if pair is None:
        return "above all" if known else "–"
    return percent(pair.worst_margin if worst else pair.margin, True)


def shift_sentence(pair: PairChange) -> str:
    """What a change does to one pair: verdicts and margins before and after."""
    parts = []
    for worst, where in ((False, "nominally"), (True, "over the tolerances")):
        before, after = (verdict_word(verdict) for verdict in pair.verdicts(worst))
        verb = f"{after} as before" if before == after else f"{before} before, {after} now"
        old = margin_word(pair.before, worst, pair.known_before)
        new = margin_word(pair.after, worst, pair.known_after)
        parts.append(f"{where} {verb} (margin {old}, then {new})")
    if pair.after is not None and pair.after.bar_too_narrow:
        parts.append("the barred range is too narrow for it now")
    return f"{mode_name(pair)} and {pair.source}: {'; '.join(parts)}."


def reapproval_sentence(item: ReApproval, case: CaseComparison) -> str:
    """One thing that has to be approved anew."""
    if item.kind == "data":
        keys = [change for change in case.changes if change.subject == item.subject]
        what = ", ".join(dict.fromkeys(change.key for change in keys if change.key))
        if not what and keys[0].after is None:
            return f"{item.subject}: left out; whoever answers for the train has to agree to it without this part."
        if not what:
            return f"{item.subject}: added; approve its data against the supplier's document."
        return f"{item.subject}: its data changed ({what}); approve them against the supplier's document."
    if item.kind == "running":
        return f"{item.subject}: the train is run, loaded or judged otherwise; whoever set it before has to agree."
    if item.kind == "verdict" and item.pair is not None:
        return shift_sentence(item.pair)
    if item.kind == "dismissal" and item.stale is not None:
        dismissal = item.stale.dismissal
        return (
            f"Dismissal {item.subject} ({dismissal.source}, mode {dismissal.mode}, by {dismissal.by}) no longer "
            f"applies: {item.stale.why}. Its owner has to decide anew."
        )
    units, duty = SHOWN[case.screening.train.units], item.duty
    torque = 0.0 if duty is None or duty.after is None else abs(duty.after.mean_torque_nm or 0.0)
    rated = 0.0 if duty is None else duty.rated_after_nm or 0.0
    values = [f"{number(value * units.per_nm)} {units.torque}" for value in (torque, rated)]
    return f"{item.subject}: its mean torque of {values[0]} is above its rated torque of {values[1]}."


def reapproval_sentences(case: CaseComparison) -> list[str]:
    """Everything that has to be approved anew, the calculation itself first."""
    first = "This calculation: class rules and purchasers ask for it anew when data of a torsional system change."
    return [first, *(reapproval_sentence(item, case) for item in case.reapprovals)]


def comparison_title(case: CaseComparison) -> str:
    """What the change does, in one sentence: the title of its chart."""
    worse, better = [], []
    for pair in case.verdict_changes(worst=True):
        before, after = pair.verdicts(worst=True)
        if (before or "clear") == "clear":
            worse.append(pair)
        elif (after or "clear") == "clear":
            better.append(pair)
    moved = max(case.matched, key=lambda item: abs(item.to_hz / item.from_hz - 1.0), default=None)
    text = f"{case.name}: nothing moves"
    if moved is not None and abs(moved.to_hz / moved.from_hz - 1.0) >= 5e-4:
        way = "rises" if moved.to_hz > moved.from_hz else "falls"
        share = percent(abs(moved.to_hz / moved.from_hz - 1.0))
        text = f"{case.name}: mode {moved.mode_base} {way} most, by {share}"
    tails = [_tail(pairs, words) for pairs, words in ((worse, "no longer clear"), (better, "clear now")) if pairs]
    return f"{text}; {'; '.join(tails) if tails else 'no verdict over the tolerances turns'}"


def _tail(pairs: list[PairChange], words: str) -> str:
    """ "mode 1 is no longer clear of motor-core 1x over the tolerances, and so 2 more pairs"."""
    text = f"{mode_name(pairs[0]).lower()} is {words} of {pairs[0].source} over the tolerances"
    if len(pairs) == 1:
        return text
    return f"{text}, and {len(pairs) - 1} more {'pair' if len(pairs) == 2 else 'pairs'} likewise"
