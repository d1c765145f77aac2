"""What studies that hold every source against every mode must say of a train with fluid couplings."""

from __future__ import annotations

BOTH_SIDES = (
    "A fluid coupling separates this train, yet here every source is held against the modes of both sides: a meeting "
    "with a mode of the other side is none."
)
