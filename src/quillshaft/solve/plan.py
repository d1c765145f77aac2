"""The symbolic phase of the elimination: in which order the unknowns go, and which pairs fill in.

Unknowns are the nodes, numbered as in the network, followed by the torque links (link l is unknown
nodes + l). Leaves of the graph are peeled off by a queue, in time proportional to the number of nodes;
what loops and torque links leave is the core, ordered by minimum degree (W. F. Tinney and J. W. Walker,
"Direct solutions of sparse network equations by optimally ordered triangular factorization", 1967).
"""

from __future__ import annotations

import heapq
from dataclasses import field

from quillshaft.graph.network import Network
from quillshaft.records import dataclass

NO_PAIR = -1


@dataclass(frozen=True)
class CoreStep:
    """The elimination of one unknown of the core.

    unknown     its number
    neighbours  unknowns still joined to it, in the order of their own elimination
    pairs       pair number of (unknown, neighbour), one for each neighbour
    fill        (a, b, pair): positions a < b in `neighbours` and the number of the pair they make
    """

    unknown: int
    neighbours: tuple[int, ...]
    pairs: tuple[int, ...]
    fill: tuple[tuple[int, int, int], ...]


@dataclass(frozen=True)
class Plan:
    """An order of elimination; it depends on structure only and serves every set of values of a network.

    nodes, links   numbers of nodes and torque links
    leaf           nodes peeled as leaves, in order; `parent` and `leaf_pair` are the node each hangs on and
                   the number of the pair they make; `leaf_first` is True where their (last) spring begins at it
    core           steps for all other unknowns, in order
    pair_count     number of pairs of unknowns, fill included
    spring_pair    (springs,) pair of each spring; -1 where both ends are one node
    spring_sign    (springs,) +1 where the first end is eliminated before the second, else -1
    link_pairs     for each torque link the pair with each of its nodes, in the order of `TorqueLink.nodes`
    group          group of each unknown: nodes of one group share a rigid state; torque links have -1
    resting_group  number of the group of resting nodes, -1 without any
    groups         number of groups, 1 or 2
    precisely      True sends every count and every solution next to a mode through the long arithmetic
    """

    nodes: int
    links: int
    leaf: tuple[int, ...]
    parent: tuple[int, ...]
    leaf_pair: tuple[int, ...]
    leaf_first: tuple[bool, ...]
    core: tuple[CoreStep, ...]
    pair_count: int
    spring_pair: tuple[int, ...]
    spring_sign: tuple[int, ...]
    link_pairs: tuple[tuple[int, ...], ...]
    group: tuple[int, ...]
    resting_group: int
    groups: int
    precisely: bool = False


@dataclass
class _Pairs:
    """Numbers for unordered pairs of unknowns, given out as they are first asked for."""

    size: int
    number: dict[int, int] = field(default_factory=dict)

    def of(self, a: int, b: int) -> int:
        key = a * self.size + b if a < b else b * self.size + a
        return self.number.setdefault(key, len(self.number))


def plan_elimination(network: Network, last: tuple[int, ...] = ()) -> Plan:
    """Return the order of elimination of a network, O(nodes) for a tree.

    The nodes in `last` are eliminated after everything else, in the order given. A torque link goes after at
    least one of its nodes, and links that share a node after one node each: two rigid links that wait on one
    node alone would leave a pivot of exactly zero. A part without inertia and without a tie goes after a torque
    link that holds it.
    """
    size = network.nodes + len(network.torque_links)
    ends = network.spring_ends.tolist()
    pairs = _Pairs(size)
    spring_pair = [NO_PAIR if a == b else pairs.of(a, b) for a, b in ends]
    link_nodes = [sorted(set(link.nodes)) for link in network.torque_links]
    leaf, parent, leaf_pair = _peel(size, ends, spring_pair, link_nodes, last)
    core = _order_core(network, leaf, spring_pair, link_nodes, last)
    rank = _ranks(size, leaf, core)
    steps = tuple(_core_step(u, neighbours, rank, pairs) for u, neighbours in core)
    group, resting_group, groups = _groups(network)
    spring_sign = tuple([1 if rank[a] <= rank[b] else -1 for a, b in ends])
    sign = dict(zip(spring_pair, spring_sign, strict=True))
    return Plan(
        nodes=network.nodes,
        links=size - network.nodes,
        leaf=tuple(leaf),
        parent=tuple(parent),
        leaf_pair=tuple(leaf_pair),
        leaf_first=tuple([sign[pair] > 0 for pair in leaf_pair]),
        core=steps,
        pair_count=len(pairs.number),
        spring_pair=tuple(spring_pair),
        spring_sign=spring_sign,
        link_pairs=tuple(
            tuple(pairs.of(network.nodes + number, node) for node in link.nodes)
            for number, link in enumerate(network.torque_links)
        ),
        group=group,
        resting_group=resting_group,
        groups=groups,
    )


def _groups(network: Network) -> tuple[tuple[int, ...], int, int]:
    links = (-1,) * len(network.torque_links)
    if network.turning.all():
        return (0,) * network.nodes + links, -1, 1
    if not network.turning.any():
        return (0,) * network.nodes + links, 0, 1
    return tuple(0 if turns else 1 for turns in network.turning.tolist()) + links, 1, 2


