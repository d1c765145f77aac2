"""What is said of a damper: sentences, rows and JSON."""

from __future__ import annotations

import math
from typing import Any

from quillshaft.assess.results import Screening
from quillshaft.present.report.damper_data import damper_text
from quillshaft.present.results_json import to_json
from quillshaft.present.units import SHOWN
from quillshaft.present.words import VERDICT_WORDS, hertz, number
from quillshaft.study.damper_optimum import Choice, Suggestion
from quillshaft.study.dampers import DamperCase, DamperStudy
from quillshaft.version import __version__

MOST_MODES = 6
CHOICE_HEADS = "Damper|tuned to, Hz>|damping, {torque}·s/rad>|ζ of the ring>|magnification>"


def damper_lines(study: DamperStudy) -> list[str]:
    """The damper as stated, and what it works on."""
    units = SHOWN[study.train.units]
    lines = [f"{study.damper.name}: {damper_text(study.damper, units)}."]
    if study.why_not is not None:
        lines.append(f"Nothing is suggested: {study.why_not}.")
    if study.suggestion is not None:
        lines += _suggestion_lines(study.suggestion, units.inertia, units.per_kgm2)
    if study.damper.kind == "pendulum":
        lines += _tuning_lines(study)
    return lines


def _suggestion_lines(found: Suggestion, unit: str, per_kgm2: float) -> list[str]:
    mode = (
        f"Without it, mode {found.mode} is at {hertz(found.frequency_hz)} Hz and has "
        f"{number(found.inertia_kgm2 * per_kgm2)} {unit} at {found.damper.at}: the ring is {found.mu:.3g} of it."
    )
    rule = "Den Hartog's rule for an untuned viscous damper"
    if found.damper.kind == "tuned":
        rule = "Brock's rule for a tuned damper (Den Hartog)"
    text = (
        f"{rule}, recalled, promises a magnification of {number(found.rule_peak)} on a mode without other damping. "
        "Direct minimisation takes the whole train with its other damping. Magnification: largest angle of the mode "
        "over that under the same torque at rest."
    )
    lines = [mode, text]
    if found.mu < 0.02:
        lines.append("Its station hardly moves in this mode: expect little of it.")
    return lines


def _tuning_lines(study: DamperStudy) -> list[str]:
    tuning, damper = study.tuning, study.damper
    if tuning is None:
        return ["No source has an order to tune the pendulums to."]
    units = SHOWN[study.train.units]
    order = f"order {tuning.order:.4g} of {tuning.source}"
    length = f"{number(tuning.exact_length_m * units.per_m, 5)} {units.length}"
    if tuning.felt_kgm2 is None:
        return [f"Tuned to {order}: small swings cancel it at every speed; large ones fall in frequency and miss it."]
    felt = f"{number(tuning.felt_kgm2 * units.per_kgm2)} {units.inertia}"
    sign = "as if inertia were added" if tuning.felt_kgm2 > 0 else "as a spring would"
    return [
        f"The nearest source is {order}; tuned to {damper.order or 0.0:.4g} the masses act on it {sign}: {felt}.",
        f"A length of {length} would tune them to it (n₀² = R/r): undamped, that is the least response at any speed, "
        "so there is nothing to minimise.",
    ]


def choice_rows(found: Suggestion, per_nm: float) -> list[tuple[str, ...]]:
    """(what, tuned to, damping, ζ, magnification) per choice."""
    named: list[tuple[str, Choice | None]] = [
        ("by rule", found.rule),
        ("by direct minimisation", found.direct),
        ("as stated", found.stated),
        ("as stated, at half damping", found.half),
    ]
    rows = [("none", "", "", "", number(found.bare_peak))]
    return rows + [(name, *_cells(choice, per_nm)) for name, choice in named if choice is not None]


