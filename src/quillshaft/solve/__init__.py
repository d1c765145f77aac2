"""Numbers only: elimination on the graph, statics, natural modes and response of a `Network`."""

from quillshaft.solve.elimination import Elimination, eliminate
from quillshaft.solve.first_values import ElementValues
from quillshaft.solve.modes import Modes, natural_frequencies, natural_modes
from quillshaft.solve.plan import Plan, plan_elimination
from quillshaft.solve.precise import count_below, solve_at
from quillshaft.solve.statics import Statics, static_torques
from quillshaft.solve.substitution import Solution, respond, solve

__all__ = [
    "ElementValues",
    "Elimination",
    "Modes",
    "Plan",
    "Solution",
    "Statics",
    "count_below",
    "eliminate",
    "natural_frequencies",
    "natural_modes",
    "plan_elimination",
    "respond",
    "solve",
    "solve_at",
    "static_torques",
]
