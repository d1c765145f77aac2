"""Networks for the tests of the numerical room: small makers, a random generator and an exact reference."""

from __future__ import annotations

from dataclasses import replace

import mpmath
import numpy as np

from quillshaft.graph.network import Network, TorqueLink

DIGITS = 50


def make(
    inertia,
    springs,
    ties=(),
    links=(),
    resting=(),
) -> Network:
    """A network from inertias, (a, b, stiffness) springs, (node, stiffness) ties, links and resting nodes."""
    nodes = len(inertia)
    turning = np.ones(nodes, dtype=bool)
    turning[list(resting)] = False
    network = Network(
        inertia_kgm2=np.array(inertia, dtype=float),
        turning=turning,
        spring_ends=np.array([(a, b) for a, b, _ in springs], dtype=np.intp).reshape(-1, 2),
        spring_nm_rad=np.array([k for _, _, k in springs], dtype=float),
        tie_node=np.array([node for node, _ in ties], dtype=np.intp),
        tie_nm_rad=np.array([k for _, k in ties], dtype=float),
        torque_links=tuple(links),
        rigid_motions=0,
    )
    return replace(network, rigid_motions=rigid_motions(network))


def chain(inertia, stiffness, ties=()) -> Network:
    return make(inertia, [(i, i + 1, k) for i, k in enumerate(stiffness)], ties)


def parts(network: Network) -> np.ndarray:
    """Number of the connected part of the spring graph of each node."""
    part = np.arange(network.nodes)
    for _ in range(network.nodes):
        for a, b in network.spring_ends:
            part[[a, b]] = min(part[a], part[b])
    return np.unique(part, return_inverse=True)[1]


def rigid_motions(network: Network) -> int:
    """Parts without a tie, less the independent conditions of the torque links on them."""
    part = parts(network)
    free = [p for p in range(part.max() + 1) if p not in set(part[network.tie_node].tolist())]
    rows = np.zeros((len(network.torque_links), part.max() + 1))
    for row, link in zip(rows, network.torque_links, strict=True):
        np.add.at(row, part[list(link.nodes)], link.coefficients)
    return len(free) - (int(np.linalg.matrix_rank(rows[:, free])) if len(rows) and free else 0)


def random_stiffness(rng: np.random.Generator, decades: float) -> float:
    return float(10 ** rng.uniform(8 - decades / 2, 8 + decades / 2))


def random_network(
    rng: np.random.Generator,
    *,
    nodes: int = 8,
    loops: int = 0,
    chain_only: bool = False,
    massless: int = 0,
    ties: int = 0,
    epicyclics: int = 0,
    rigid: bool = True,
    resting_ring: bool = False,
    decades: float = 8.0,
) -> Network:
    """A random network; each epicyclic needs two more parts, and `nodes` grows by two for each of them."""
    nodes += 2 * epicyclics
    part_count = 1 + 2 * epicyclics
    part = [p % part_count if p < part_count else int(rng.integers(part_count)) for p in range(nodes)]
    members = [[node for node in range(nodes) if part[node] == p] for p in range(part_count)]
    springs = []
    for own in members:
        for position in range(1, len(own)):
            other = own[position - 1] if chain_only else own[int(rng.integers(position))]
            springs.append((own[position], other, random_stiffness(rng, decades)))
    for _ in range(loops):
        own = max(members, key=len)
        a, b = rng.choice(own, 2, replace=False)
        springs.append((int(a), int(b), random_stiffness(rng, decades)))
    inertia = 10 ** rng.uniform(-1, 2, nodes)
    links, held, resting = [], [], []
    for stage in range(epicyclics):
        sun, ring, carrier = (int(rng.choice(members[p])) for p in (2 * stage, 2 * stage + 1, 2 * stage + 2))
        links.append(_epicyclic(rng, (sun, ring, carrier), rigid, resting_ring))
        if resting_ring:
            resting += members[2 * stage + 1]
            held.append((ring, random_stiffness(rng, decades)))
    touched = {node for link in links for node in link.nodes}
    for node in rng.permutation(nodes)[:massless].tolist():
        if sum(node in spring[:2] for spring in springs) > 0 or node in {n for n, _ in held}:
            inertia[node] = 0.0
    for p in range(part_count):  # every part keeps some inertia
        if not inertia[members[p]].any():
            free = [node for node in members[p] if node not in touched] or members[p]
            inertia[free[0]] = 1.0
    tied = [(int(rng.integers(nodes)), random_stiffness(rng, decades)) for _ in range(ties)] + held
    return make(inertia, springs, tied, links, resting)


def _epicyclic(rng, nodes, rigid, resting_ring) -> TorqueLink:
    sun, ring, carrier = nodes
    sun_teeth, ring_teeth = int(rng.integers(18, 40)), int(rng.integers(70, 120))
    sun_speed = float(rng.uniform(1.5, 3.0))
    carrier_speed = sun_speed * sun_teeth / (sun_teeth + ring_teeth) if resting_ring else 1.0
    total = sun_teeth + ring_teeth
    ring_speed = (total * carrier_speed - sun_teeth * sun_speed) / ring_teeth
    coefficients = (
        sun_teeth * sun_speed,
        ring_teeth * (1.0 if resting_ring else ring_speed),
        -total * carrier_speed,
    )
    compliance = 0.0 if rigid else float(10 ** rng.uniform(-7, -3))
    return TorqueLink((sun, ring, carrier), coefficients, compliance)


