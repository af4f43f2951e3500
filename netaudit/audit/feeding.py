"""Which parts feed a part whose current is unknown: their stresses are lower bounds."""

from __future__ import annotations

from netaudit.circuit.circuit import Circuit
from netaudit.circuit.graph import conducting


def upstream(circuit: Circuit) -> set[str]:
    """Parts on a path between a supply and a net on which an unmodelled, not covered part hangs."""
    import networkx as nx

    graph = nx.Graph()
    for device in circuit.devices:
        for group in conducting(device):
            for pin in group:
                graph.add_edge(("net", device.pins[pin]), ("part", device.name))
    grounds = {("net", net) for net in circuit.grounds}
    graph.remove_nodes_from([n for n in grounds if n in graph])
    supplies = [d for d in circuit.devices if d.kind == "supply" and d.words.get("state") != "off"]
    hungry = {
        ("net", net)
        for d in circuit.devices
        if d.kind == "unmodelled" and not d.covered
        for net in d.pins.values()
        if ("net", net) in graph
    }
    out: set[str] = set()
    for supply in supplies:
        start = ("part", supply.name)
        if start not in graph:
            continue
        for target in hungry:
            out |= _between(graph, start, target)
    return out


def _between(graph: object, start: object, target: object) -> set[str]:
    """Parts on some simple path between two nodes: those in the blocks along the block tree's path."""
    import networkx as nx

    assert isinstance(graph, nx.Graph)
    if start not in graph or target not in graph or not nx.has_path(graph, start, target):
        return set()
    joined = graph.copy()
    joined.add_edge(start, target)
    for block in nx.biconnected_components(joined):
        if start in block and target in block:
            return {name for what, name in block if what == "part"}
    return set()
