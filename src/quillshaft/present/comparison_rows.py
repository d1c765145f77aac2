"""Rows of the tables of a comparison, base and cases side by side, as text in the units the file declares."""

from __future__ import annotations

import math

from quillshaft.assess.results import LinkDuty
from quillshaft.present.comparison_words import change_of, margin_word, verdict_word
from quillshaft.present.units import SHOWN
from quillshaft.present.words import VERDICT_WORDS, hertz, number, plain
from quillshaft.study.compare import CaseComparison, Comparison, DutyChange, PairChange

Row = tuple[str, ...]
NOTHING = "–"


def change_rows(case: CaseComparison) -> list[Row]:
    """(place, before, after) of every input that differs, as the file writes the values."""
    return [(change.path, change.before or "not there", change.after or "left out") for change in case.changes]


def mode_heads(comparison: Comparison) -> list[str]:
    """Headings of `mode_rows`."""
    heads = ["Mode", "base, Hz", "over tolerances, Hz"]
    for case in comparison.cases:
        heads += [f"{case.name}: mode", "Hz", "over tolerances, Hz", "change, %", "alike"]
    return heads


def mode_rows(comparison: Comparison) -> list[Row]:
    """Each mode of the base with what it is in every case; modes that only a case has stand last."""
    rows: list[Row] = []
    for mode in comparison.base.modes:
        row = [f"{mode.mode}", hertz(mode.frequency_hz), _bounds(mode.bounds_hz)]
        for case in comparison.cases:
            item = case.now(mode.mode)
            row += (
                [NOTHING] * 5
                if item is None
                else [
                    f"{item.mode_case}",
                    hertz(item.to_hz),
                    _bounds(item.to_bounds_hz),
                    change_of(item.from_hz, item.to_hz),
                    f"{item.similarity:.3f}",
                ]
            )
        rows.append(tuple(row))
    for position, case in enumerate(comparison.cases):
        for new in (case.screening.mode(number_) for number_ in case.only_case):
            cells = [NOTHING] * (3 + 5 * len(comparison.cases))
            cells[3 + 5 * position : 6 + 5 * position] = [
                f"{new.mode}",
                hertz(new.frequency_hz),
                _bounds(new.bounds_hz),
            ]
            rows.append(tuple(cells))
    return rows


def _bounds(bounds_hz: tuple[float, float]) -> str:
    return f"{hertz(bounds_hz[0])} – {hertz(bounds_hz[1])}"


def pair_heads(comparison: Comparison) -> list[str]:
    """Headings of `pair_rows`."""
    heads = ["Mode", "source", "required, %", "base: margin, %", "over tolerances, %", "verdicts"]
    for case in comparison.cases:
        heads += [f"{case.name}: margin, %", "over tolerances, %", "verdicts"]
    return heads


def pair_rows(comparison: Comparison) -> list[Row]:
    """Pairs that are not clear in the base or in a case, or judged otherwise, in order of the base's modes.

    Pairs of a mode that only a case has stand last.
    """
    keys = {
        (pair.mode_base or 0, pair.source, 0 if pair.mode_base else pair.mode_case or 0)
        for case in comparison.cases
        for pair in case.pairs
        if _worth_showing(pair)
    }
    rows: list[Row] = []
    for mode, source, new in sorted(keys, key=lambda key: (key[0] == 0, key[0], key[2], key[1])):
        found = [_pair_of(case, mode, source, new) for case in comparison.cases]
        before = next((pair for pair in found if pair is not None and mode), None)
        judged = next((side for pair in found if pair is not None for side in (pair.before, pair.after) if side), None)
        row = [f"{mode}" if mode else f"new ({new})", source, _required(judged)]
        row += [NOTHING] * 3 if before is None else _side(before, after=False)
        for pair in found:
            row += [NOTHING] * 3 if pair is None else _side(pair, after=True)
        rows.append(tuple(row))
    return rows


def _required(judged: object) -> str:
    nominal, worst = getattr(judged, "required", None), getattr(judged, "worst_required", None)
    if nominal is None or worst is None:
        return NOTHING
    words = [plain(value).removesuffix(" %") for value in (nominal, worst)]
    return words[0] if words[0] == words[1] else f"{words[0]} / {words[1]}"


def _worth_showing(pair: PairChange) -> bool:
    verdicts = (*pair.verdicts(worst=False), *pair.verdicts(worst=True))
    return any(verdict not in (None, "clear") for verdict in verdicts)


def _pair_of(case: CaseComparison, mode: int, source: str, new: int) -> PairChange | None:
    for pair in case.pairs:
        same = pair.mode_base == mode if mode else pair.mode_base is None and pair.mode_case == new
        if same and pair.source == source:
            return pair
    return None


def _side(pair: PairChange, after: bool) -> list[str]:
    judged, known = (pair.after, pair.known_after) if after else (pair.before, pair.known_before)
    nominal, worst = (pair.verdicts(which)[int(after)] for which in (False, True))
    words = verdict_word(nominal)
    if nominal is not None and worst is not None and nominal != worst:
        words = f"{VERDICT_WORDS[nominal]} / {VERDICT_WORDS[worst]}"
    if judged is not None and judged.bar_too_narrow:
        words += ", barred range too narrow"
    if judged is not None and judged.dismissed is not None:
        words += " (dismissed)"
    margins = [margin_word(judged, worst, known).removesuffix(" %") for worst in (False, True)]
    return [*margins, words]


def duty_heads(comparison: Comparison) -> list[str]:
    """Headings of `duty_rows`."""
    unit = SHOWN[comparison.base.train.units].torque
    heads = ["Link", f"base: mean torque, {unit}", "wind-up, °", "of rated, %"]
    for case in comparison.cases:
        heads += [f"{case.name}: mean torque, {unit}", "wind-up, °", "of rated, %"]
    return heads


def duty_rows(comparison: Comparison, every: bool = False) -> list[Row]:
    """Mean torque, wind-up and share of the rated torque; couplings, and whatever changed (or `every` link)."""
    names = dict.fromkeys(
        duty.link
        for case in comparison.cases
        for duty in case.duties
        if every or duty.changed or duty.kind == "coupling"
    )
    factor = SHOWN[comparison.base.train.units].per_nm
    rows: list[Row] = []
    for name in names:
        found = [next((duty for duty in case.duties if duty.link == name), None) for case in comparison.cases]
        first = next(duty for duty in found if duty is not None)
        row = [name, *_duty(first.before, first.rated_before_nm, factor)]
        for duty in found:
            row += _duty(*_after(duty), factor)
        rows.append(tuple(row))
    return rows


def _after(duty: DutyChange | None) -> tuple[LinkDuty | None, float | None]:
    return (None, None) if duty is None else (duty.after, duty.rated_after_nm)


def _duty(duty: LinkDuty | None, rated_nm: float | None, factor: float) -> list[str]:
    if duty is None or duty.mean_torque_nm is None:
        return [NOTHING] * 3
    wind = NOTHING if duty.wind_up_rad is None else f"{math.degrees(duty.wind_up_rad):.3f}"
    share = NOTHING if not rated_nm else f"{abs(duty.mean_torque_nm) / rated_nm * 100.0:.1f}"
    return [number(duty.mean_torque_nm * factor), wind, share]