def _peel(
    size: int,
    ends: list[list[int]],
    spring_pair: list[int],
    link_nodes: list[list[int]],
    last: tuple[int, ...],
) -> tuple[list[int], list[int], list[int]]:
    """Peel leaves; the exclusive-or of the neighbours still there is the only one once the node is a leaf."""
    degree, neighbour, pair_of = [0] * size, [0] * size, [0] * size
    known: set[int] = set()
    for (a, b), pair in zip(ends, spring_pair, strict=True):
        if pair == NO_PAIR or pair in known:
            continue
        known.add(pair)
        degree[a] += 1
        degree[b] += 1
        neighbour[a] ^= b
        neighbour[b] ^= a
        pair_of[a] ^= pair
        pair_of[b] ^= pair
    for node in [node for nodes in link_nodes for node in nodes] + list(last):
        degree[node] += 2 * size  # never a leaf
    queue = [node for node in range(size) if degree[node] == 1]
    leaf, parent, leaf_pair = [], [], []
    for node in queue:
        if degree[node] != 1:
            continue
        above, pair = neighbour[node], pair_of[node]
        leaf.append(node)
        parent.append(above)
        leaf_pair.append(pair)
        degree[node] = 0
        degree[above] -= 1
        neighbour[above] ^= node
        pair_of[above] ^= pair
        if degree[above] == 1:
            queue.append(above)
    return leaf, parent, leaf_pair


def _order_core(
    network: Network,
    leaf: list[int],
    spring_pair: list[int],
    link_nodes: list[list[int]],
    last: tuple[int, ...],
) -> list[tuple[int, set[int]]]:
    """Return the unknowns of the core in order, each with the unknowns still joined to it."""
    nodes = network.nodes
    gone = set(leaf)
    joined: dict[int, set[int]] = {u: set() for u in range(nodes + len(link_nodes)) if u not in gone}
    if len(joined) == 1:
        return list(joined.items())
    for (a, b), pair in zip(network.spring_ends.tolist(), spring_pair, strict=True):
        if pair != NO_PAIR and a in joined and b in joined:
            joined[a].add(b)
            joined[b].add(a)
    for number, members in enumerate(link_nodes):
        joined[nodes + number].update(members)
        for node in members:
            joined[node].add(nodes + number)
    held = _held(network) if link_nodes else [True] * nodes
    ready = [False] * len(link_nodes)
    order = _minimum_degree(joined, nodes, held, ready, set(last))
    return order + [(node, _remove(joined, node)) for node in last]


def spring_parts(network: Network) -> list[int]:
    """Return for each node the number of its part of the spring graph (one of the part's own nodes)."""
    root = list(range(network.nodes))

    def find(node: int) -> int:
        while root[node] != node:
            root[node] = root[root[node]]
            node = root[node]
        return node

    for a, b in network.spring_ends.tolist():
        root[find(a)] = find(b)
    return [find(node) for node in range(network.nodes)]


def _held(network: Network) -> list[bool]:
    """Say of each node whether its part of the spring graph has any inertia or tie."""
    part = spring_parts(network)
    held = {part[node] for node in network.tie_node.tolist()}
    held |= {part[node] for node, inertia in enumerate(network.inertia_kgm2.tolist()) if inertia > 0}
    return [number in held for number in part]


def _remove(joined: dict[int, set[int]], unknown: int) -> set[int]:
    """Take an unknown out of the graph, join all its neighbours to one another and return them."""
    neighbours = joined.pop(unknown)
    for other in neighbours:
        joined[other] |= neighbours
        joined[other] -= {unknown, other}
    return neighbours


def _minimum_degree(
    joined: dict[int, set[int]], nodes: int, held: list[bool], ready: list[bool], last: set[int]
) -> list[tuple[int, set[int]]]:
    def may_go(u: int) -> bool:
        if u >= nodes:
            return ready[u - nodes]
        return held[u] or not joined[u] or any(other < nodes for other in joined[u])

    order = []
    heap = [(len(joined[u]), -u, u) for u in joined if u not in last]
    heapq.heapify(heap)
    waiting: list[tuple[int, int, int]] = []
    while heap or waiting:
        forced = not heap
        if forced:
            heap, waiting = sorted(waiting), []
        degree, key, u = heapq.heappop(heap)
        if u not in joined or degree != len(joined[u]):
            continue
        if not forced and not may_go(u):
            waiting.append((degree, key, u))
            continue
        neighbours = _remove(joined, u)
        order.append((u, neighbours))
        for other in neighbours:
            if other >= nodes:
                ready[other - nodes] = u < nodes
            if other not in last:
                heapq.heappush(heap, (len(joined[other]), -other, other))
    return order


def _ranks(size: int, leaf: list[int], core: list[tuple[int, set[int]]]) -> list[int]:
    rank = [0] * size
    for position, u in enumerate(leaf):
        rank[u] = position
    for position, (u, _) in enumerate(core, start=len(leaf)):
        rank[u] = position
    return rank


def _core_step(u: int, neighbours: set[int], rank: list[int], pairs: _Pairs) -> CoreStep:
    later = sorted(neighbours, key=rank.__getitem__)
    return CoreStep(
        unknown=u,
        neighbours=tuple(later),
        pairs=tuple(pairs.of(u, other) for other in later),
        fill=tuple((a, b, pairs.of(later[a], later[b])) for a in range(len(later)) for b in range(a + 1, len(later))),
    )
