"""The studies that `report` is asked to hold, worked out one after the other."""

from __future__ import annotations

from dataclasses import dataclass

from quillshaft.assess.orders import OrderStudy
from quillshaft.assess.results import Screening
from quillshaft.assess.screening import screen_temperatures
from quillshaft.cli.output import refuse
from quillshaft.present.report.studies import Studies
from quillshaft.train.problems import TrainFileError


@dataclass(frozen=True)
class Asked:
    """What the command line asks the report to hold beside the screening."""

    windows: tuple[str, ...] = ()
    compare: tuple[str, ...] = ()
    tolerance: int | None = None
    seed: int = 1
    drift: tuple[str, str, str] | None = None
    temperatures: bool = False
    levers: bool = False
    questions: bool = False
    damped: bool = False
    orders: bool = False
    response: bool = False

    @property
    def nothing(self) -> bool:
        """True where the screening alone is asked for."""
        return self == Asked(seed=self.seed)


def work_out(screening: Screening, asked: Asked) -> Studies | None:
    """The studies asked for; leaves with exit code 2 where one cannot be made."""
    from quillshaft.study.datum import DatumError
    from quillshaft.study.window_bands import AskError

    if asked.nothing:
        return None
    try:
        return _studies(screening, asked)
    except (AskError, DatumError, TrainFileError) as error:
        refuse(str(error))
    except ValueError as error:
        refuse(f"--tolerance {asked.tolerance}: {error}")


def _studies(screening: Screening, asked: Asked) -> Studies:
    from quillshaft.cli.damped_command import damped_of
    from quillshaft.cli.more_output import find_levers
    from quillshaft.cli.respond_command import response_of
    from quillshaft.cli.study_output import progress_bar
    from quillshaft.study.compare import compare_cases
    from quillshaft.study.drift import drift
    from quillshaft.study.link_choice import links_that_clear
    from quillshaft.study.tolerance import tolerance_study
    from quillshaft.study.windows import stiffness_windows

    windows = []
    for link in asked.windows:
        found = stiffness_windows(screening, link)
        others = links_that_clear(screening, found) if found.cannot_clear else ()
        windows.append((found, others))
    comparisons = compare_cases(screening, asked.compare).cases if asked.compare else ()
    tolerance = None
    if asked.tolerance is not None:
        with progress_bar("Tolerance") as progress:
            tolerance = tolerance_study(screening, asked.tolerance, asked.seed, progress=progress)
    drifts = () if asked.drift is None else (drift(screening.train, *asked.drift),)
    return Studies(
        windows=tuple(windows),
        comparisons=comparisons,
        tolerance=tolerance,
        drifts=drifts,
        temperatures=screen_temperatures(screening.train) if asked.temperatures else None,
        levers=find_levers(screening) if asked.levers else None,
        questions=asked.questions,
        damped=damped_of(screening) if asked.damped else None,
        orders=_orders(screening) if asked.orders else (),
        response=response_of(screening) if asked.response else None,
    )


def _orders(screening: Screening) -> tuple[OrderStudy, ...]:
    """The orders of every engine and reciprocating compressor; leaves with exit code 2 where there is none."""
    from quillshaft.assess.orders import order_study, reciprocating_machines

    machines = reciprocating_machines(screening)
    if not machines:
        refuse("--orders: the file has no reciprocating-engine and no reciprocating-compressor")
    return tuple(order_study(screening, machine.name) for machine in machines)
