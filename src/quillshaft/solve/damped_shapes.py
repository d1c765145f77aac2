"""Shapes of damped modes: bases of equal roots, real shapes of real roots, scaling."""

from __future__ import annotations

import numpy as np

from quillshaft.graph.network import Bools, Floats, Network
from quillshaft.solve.damped_state import Numbers
from quillshaft.solve.substitution import Solution

EQUAL = 1e-8  # relative distance of roots that share one space of shapes
DEPENDENT = 1e-6  # what is left of a shape that others make up


def real_shapes(shapes: Numbers) -> Floats:
    """Real shapes of real roots: the larger of the real and the imaginary part of each."""
    use_real = np.linalg.norm(shapes.real, axis=0) >= np.linalg.norm(shapes.imag, axis=0)
    return np.where(use_real, shapes.real, shapes.imag)


def cluster_basis(roots: Numbers, shapes: Numbers) -> Numbers:
    """Shapes (nodes, m) with a reduced basis where roots are equal: each member alone moves one of their nodes.

    Equal roots share a space of shapes, and an eigensolver may return any complex mixture of them.
    """
    out: Numbers = shapes / np.abs(shapes).max(axis=0, initial=1e-300)
    left = set(range(len(roots)))
    while left:
        first = min(left)
        members = [i for i in sorted(left) if abs(roots[i] - roots[first]) <= EQUAL * abs(roots[first])]
        left -= set(members)
        if len(members) > 1:
            out[:, members] = _reduced(out[:, members])
    return out


def _reduced(space: Numbers) -> Numbers:
    """The columns reduced against one another; the same column again where they are not independent."""
    out = space.copy()
    for place in range(out.shape[1]):
        pick = place + int(np.argmax(np.abs(out[:, place:]).max(axis=0)))
        out[:, [place, pick]] = out[:, [pick, place]]
        node = int(np.argmax(np.abs(out[:, place])))
        if np.abs(out[node, place]) < DEPENDENT:  # critical damping: one shape for two roots
            out[:, place:] = space[:, :1]
            break
        out[:, place] = out[:, place] / out[node, place]
        others = np.arange(out.shape[1]) != place
        out[:, others] = out[:, others] - np.outer(out[:, place], out[node, others])
    return out


def first_solution(network: Network, shapes: Numbers) -> Solution:
    """Shapes of the state matrix with their twists, for a root that cannot be refined."""
    a, b = network.spring_ends[:, 0], network.spring_ends[:, 1]
    torque = np.zeros((len(network.torque_links), shapes.shape[1]), dtype=shapes.dtype)
    for row, link in zip(torque, network.torque_links, strict=True):
        if link.compliance_rad_per_nm > 0:
            row[:] = np.asarray(link.coefficients) @ shapes[list(link.nodes)] / link.compliance_rad_per_nm
    return Solution(shapes, shapes[a] - shapes[b], shapes[network.tie_node], torque)


def scaled(at: Solution) -> Solution:
    """Each shape divided by its largest angle, which becomes 1."""
    with np.errstate(all="ignore"):
        largest = at.angle[np.argmax(np.abs(at.angle), axis=0), np.arange(at.angle.shape[1])]
        return Solution(at.angle / largest, at.spring_twist / largest, at.tie_twist / largest, at.link_torque / largest)


def choose(use: Bools, new: Solution, old: Solution) -> Solution:
    """The new shapes where `use`, the old ones elsewhere."""
    return Solution(
        np.where(use, new.angle, old.angle),
        np.where(use, new.spring_twist, old.spring_twist),
        np.where(use, new.tie_twist, old.tie_twist),
        np.where(use, new.link_torque, old.link_torque),
    )
