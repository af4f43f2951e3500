"""A forward junction across stiff supplies with nothing that limits its current.

Two nets are stiff against each other where only supplies without ``R`` and ``limit``, regulators and converters without
``limit``, driver outputs and contacts of 0 ohm lie between them.  Junctions in series from one such net to another take
a voltage at 100 mA:

    V_100mA = sum n V_T ln(0.1 A / I_S),  for a breakdown V_Z + r_Z (0.1 A - I_Z)

Above it the exponential law asks for a current that no part survives.  A junction's own series resistance is no limit
that anybody chose, so it does not count; a resistor, a fuse or winding with its resistance, a limit of the supply does.

Mend: a resistor in series, or a current source; a ``limit`` where the supply has one.

Source: common practice; the exponential law of a junction.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 5V +:A -:GND
        D1 led I_S=1aA n=2 A:A K:GND

    passes:
        PS1 supply 5V +:A -:GND
        R1 resistor 220R 1:A 2:B
        D1 led I_S=1aA n=2 A:B K:GND
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from netaudit.audit.rule import Rule, Site, about, listed
from netaudit.circuit.graph import Graph, stiff_pairs
from netaudit.devices.base import Device
from netaudit.finding import Finding

#: the current that counts as without limit (A), kT/q at 25 degC (V), and the least drop of a junction (V)
_CURRENT, _V_T, _LEAST = 0.1, 0.0256926, 0.1
#: junctions in series that are followed, and strings looked at from one net
_LONGEST, _MOST = 40, 2000

#: pin pairs that conduct forward, by kind
_FORWARD: dict[str, tuple[tuple[str, str], ...]] = {
    "diode": (("A", "K"),),
    "led": (("A", "K"),),
    "zener": (("A", "K"),),
    "suppressor": (("A", "K"),),
    "optocoupler": (("A", "K"),),
    "bridge": (("AC1", "+"), ("AC2", "+"), ("-", "AC1"), ("-", "AC2")),
    "npn": (("B", "E"), ("B", "C")),
    "pnp": (("E", "B"), ("C", "B")),
    "nmos": (("S", "D"),),
    "pmos": (("D", "S"),),
    "njfet": (("G", "S"), ("G", "D")),
    "pjfet": (("S", "G"), ("D", "G")),
}


@dataclass(frozen=True)
class _Step:
    """One direction of a junction: to which net, the volts that it takes at 100 mA, the device."""

    net: str
    drop: float
    device: Device


def find(site: Site) -> Iterable[Finding]:
    voltages = stiff_voltages(site.graph)
    starts = voltages | _regulated(site.graph, voltages)
    steps: dict[str, list[_Step]] = {}
    for device in site.graph.circuit.devices:
        for a, b, drop in _unlimited(device):
            if device.pins[a] != device.pins[b]:
                steps.setdefault(device.pins[a], []).append(_Step(device.pins[b], drop, device))
    told: set[str] = set()
    for start in [net for net in starts if net in steps]:
        for string in _strings(steps, start, voltages):
            goal, first = string[-1].net, string[0].device
            excess = starts[start][1] - voltages[goal][1]
            if starts[start][0] == voltages[goal][0] and excess > sum(s.drop for s in string):
                if first.name not in told:
                    yield _finding(start, goal, excess, string)
                told |= {s.device.name for s in string}


def _finding(start: str, goal: str, excess: float, string: list[_Step]) -> Finding:
    devices = list(dict.fromkeys(s.device.name for s in string))
    text = (
        f"{listed(devices)} {'conducts' if len(devices) == 1 else 'conduct'} across {excess:.3g} V of stiff supplies "
        f"({start} to {goal}) and nothing limits the current: add a series resistance"
    )
    return Finding(RULE.name, RULE.level, text, net=start, value=excess, unit="V", **about(string[0].device))


def stiff_voltages(graph: Graph) -> dict[str, tuple[str, float]]:
    """Nets that stiff supplies and shorts tie together: {net: (anchor, volts above the anchor)}."""
    links: dict[str, list[tuple[str, float]]] = {}
    for device in graph.circuit.devices:
        for pin_a, pin_b, volts in _held(device):
            a, b = device.pins[pin_a], device.pins[pin_b]
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


def _held(device: Device) -> Iterator[tuple[str, str, float]]:
    """Pin pairs whose voltage the device holds whatever current flows, with the volts of the first above the second."""
    if device.missing or "limit" in device.values:
        return
    if device.kind == "supply":
        yield from ((a, b, device.nominal("value", 0.0)) for a, b in stiff_pairs(device))
    elif device.kind == "driver":
        rail = {"high": ("V", "R_high"), "low": ("G", "R_low")}.get(device.words.get("state", ""))
        if rail is not None and device.nominal(rail[1]) == 0.0:
            yield "OUT", rail[0], 0.0
    else:
        yield from ((a, b, 0.0) for a, b in stiff_pairs(device))


def _regulated(graph: Graph, voltages: dict[str, tuple[str, float]]) -> dict[str, tuple[str, float]]:
    """Outputs of regulators and converters without a limit: stiff where current is drawn, but they take none."""
    found: dict[str, tuple[str, float]] = {}
    for device in graph.circuit.devices:
        if device.kind not in ("regulator", "converter") or device.missing or "limit" in device.values:
            continue
        ground = voltages.get(device.pins["GND"])
        if ground is None or device.words.get("state") == "off" or device.pins["OUT"] in voltages:
            continue
        volts = device.nominal("value", 0.0)
        fed = voltages.get(device.pins["IN"])
        if device.kind == "regulator" and fed is not None and fed[0] == ground[0]:
            volts = max(0.0, min(volts, fed[1] - ground[1] - device.nominal("V_drop", 0.0)))
        found[device.pins["OUT"]] = (ground[0], ground[1] + volts)
    return found


def _unlimited(device: Device) -> Iterator[tuple[str, str, float]]:
    """Directions in which the device conducts without limit once more than the given voltage lies across it."""
    if device.missing or device.points or device.nominal("R_B", 0.0) > 0.0:
        return
    if device.kind in ("nmos", "pmos") and device.words.get("body") == "no":
        return
    for a, b in _FORWARD.get(device.kind, ()):
        if a in device.pins:
            yield a, b, _forward(device)
    if device.kind in ("zener", "suppressor") and "V_Z" in device.values:
        ways = (("K", "A"),) if "A" in device.pins else (("1", "2"), ("2", "1"))
        yield from ((a, b, _breakdown(device)) for a, b in ways)


def _forward(device: Device) -> float:
    """The voltage of the bare junction at 100 mA."""
    i_s, n = device.nominal("I_S", 1e-14), device.nominal("n", 1.0)
    return max(_LEAST, n * _V_T * math.log(_CURRENT / i_s)) if 0 < i_s < _CURRENT else _LEAST


def _breakdown(device: Device) -> float:
    """The voltage of a breakdown at 100 mA, by its slope at I_Z and the upper end of V_Z."""
    i_z = device.nominal("I_Z", 5e-3)
    return device.values["V_Z"].high + device.nominal("r_Z", 0.0) * max(0.0, _CURRENT - i_z)


def _strings(
    steps: dict[str, list[_Step]], start: str, voltages: dict[str, tuple[str, float]]
) -> Iterator[list[_Step]]:
    """Strings of junctions from a stiff net to the next stiff nets."""
    waiting: list[list[_Step]] = [[step] for step in steps[start]]
    seen = {start}
    looked = 0
    while waiting and looked < _MOST:
        string = waiting.pop()
        looked += 1
        net = string[-1].net
        if net in voltages:
            yield string
        elif net not in seen and len(string) < _LONGEST:
            seen.add(net)
            waiting += [[*string, step] for step in steps.get(net, ())]


RULE = Rule("graph/unlimited-junction", "error", "structure", "a junction across stiff supplies without a limit", find)
