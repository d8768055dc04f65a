"""Openings of spools that a commanded speed needs.

The solver holds an asked speed as an upper bound on the actuator's flow; the bound's multiplier is the pressure that
is left over at the actuator with the spool as far open as it may. The spool throttles that pressure away on both its
edges: where all the oil of the edges is that of the actuator, the flows stay and only the pressures between spool and
actuator move, so that the opening is explicit, x = x_max sqrt((a + b) / (a + b + z)) with a and b the drops of the
wide-open edges, referred to the inlet.
"""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass

import numpy as np

from heataudit.network.branches import Branches, Flags, MovePath
from heataudit.network.linear import Array
from heataudit.network.spread import Spread
from heataudit.network.topology import Pattern, Topology, reached

EXCESS = 1e-3
"""Pressure [Pa] below which nothing is left over at an actuator."""


@dataclass(frozen=True)
class Throttled:
    """How far spools are closed from where they may stand.

    `share` [-] is the opening as a share of the allowed one, `open_way` tells where the oil of the spool's edges is not
    that of the actuator alone, so that the share is not explicit; both of shape (paths, phases).
    """

    share: Array
    open_way: Flags


def throttle(branches: Branches, topology: Topology, paths: tuple[MovePath, ...], state: Spread) -> Throttled:
    """Move what is left over at the actuators to the edges of their spools, in place."""
    result = Throttled(np.ones((len(paths), branches.phases)), np.zeros((len(paths), branches.phases), bool))
    for pattern in topology.patterns:
        alive = {k for chain in pattern.chains for k, _ in chain.items}
        for number, path in enumerate(paths):
            if path.branch in alive and (path.feed >= 0 or path.back >= 0):
                _throttle_path(branches, pattern, alive, path, number, state, result)
    return result


def _throttle_path(
    branches: Branches, pattern: Pattern, alive: set[int], path: MovePath, number: int, state: Spread,
    result: Throttled,
) -> None:  # fmt: skip
    k, rows = path.branch, pattern.rows
    excess = state.drop[k, rows] - branches.constant[k, rows]
    left_over = (excess > EXCESS) & (state.flow[k, rows] > 0)
    if not left_over.any():
        return
    regions = _regions(branches, alive, path)
    if regions is None:
        result.open_way[number, rows] = left_over
        return
    zero = np.zeros(len(rows))
    feed = state.drop[path.feed, rows] if path.feed in alive else zero
    back = state.drop[path.back, rows] if path.back in alive else zero
    factor = np.where(left_over, 1.0 + excess / np.maximum(feed + branches.gain[k, rows] * back, 1e-9), 1.0)
    result.share[number, rows] = 1.0 / np.sqrt(factor)
    state.drop[k, rows] -= np.where(left_over, excess, 0.0)
    shifts = ((path.feed, regions[0], (1.0 - factor) * feed), (path.back, regions[1], (factor - 1.0) * back))
    for edge, region, shift in shifts:
        if edge in alive:
            state.drop[edge, rows] *= factor
            for node in region:
                state.pressure[node, rows] += shift


def _regions(branches: Branches, alive: set[int], path: MovePath) -> tuple[set[int], set[int]] | None:
    """Nodes between the spool's feed edge and the actuator, and between the actuator and the return edge.

    None where a way other than the spool's edges leads into or out of them.
    """
    item = branches.items[path.branch]
    around: dict[int, set[int]] = defaultdict(set)
    for k in alive - {path.branch, path.feed, path.back}:
        around[int(branches.start[k])].add(int(branches.end[k]))
        around[int(branches.end[k])].add(int(branches.start[k]))
    outside = {0} | {injection.node for injection in branches.injections}
    for k in (path.feed, path.back):
        if k in alive:
            outside.add(int(branches.start[k] if k == path.feed else branches.end[k]))
    feed_side = reached(around, item.start) if path.feed in alive else set[int]()
    back_side = reached(around, item.end) if path.back in alive else set[int]()
    if feed_side & (outside | back_side) or back_side & outside:
        return None
    if path.feed in alive and int(branches.end[path.feed]) not in feed_side:
        return None
    if path.back in alive and int(branches.start[path.back]) not in back_side:
        return None
    return feed_side, back_side
