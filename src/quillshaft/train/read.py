"""From the train file to the Train: the one way in."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from quillshaft.train import coupling_resolve, damper_resolve, duty_resolve, gear_resolve, resolve, shaft_resolve
from quillshaft.train.assumptions import Assumptions
from quillshaft.train.crosscheck import crosscheck, read_off, read_power
from quillshaft.train.damper_cases import with_damper_cases
from quillshaft.train.document import Document, read_document
from quillshaft.train.model import Criteria, Operation, Power, Revision, SignOff, Train
from quillshaft.train.overlay import case_names, lay_cases
from quillshaft.train.problems import TrainFileError
from quillshaft.train.reciprocating_resolve import Read, read_files
from quillshaft.train.repeat import expand_repeats
from quillshaft.train.validate import Findings, Rows, validate

DEFAULT_BAND = 0.02
DEFAULT_SEPARATION = 0.10


def load(path: str | Path, cases: tuple[str, ...] | list[str] = ()) -> Train:
    """Read a train file, with the named cases laid over it in turn.

    Raises TrainFileError, which holds every problem found, when the file cannot be used.
    """
    return train_of(read_document(Path(path)), tuple(cases))


def train_of(document: Document, cases: tuple[str, ...] = ()) -> Train:
    """The Train of a document that is already read. Raises TrainFileError with every problem found."""
    document = with_damper_cases(document, cases)
    data = lay_cases(document, cases)
    findings = Findings(document, cases)
    if "cases" in data and not isinstance(data["cases"], dict):
        findings.add(("cases",), "is not a table of cases", data["cases"], "[cases.NAME] with the changes")
    rows = expand_repeats(findings, validate(data, findings))
    crosscheck(findings, rows, case_names(document.data))
    train = rows.plain.get("train")
    system = train.units if train is not None else "SI"
    power = read_power(data.get("power"), rows, system, findings)
    off = read_off(data.get("excitations-off"), findings)
    files = read_files(rows, findings)
    if findings.problems:
        raise TrainFileError(tuple(findings.problems))
    return _resolve(document, cases, data, rows, power, off, files)


def _resolve(
    document: Document,
    cases: tuple[str, ...],
    data: dict[str, Any],
    rows: Rows,
    power: Any,
    off: dict[str, str],
    files: Read,
) -> Train:
    settings = rows.plain["assumptions"]
    said = Assumptions(settings.tolerances != "none")
    operation = _operation(rows, said)
    criteria = _criteria(rows, said)
    parts: dict[str, Any] = {
        "stations": resolve.stations(rows, said),
        "shafts": shaft_resolve.shafts(rows, said),
        "couplings": resolve.couplings(rows, said),
        "gears": gear_resolve.gears(rows, said),
        "ties": resolve.ties(rows, said),
        "dampers": damper_resolve.dampers(rows, said),
        "fluid_couplings": coupling_resolve.fluid_couplings(rows, said),
        "machines": resolve.machines(rows, said, files),
        "excitations": resolve.excitations(rows, said),
    }
    parts["amplitudes"] = duty_resolve.amplitudes(rows, said)
    parts["belts"] = gear_resolve.belts(rows, said)
    parts["joints"] = gear_resolve.joints(rows, said)
    parts["stations"] += gear_resolve.stations_brought(parts["gears"])
    parts["ties"] += gear_resolve.ties_brought(rows, parts["gears"], said)
    operation = gear_resolve.with_held_members(operation, parts["gears"])
    for element, key, note in rows.notes:
        said.add(element, key, note, "how the unit was read")
    zeta = settings.zeta
    if zeta is None:
        zeta = [0.01, 0.02]
        said.add(
            "assumptions",
            "zeta",
            "1 % to 2 %",
            "damping of every link that states none; the low value is used",
        )
    because = tuple(str(data["cases"][name].get("because", "")) for name in cases)
    head = rows.plain["train"]
    return Train(
        title=head.title,
        tag=head.tag,
        units=head.units,
        file=document,
        cases=cases,
        cases_because=because,
        operation=operation,
        power=None if power is None else Power(*power),
        excitations_off=off,
        dismissals=resolve.dismissals(rows),
        criteria=criteria,
        zeta=(zeta[0], zeta[1]),
        sign_off=_sign_off(rows),
        assumed=tuple(said.items),
        ordinary_amplitudes=settings.amplitudes == "ordinary",
        strength=duty_resolve.strength_criteria(rows.plain["criteria"].strength),
        duty=duty_resolve.duty_criteria(rows.plain["criteria"].duty),
        **parts,
    )


def _band(given: float | None, key: str, words: str, needed: bool, said: Assumptions) -> float:
    if given is not None:
        return given
    if needed:
        said.add("operation", key, f"±{DEFAULT_BAND * 100:.0f} %", words)
    return DEFAULT_BAND


def _operation(rows: Rows, said: Assumptions) -> Operation:
    row = rows.plain["operation"]
    speed_words = "no range is given: judged at rated speed and this band about it"
    speed_band = _band(row.speed_band, "speed-band", speed_words, row.range is None, said)
    supplied = any(getattr(machine, "supply", None) is not None for machine in rows.keyed["machines"].values())
    supply_band = _band(row.supply_band, "supply-band", "variation of the supply frequency", supplied, said)
    if row.speeds:
        said.add("operation", "speeds", "in proportion", "a second speed follows that of speed-at over the range")
    ranges = row.range or ((row.rated * (1 - speed_band), row.rated * (1 + speed_band)),)
    return Operation(
        row.speed_at,
        row.rated,
        ranges,
        row.range is not None,
        speed_band,
        supply_band,
        row.idle,
        row.trip,
        row.barred or (),
        row.barred_because,
        dict(row.speeds),
        **duty_resolve.operation_fields(row),
    )


def _criteria(rows: Rows, said: Assumptions) -> Criteria:
    row = rows.plain["criteria"]
    separation = dict(row.separation or {})
    if "default" not in separation:
        separation["default"] = DEFAULT_SEPARATION
        said.add("criteria", "separation", "10 %", "default requirement (common practice)")
    worst = dict(row.worst_case_separation) if row.worst_case_separation is not None else dict(separation)
    if row.worst_case_separation is None:
        said.add("criteria", "worst-case-separation", "as separation", "not given: the same over the tolerances")
    if "default" not in worst:
        worst = {**separation, **worst}
    if row.margin_on is None:
        said.add("criteria", "margin-on", "excitation", "margin = (f natural − f source) / f source")
    return Criteria(separation, worst, row.margin_on or "excitation")


def _sign_off(rows: Rows) -> SignOff:
    row = rows.plain["sign-off"]
    return SignOff(
        row.document,
        row.revision,
        row.date,
        row.status,
        row.prepared,
        row.checked,
        row.approved,
        row.client,
        tuple(Revision(item.revision, item.date, item.what, item.by) for item in row.history),
    )
