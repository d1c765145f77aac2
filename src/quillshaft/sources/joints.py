"""Universal joints as sources: twice per turn of their shaft, by an imposed twist inside the link they sit in."""

from __future__ import annotations

import math
from collections.abc import Iterator

from quillshaft.elements.joint import joint_amplitude, joint_speed_limits
from quillshaft.graph.torsional import TorsionalGraph
from quillshaft.sources.line import Action, Source
from quillshaft.train.model import Train, UniversalJoint


def joint_words(joint: UniversalJoint) -> str:
    """Angle of the joint, amplitude of the lead at 2x, and the range of the driven shaft's speed."""
    low, high = joint_speed_limits(joint.angle_rad)
    lead = math.degrees(joint_amplitude(joint.angle_rad))
    return f"joint at {math.degrees(joint.angle_rad):.4g}°: ±{lead:.3g}° of twist, {low:.4g} to {high:.4g} of its speed"


def joint_sources(train: Train, graph: TorsionalGraph) -> Iterator[Source]:
    """2x of every universal joint whose shaft turns: it acts inside its link, stiffness times imposed twist.

    A second joint that is set to cancel the first is a reason to switch the source off, and so stays in the report.
    """
    for joint in train.joints:
        station = graph.link(joint.at).stations[0]
        ratio = graph.speed_ratio[station]
        if ratio == 0:
            continue
        name = f"{joint.name} 2x"
        yield Source(
            name,
            (name,),
            ((name, "joint", "default"),),
            joint.at,
            station,
            2.0,
            0.0,
            0.0,
            abs(float(ratio)),
            "continuous",
            Action("link", link=joint.at),
            None,
            joint_words(joint),
        )
