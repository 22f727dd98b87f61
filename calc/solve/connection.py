"""Which junctions an open path joins to a reservoir."""

from __future__ import annotations

import numpy as np
from scipy.sparse import coo_array
from scipy.sparse.csgraph import connected_components

from calc.components.network import Network
from calc.solve.solution import Rows

NAMED = 5
"""Junctions named in a sentence before the rest are counted."""


def unreached(network: Network) -> Rows:
    """Return the junctions that no open path joins to a reservoir."""
    count = len(network.nodes)
    ends = (network.start[network.open], network.end[network.open])
    graph = coo_array((np.ones(len(ends[0])), ends), shape=(count, count))
    _, part = connected_components(graph, directed=False)
    fed = np.zeros(count, dtype=np.bool_)
    fed[part[~np.isnan(network.level)]] = True
    return np.flatnonzero(~fed[part])


def sentence(network: Network, junctions: Rows) -> str:
    """Return why there is no answer when some junctions are not reached; empty when all are."""
    if len(junctions) == 0:
        return ""
    names = ", ".join(network.nodes[j] for j in junctions[:NAMED])
    more = f" and {len(junctions) - NAMED} more" if len(junctions) > NAMED else ""
    word = "junction" if len(junctions) == 1 else "junctions"
    return f"no open path joins {word} {names}{more} to a reservoir, so the head there is not determined"
