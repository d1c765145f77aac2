"""Damped modes: complex eigenvalues of s² M + s C + K (1 + jη), refined and verified on the elimination.

A motion is Re(θ e^{st}), s = σ + jω: ω is the damped frequency, −σ/|s| the damping ratio, −2πσ/ω the logarithmic
decrement. The eigenvalues of the state matrix come first; inverse iteration on the elimination of the graph then
refines every root with its shape, the root being that of the quadratic θᵀ(s² M + s C + K (1 + jη)) θ = 0 (Rayleigh
quotient of a symmetric λ-matrix: P. Lancaster, Lambda-matrices and Vibrating Systems, ch. 4 and 5, from memory).

Loss factors act as the complex stiffness k (1 + jη) of steady vibration, so roots with ω > 0 are those of the
oscillation; the mirrored ones belong to k (1 − jη). Motions that do not oscillate have no cycle for a loss factor
to act in: their rates are those of the viscous damping alone. Of the roots with ω > 0 the modes are as many as
oscillate with viscous damping alone, those of the smallest |σ|/|s|.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from quillshaft.graph.network import Bools, Floats, Network
from quillshaft.records import dataclass
from quillshaft.solve.damped_shapes import EQUAL, choose, cluster_basis, first_solution, real_shapes, scaled
from quillshaft.solve.damped_state import Damping, Elements, Numbers, damped_state, elements_of, undamped
from quillshaft.solve.dynamic_values import dynamic_values
from quillshaft.solve.elimination import eliminate
from quillshaft.solve.modes import Modes, natural_modes
from quillshaft.solve.plan import Plan, plan_elimination
from quillshaft.solve.substitution import Solution, solve

STILL = 1e-7  # |ω|/|s| below which a root does not oscillate: rounding splits a double real root so far
SHIFT = 3e-15
ROUNDS = 8
KEPT = 1e-6  # relative distance that refinement may move a root
VERIFIED = 1e-9  # residual below which a root is verified


@dataclass(frozen=True)
class DampedModes:
    """Roots in rising order: by damped frequency (oscillations) or by rate of decay. One row for each root.

    root_1_s      (m,) s = σ + jω [1/s], complex; real for motions that do not oscillate
    angle         (m, nodes) referred angles, the largest is 1
    spring_twist, tie_twist [rad], link_torque [N·m]   to the same scale
    spring_loss, tie_loss, link_loss, node_loss   shares of the energy lost in a cycle by springs, ties, torque
                  links and dampers to ground; those that lose sum to 1, those that feed energy in are negative
                  on the same scale; all 0 where nothing is lost
    residual      (m,) largest imbalance of torques at a node over the largest torque
    verified      (m,) True where the residual is below 1e-9 and the root that of the state matrix
    """

    root_1_s: Numbers
    angle: Numbers
    spring_twist: Numbers
    tie_twist: Numbers
    link_torque: Numbers
    spring_loss: Floats
    tie_loss: Floats
    link_loss: Floats
    node_loss: Floats
    residual: Floats
    verified: Bools


@dataclass(frozen=True)
class DampedMotions:
    """All free motions of a damped network: those that oscillate, and those that only grow or decay."""

    oscillating: DampedModes
    other: DampedModes


def damped_modes(network: Network, damping: Damping, modes: Modes | None = None) -> DampedMotions:
    """Every damped mode of a network; `modes` are those of `undamped(network)` where they are known.

    A spring of stiffness 0 is a damper alone; the network's rigid-body motions are counted without it.

    Raises numpy.linalg.LinAlgError where damping to ground cancels on a massless node, ArithmeticError where an
    undamped shape cannot be refined.
    """
    plan = plan_elimination(network)
    modes = modes or natural_modes(undamped(network))
    state = damped_state(network, modes, damping, lossy=False)
    roots, vectors = np.linalg.eig(state.matrix)
    still = np.abs(roots.imag) <= STILL * np.abs(roots)
    real = np.flatnonzero(still)[np.argsort(-roots[still].real, kind="stable")]
    rates = roots[real].real
    first = state.angles(roots[real], vectors[:, real])
    other = _Work(network, plan, _without_loss(damping)).refined(rates, real_shapes(first))
    count = int(np.count_nonzero(~still & (roots.imag > 0)))
    if damping.hysteretic:
        state = damped_state(network, modes, damping, lossy=True)
        roots, vectors = np.linalg.eig(state.matrix)
    upper = np.flatnonzero(roots.imag > STILL * np.abs(roots))
    upper = upper[np.argsort(np.abs(roots[upper].real) / np.abs(roots[upper]), kind="stable")[:count]]
    upper = upper[np.argsort(roots[upper].imag, kind="stable")]
    shapes = state.angles(roots[upper], vectors[:, upper])
    return DampedMotions(_Work(network, plan, damping).refined(roots[upper], shapes), other)


def _without_loss(damping: Damping) -> Damping:
    none = {key: np.zeros_like(getattr(damping, key)) for key in ("spring_loss", "tie_loss", "link_loss")}
    return replace(damping, **none)


@dataclass(frozen=True)
class _Work:
    """What refining needs: the network, its order of elimination and its damping."""

    network: Network
    plan: Plan
    damping: Damping

    def refined(self, roots: Numbers, shapes: Numbers) -> DampedModes:
        """Roots (m,) and shapes (nodes, m) of the state matrix, refined, verified and with their energy lost."""
        elements = elements_of(self.network, self.damping)
        shapes = cluster_basis(roots, shapes)
        found, at = roots.copy(), first_solution(self.network, shapes)
        good = np.zeros(len(roots), dtype=bool)
        for _ in range(ROUNDS if len(roots) else 0):
            trial = scaled(self._step(found, _slope(self.network, elements, found, shapes)))
            new = _root_of(self.network, elements, self._twists(elements, trial, found), trial.angle, found)
            near = np.abs(new - roots) <= KEPT * np.abs(roots) + EQUAL * np.abs(roots).max()
            use = np.isfinite(new) & near & np.isfinite(trial.angle).all(axis=0)
            moved = np.abs(new - found) > 4e-16 * np.abs(found)
            found, good = np.where(use, new, found), good | use
            at = choose(use, trial, at)
            shapes = at.angle
            if not (moved & use).any():
                break
        return self._result(elements, found, at, good)

    def _step(self, roots: Numbers, torque: Numbers) -> Solution:
        """One step of inverse iteration at each root."""
        solution, shift = self._solved(roots * (1 + SHIFT), torque), SHIFT
        for _ in range(6):
            finite = np.isfinite(solution.angle).all(axis=0) & np.isfinite(solution.link_torque).all(axis=0)
            if finite.all():
                break
            shift *= 4
            solution = self._solved(np.where(finite, roots * (1 + SHIFT), roots * (1 + shift)), torque)
        return solution

    def _solved(self, roots: Numbers, torque: Numbers) -> Solution:
        values = dynamic_values(self.network, self.damping, roots)
        return solve(eliminate(self.network, self.plan, -(roots**2), values), torque)

    def _twists(self, elements: Elements, at: Solution, roots: Numbers) -> Numbers:
        """(elements, m) twists of springs, ties, elastic torque links and angles of the nodes."""
        springs_and_ties = len(at.spring_twist) + len(at.tie_twist)
        elastic = [link.compliance_rad_per_nm > 0 for link in self.network.torque_links]
        torque = at.link_torque[elastic]
        own = slice(springs_and_ties, springs_and_ties + len(torque))
        twist = torque / _dynamic_stiffness(elements, roots)[own]
        return np.concatenate([at.spring_twist, at.tie_twist, twist, at.angle])

    def _result(self, elements: Elements, roots: Numbers, at: Solution, good: Bools) -> DampedModes:
        twist = self._twists(elements, at, roots)
        springs, ties = len(at.spring_twist), len(at.tie_twist)
        lost = _loss_shares(elements, roots, twist)
        links = np.zeros((len(at.link_torque), len(roots)))
        elastic = [link.compliance_rad_per_nm > 0 for link in self.network.torque_links]
        links[elastic] = lost[springs + ties : -self.network.nodes]
        residual = _residual(self.network, elements, roots, twist, at)
        return DampedModes(
            roots,
            at.angle.T,
            at.spring_twist.T,
            at.tie_twist.T,
            at.link_torque.T,
            lost[:springs].T,
            lost[springs : springs + ties].T,
            links.T,
            lost[-self.network.nodes :].T,
            residual,
            good & (residual <= VERIFIED),
        )


def _dynamic_stiffness(elements: Elements, roots: Numbers) -> Numbers:
    """(elements, m) k (1 + jη) + s c [N·m/rad]; without loss factors for real roots."""
    stiffness = elements.stiffness * (1 + 1j * elements.loss) if np.iscomplexobj(roots) else elements.stiffness
    return np.asarray(stiffness[:, None] + np.multiply.outer(elements.viscous, roots))


def _slope(network: Network, elements: Elements, roots: Numbers, shapes: Numbers) -> Numbers:
    """(2 s M + C) θ [N·m·s]: what inverse iteration of a λ-matrix solves for, (nodes, m)."""
    viscous = elements.twist.T @ (elements.viscous[:, None] * (elements.twist @ shapes))
    return np.asarray(2 * roots * network.inertia_kgm2[:, None] * shapes + viscous)


def _root_of(network: Network, elements: Elements, twist: Numbers, angle: Numbers, near: Numbers) -> Numbers:
    """Root of θᵀ(s² M + s C + K) θ = 0 nearest to `near`, for each shape."""
    stiffness = elements.stiffness * (1 + 1j * elements.loss) if np.iscomplexobj(near) else elements.stiffness
    a = (network.inertia_kgm2[:, None] * angle**2).sum(axis=0)
    b, c = elements.viscous @ twist**2, stiffness @ twist**2
    with np.errstate(all="ignore"):
        inside = b * b - 4 * a * c
        spread = np.sqrt(inside if np.iscomplexobj(near) else np.maximum(inside, 0.0))
        spread = np.where((np.conj(b) * spread).real < 0, -spread, spread)
        q = -(b + spread) / 2
        first, second = q / a, c / q
        use_first = ~(np.abs(second - near) <= np.abs(first - near))
    return np.asarray(np.where(use_first, first, second))


def _loss_shares(elements: Elements, roots: Numbers, twist: Numbers) -> Floats:
    """(elements, m) shares of the energy lost: |s|² c |twist|² and ω η k |twist|², over the sum of what is lost.

    Where nothing is lost, over what is fed in. These are the powers, since the real part of
    s̄ θᴴ(s² M + s C + K (1 + jη)) θ = 0 says −σ (|s|² θᴴMθ + θᴴKθ) = |s|² θᴴCθ + ω θᴴ(ηK)θ (own derivation).
    """
    hysteretic = np.multiply.outer(elements.stiffness * elements.loss, np.abs(np.imag(roots)))
    power = (np.multiply.outer(elements.viscous, np.abs(roots) ** 2) + hysteretic) * np.abs(twist) ** 2
    lost = np.where(power > 0, power, 0.0).sum(axis=0)
    whole = np.where(lost > 0, lost, np.abs(power).sum(axis=0))
    return np.asarray(power / np.where(whole > 0, whole, 1.0))


def _residual(network: Network, elements: Elements, roots: Numbers, twist: Numbers, at: Solution) -> Floats:
    """Largest imbalance of torques at a node over the largest torque of a spring or a damper, (m,)."""
    sums = elements.twist.T @ (_dynamic_stiffness(elements, roots) * twist)
    sums = sums + network.inertia_kgm2[:, None] * at.angle * roots**2
    size = np.maximum(elements.stiffness[:, None], np.multiply.outer(np.abs(elements.viscous), np.abs(roots)))
    size = size * np.abs(elements.twist).max(axis=1, initial=0.0)[:, None] * np.abs(twist)
    largest = np.max(size, axis=0, initial=0.0)
    for link, own in zip(network.torque_links, at.link_torque, strict=True):
        if link.compliance_rad_per_nm == 0:
            np.add.at(sums, list(link.nodes), np.multiply.outer(np.asarray(link.coefficients), own))
            largest = np.maximum(largest, np.abs(own) * max(map(abs, link.coefficients)))
    return np.asarray(np.abs(sums).max(axis=0) / np.where(largest > 0, largest, 1.0))