def exact_frequencies(network: Network) -> list[mpmath.mpf]:
    """Elastic natural frequencies [rad/s] by mpmath with 50 digits from the assembled matrices."""
    with mpmath.workdps(DIGITS):
        stiffness = _stiffness(network)
        basis = _null_basis(network)
        inertia = mpmath.diag([mpmath.mpf(value) for value in network.inertia_kgm2])
        stiffness, inertia = basis.T * stiffness * basis, basis.T * inertia * basis
        size = inertia.rows
        massive = [i for i in range(size) if any(inertia[i, j] != 0 for j in range(size))]
        massless = [i for i in range(size) if i not in massive]
        k = _pick(stiffness, massive, massive)
        if massless:
            cross = _pick(stiffness, massless, massive)
            k = k - cross.T * _solve_columns(_pick(stiffness, massless, massless), cross)
        lower = mpmath.cholesky(_pick(inertia, massive, massive))
        inverse = lower**-1
        values = sorted(mpmath.eigsy(inverse * k * inverse.T, eigvals_only=True))
        return [mpmath.sqrt(value) for value in values[network.rigid_motions :]]


def _stiffness(network: Network) -> mpmath.matrix:
    k = mpmath.zeros(network.nodes)
    for (a, b), value in zip(network.spring_ends.tolist(), network.spring_nm_rad.tolist(), strict=True):
        for i, j, sign in ((a, a, 1), (b, b, 1), (a, b, -1), (b, a, -1)):
            k[i, j] += sign * mpmath.mpf(value)
    for node, value in zip(network.tie_node.tolist(), network.tie_nm_rad.tolist(), strict=True):
        k[node, node] += mpmath.mpf(value)
    for link in network.torque_links:
        if link.compliance_rad_per_nm > 0:
            terms = list(zip(link.nodes, link.coefficients, strict=True))
            for i, a in terms:
                for j, b in terms:
                    k[i, j] += mpmath.mpf(a) * mpmath.mpf(b) / mpmath.mpf(link.compliance_rad_per_nm)
    return k


def _null_basis(network: Network) -> mpmath.matrix:
    """Angles that satisfy the rigid links, massless nodes made dependent first."""
    rows = []
    for link in network.torque_links:
        if link.compliance_rad_per_nm == 0:
            row = [mpmath.mpf(0)] * network.nodes
            for node, a in zip(link.nodes, link.coefficients, strict=True):
                row[node] += mpmath.mpf(a)
            rows.append(row)
    dependent: list[int] = []
    for number, row in enumerate(rows):
        candidates = [n for n in range(network.nodes) if abs(row[n]) > mpmath.mpf(10) ** -12]
        pivot = max(candidates, key=lambda n: (network.inertia_kgm2[n] == 0, abs(row[n])))
        row[:] = [value / row[pivot] for value in row]
        for other in rows[:number] + rows[number + 1 :]:
            other[:] = [x - other[pivot] * y for x, y in zip(other, row, strict=True)]
        dependent.append(pivot)
    free = [n for n in range(network.nodes) if n not in dependent]
    basis = mpmath.zeros(network.nodes, len(free))
    for column, node in enumerate(free):
        basis[node, column] = 1
        for row, pivot in zip(rows, dependent, strict=True):
            basis[pivot, column] = -row[node]
    return basis


def _solve_columns(matrix: mpmath.matrix, columns: mpmath.matrix) -> mpmath.matrix:
    solved = mpmath.zeros(matrix.rows, columns.cols)
    for column in range(columns.cols):
        solved[:, column] = mpmath.lu_solve(matrix, columns[:, column])
    return solved


def _pick(matrix: mpmath.matrix, rows: list[int], columns: list[int]) -> mpmath.matrix:
    picked = mpmath.zeros(len(rows), len(columns))
    for i, row in enumerate(rows):
        for j, column in enumerate(columns):
            picked[i, j] = matrix[row, column]
    return picked


def dense_response(network, torque, omega2, springs=None, ties=None, inertia=None):
    """Angles, spring twists and torques of the links by a dense solution with 50 digits."""
    nodes, links = network.nodes, len(network.torque_links)
    springs = network.spring_nm_rad.tolist() if springs is None else springs
    ties = network.tie_nm_rad.tolist() if ties is None else ties
    inertia = network.inertia_kgm2.tolist() if inertia is None else inertia
    with mpmath.workdps(DIGITS):
        matrix = mpmath.zeros(nodes + links)
        for node, value in enumerate(inertia):
            matrix[node, node] = -mpmath.mpf(float(omega2)) * mpmath.mpmathify(value)
        for (a, b), value in zip(network.spring_ends.tolist(), springs, strict=True):
            for i, j, sign in ((a, a, 1), (b, b, 1), (a, b, -1), (b, a, -1)):
                matrix[i, j] += sign * mpmath.mpmathify(value)
        for node, value in zip(network.tie_node.tolist(), ties, strict=True):
            matrix[node, node] += mpmath.mpmathify(value)
        for unknown, link in enumerate(network.torque_links, start=nodes):
            matrix[unknown, unknown] = -mpmath.mpf(link.compliance_rad_per_nm)
            for node, a in zip(link.nodes, link.coefficients, strict=True):
                matrix[node, unknown] += mpmath.mpf(a)
                matrix[unknown, node] += mpmath.mpf(a)
        right = mpmath.matrix([mpmath.mpmathify(value) for value in torque] + [0] * links)
        x = mpmath.lu_solve(matrix, right)
        twist = [x[a] - x[b] for a, b in network.spring_ends.tolist()]
        number = complex if any(isinstance(value, mpmath.mpc) for value in x) else float
        return [[number(value) for value in part] for part in (x[:nodes], twist, x[nodes:])]
