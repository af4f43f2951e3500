"""A forward junction across stiff supplies with nothing that limits its current.

The difference of two stiff nets (supplies without ``R`` and without ``limit``, and shorts) forward biases a junction by
more than the string takes at 100 mA, and no resistance stands in the path (a junction's own series resistance is no
limit that anybody chose).  The exponential law would ask for a current that no part survives, so such a mode is not
solved to that figure but named here.

    fails:  PS1 supply 12V +:A -:GND  and  D1 led part=L A:A K:GND
    passes: a resistor in series
"""

from __future__ import annotations

import math
from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about, listed
from netaudit.circuit.graph import Graph, is_stiff
from netaudit.devices.base import Device
from netaudit.finding import Finding

#: forward voltage of a junction below which nothing is said, the current that counts as without limit, and kT/q at 25 degC
_LEAST, _CURRENT, _V_T = 0.1, 0.1, 0.0256926
_LONGEST = 24


def find(site: Site) -> Iterable[Finding]:
    voltages = stiff_voltages(site.graph)
    edges: dict[str, list[tuple[str, float, Device]]] = {}
    for device in site.graph.circuit.devices:
        for a, b, drop in _unlimited(device):
            edges.setdefault(device.pins[a], []).append((device.pins[b], drop, device))
    told: set[str] = set()
    for start in [net for net in voltages if net in edges]:
        for goal, drop, path in _strings(edges, start, voltages):
            excess = voltages[start][1] - voltages[goal][1]
            if voltages[start][0] != voltages[goal][0] or excess < drop or path[0].name in told:
                continue
            told |= {d.name for d in path}
            names = listed([d.name for d in path])
            yield Finding(
                RULE.name,
                RULE.level,
                f"{names} {'is' if len(path) == 1 else 'are'} forward across {excess:.3g} V of stiff supplies "
                f"({start} to {goal}) and nothing limits the current: add a series resistance",
                net=start,
                value=excess,
                unit="V",
                **about(path[0]),
            )


def stiff_voltages(graph: Graph) -> dict[str, tuple[str, float]]:
    """Nets that stiff supplies and shorts tie together: {net: (anchor, volts above the anchor)}."""
    links: dict[str, list[tuple[str, float]]] = {}
    for device in graph.circuit.devices:
        if not is_stiff(device) or (device.kind == "supply" and "limit" in device.values):
            continue
        a, b = device.pins.values()
        volts = device.nominal("value", 0.0) if device.kind == "supply" else 0.0
        links.setdefault(b, []).append((a, volts))
        links.setdefault(a, []).append((b, -volts))
    found: dict[str, tuple[str, float]] = {}
    for anchor in [*graph.circuit.grounds, *links]:
        if anchor in found:
            continue
        found[anchor] = (anchor, 0.0)
        waiting = [anchor]
        while waiting:
            net = waiting.pop()
            for other, volts in links.get(net, ()):
                if other not in found:
                    found[other] = (anchor, found[net][1] + volts)
                    waiting.append(other)
    return found


def _unlimited(device: Device) -> list[tuple[str, str, float]]:
    """Directions in which the device conducts without limit once more than the given voltage lies across it.

    A junction's own series resistance is no limit that anybody chose, so it does not count.
    """
    if device.missing or device.points:
        return []
    drop = _drop(device)
    kind, no_body = device.kind, device.words.get("body") == "no"
    pairs: dict[str, tuple[tuple[str, str], ...]] = {
        "diode": (("A", "K"),),
        "led": (("A", "K"),),
        "zener": (("A", "K"),),
        "suppressor": (("A", "K"),) if "A" in device.pins else (),
        "optocoupler": (("A", "K"),),
        "bridge": (("AC1", "+"), ("AC2", "+"), ("-", "AC1"), ("-", "AC2")),
        "npn": (("B", "E"), ("B", "C")),
        "pnp": (("E", "B"), ("C", "B")),
        "nmos": () if no_body else (("S", "D"),),
        "pmos": () if no_body else (("D", "S"),),
        "njfet": (("G", "S"), ("G", "D")),
        "pjfet": (("S", "G"), ("D", "G")),
    }
    limited = device.nominal("R_B", 0.0) > 0.0
    return [] if limited else [(a, b, drop) for a, b in pairs.get(kind, ())]


def _drop(device: Device) -> float:
    """The voltage of the bare junction at 100 mA: n V_T ln(0.1 A / I_S)."""
    i_s, n = device.nominal("I_S", 1e-14), device.nominal("n", 1.0)
    return max(_LEAST, n * _V_T * math.log(_CURRENT / i_s)) if 0 < i_s < _CURRENT else _LEAST


def _strings(
    edges: dict[str, list[tuple[str, float, Device]]], start: str, voltages: dict[str, tuple[str, float]]
) -> Iterable[tuple[str, float, list[Device]]]:
    """Strings of junctions from a stiff net to the next stiff nets, with the voltage they take."""
    waiting: list[tuple[str, float, list[Device]]] = [(start, 0.0, [])]
    seen = {start}
    while waiting:
        net, drop, path = waiting.pop()
        for other, more, device in edges.get(net, ()):
            if device in path or len(path) >= _LONGEST:
                continue
            if other in voltages:
                yield other, drop + more, [*path, device]
            elif other not in seen:
                seen.add(other)
                waiting.append((other, drop + more, [*path, device]))


RULE = Rule("graph/unlimited-junction", "error", "structure", "a junction across stiff supplies without a limit", find)
