"""``point/never-conducts``: LEDs that never light, and series diodes put in backwards."""

from __future__ import annotations

from collections.abc import Iterable, Sequence, Set

from netaudit.audit.context import CONDUCTS
from netaudit.circuit.circuit import Circuit
from netaudit.circuit.graph import conducting
from netaudit.devices import KINDS
from netaudit.devices.base import Device
from netaudit.finding import Finding
from netaudit.solve.point import ModeResult

_LIGHTS = frozenset({"led", "optocoupler"})


def never_conducts(results: Sequence[ModeResult], lit: Set[str]) -> Iterable[Finding]:
    """Findings over all solved modes together; ``lit``: devices known to conduct at some corner."""
    solved = [r for r in results if r.points]
    if not solved:
        return
    conducted = set(lit)
    present: dict[str, Device] = {}
    for result in solved:
        for device in result.circuit.devices:
            if device.missing or device.kind not in (*_LIGHTS, "diode"):
                continue
            present.setdefault(device.name, device)
            if any(float(p.view(device.name).i("A")) > CONDUCTS for p in result.points):
                conducted.add(device.name)
    for name, device in present.items():
        if name in conducted:
            continue
        if device.kind in _LIGHTS:
            yield _finding(device, "is it put in backwards, or never lit?")
        elif any(_alone_feeds(r.circuit, name) for r in solved if any(d.name == name for d in r.circuit.devices)):
            yield _finding(device, "other parts get current through it alone: is it put in backwards?")


def _finding(device: Device, question: str) -> Finding:
    return Finding(
        "point/never-conducts",
        "warning",
        f"{device.name} conducts in no mode (never above 10 uA): {question}",
        quantity="current",
        limit=CONDUCTS,
        unit="A",
        device=device.name,
        file=device.place.file,
        line=device.place.line,
    )


def _alone_feeds(circuit: Circuit, name: str) -> bool:
    """Whether other parts lie in a loop with a source only by way of this diode, and nothing else explains it."""
    import networkx as nx

    graph = nx.MultiGraph()
    for device in circuit.devices:
        for group in conducting(device):
            for pin in group[1:]:
                graph.add_edge(device.pins[group[0]], device.pins[pin], device=device.name)
    sources = {
        d.name for d in circuit.devices if d.kind in ("supply", "current-source") and d.words.get("state") != "off"
    }
    with_it = _in_loop(graph, sources)
    edges = [(a, b, k) for a, b, k, d in graph.edges(keys=True, data="device") if d == name]
    graph.remove_edges_from(edges)
    lost = with_it - _in_loop(graph, sources) - sources - {name}
    if not lost:
        return False
    nets = {net for d in circuit.devices if d.name in lost for net in d.pins.values()} - set(circuit.grounds)
    still = {net for d in circuit.devices if d.name in (with_it - lost - {name}) for net in d.pins.values()}
    return not any(_explains(d, nets - still) for d in circuit.devices if d.name not in lost and d.name != name)


def _explains(device: Device, nets: set[str]) -> bool:
    """A connector, control pin, capacitor or unmodelled part on one of the nets."""
    if device.kind in ("connector", "capacitor", "unmodelled") or device.missing:
        return any(net in nets for net in device.pins.values())
    return any(device.pins[pin] in nets for pin in KINDS[device.kind].controls(device))


def _in_loop(graph: object, sources: set[str]) -> set[str]:
    """Devices in a block (biconnected component) that holds a source."""
    import networkx as nx

    assert isinstance(graph, nx.MultiGraph)
    simple = nx.Graph()
    names: dict[frozenset[str], set[str]] = {}
    for a, b, device in graph.edges(data="device"):
        if a != b:
            simple.add_edge(a, b)
            names.setdefault(frozenset((a, b)), set()).add(device)
    out: set[str] = set()
    for edges in nx.biconnected_component_edges(simple):
        inside = [names[frozenset(e)] for e in edges]
        every = set().union(*inside)
        looped = len(inside) > 1 or len(every) > 1
        if looped and every & sources:
            out |= every
    return out
