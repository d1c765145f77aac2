"""Crank throws as `check` shows them: both formulas side by side."""

from __future__ import annotations

from collections.abc import Iterator

from quillshaft.assess.results import Flag
from quillshaft.elements.crank import throw_stiffness
from quillshaft.train.model import Train


def throw_flags(train: Train) -> Iterator[Flag]:
    """Both formulas for every crank throw that differs from the ones before it."""
    seen = set()
    for shaft in train.shafts:
        if shaft.throw is None or shaft.material is None or (shaft.throw, shaft.material) in seen:
            continue
        seen.add((shaft.throw, shaft.material))
        modulus = shaft.material.shear_modulus_pa
        carter, ker_wilson = (throw_stiffness(shaft.throw, modulus, by) for by in ("carter", "ker-wilson"))
        apart = ker_wilson / carter - 1.0
        used = "Carter" if shaft.throw.formula == "carter" else "Ker Wilson"
        text = (
            f"crank throw by Carter {carter / 1e6:.4g}, by Ker Wilson {ker_wilson / 1e6:.4g} MN·m/rad "
            f"({apart:+.0%}), {used} used; both recalled, confirm against your edition"
        )
        doubt = "; more than 20 % apart: are these ordinary proportions?" if abs(apart) > 0.2 else ""
        yield Flag(f"shafts.{shaft.name}", text + doubt)