def _cells(choice: Choice, per_nm: float) -> tuple[str, ...]:
    return (
        "" if choice.tuned_hz is None else hertz(choice.tuned_hz),
        "" if choice.viscous_nms_rad is None else number(choice.viscous_nms_rad * per_nm),
        "–" if choice.zeta is None else f"{choice.zeta:.4f}",
        "–" if choice.peak is None else number(choice.peak),
    )


def case_heads(study: DamperStudy) -> str:
    """Headings of `case_rows`."""
    return "|".join(("Case", *(f"mode {mode}, Hz>" for mode in range(1, _columns(study) + 1)), "nominal", "worst case"))


def case_rows(study: DamperStudy) -> list[tuple[str, ...]]:
    """(case, frequencies of the lowest modes, nominal and worst verdict) per state of the damper."""
    return [_case_row(case, _columns(study)) for case in study.cases]


def _columns(study: DamperStudy) -> int:
    found = [len(case.screening.modes) for case in study.cases if case.screening is not None]
    return min(MOST_MODES, max(found, default=0))


def _case_row(case: DamperCase, columns: int) -> tuple[str, ...]:
    if case.screening is None:
        return (case.name, *("" for _ in range(columns)), "cannot be screened", "")
    modes = [hertz(mode.frequency_hz) for mode in case.screening.modes[:columns]]
    return (case.name, *modes, *("–" for _ in range(columns - len(modes))), *_verdicts(case.screening))


def _verdicts(screening: Screening) -> tuple[str, str]:
    if not screening.interferences:
        return "not judged", "not judged"
    return VERDICT_WORDS[screening.verdict], VERDICT_WORDS[screening.worst_verdict]


def dampers_json(studies: tuple[DamperStudy, ...]) -> str:
    """The studies of a train's dampers as JSON text."""
    train = studies[0].train
    return to_json(
        {
            "schema": 1,
            "version": __version__,
            "input_sha256": train.file.sha256,
            "train": {"title": train.title, "tag": train.tag, "cases": list(train.cases)},
            "dampers": [_damper_data(study) for study in studies],
        }
    )


def _damper_data(study: DamperStudy) -> dict[str, Any]:
    found, tuning, damper = study.suggestion, study.tuning, study.damper
    data: dict[str, Any] = {
        "damper": damper.name,
        "kind": damper.kind,
        "at": damper.at,
        "inertia_kgm2": damper.inertia_kgm2,
        "order": damper.order,
        "why_not": study.why_not,
        "suggestion": None,
        "tuning": None,
        "cases": [_case_data(case) for case in study.cases],
    }
    if found is not None:
        names = {"rule": found.rule, "direct": found.direct, "stated": found.stated, "half_damping": found.half}
        data["suggestion"] = {
            "mode": found.mode,
            "frequency_hz": found.frequency_hz,
            "inertia_kgm2": found.inertia_kgm2,
            "mu": found.mu,
            "magnification_without": found.bare_peak,
            "magnification_of_rule": found.rule_peak,
            **{name: None if choice is None else _choice_data(choice) for name, choice in names.items()},
        }
    if tuning is not None:
        data["tuning"] = {
            "source": tuning.source,
            "order": tuning.order,
            "exact_length_m": tuning.exact_length_m,
            "felt_kgm2": tuning.felt_kgm2,
        }
    return data


def _choice_data(choice: Choice) -> dict[str, float | None]:
    peak = choice.peak if choice.peak is not None and math.isfinite(choice.peak) else None
    return {
        "stiffness_nm_rad": choice.stiffness_nm_rad,
        "tuned_frequency_hz": choice.tuned_hz,
        "viscous_nms_rad": choice.viscous_nms_rad,
        "zeta": choice.zeta,
        "magnification": peak,
    }


def _case_data(case: DamperCase) -> dict[str, Any]:
    screening = case.screening
    if screening is None:
        return {"case": case.name, "problem": case.problem}
    return {
        "case": case.name,
        "frequency_hz": [mode.frequency_hz for mode in screening.modes],
        "verdict": screening.verdict,
        "worst_verdict": screening.worst_verdict,
    }
