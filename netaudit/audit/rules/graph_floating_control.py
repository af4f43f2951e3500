"""A gate, base or amplifier input that nothing conductive drives or biases, in any mode.

A control pin decides what the part does.  Left floating it takes whatever voltage leakage and coupling give it.  A pull
resistor, a driver or a link to a rail gives it a level.  A contact that drives it in another mode counts as a driver.

    fails:  Q1 nmos part=N G:GATE D:LOAD S:GND   with nothing else on GATE
    passes: R9 resistor 100k 1:GATE 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.circuit.graph import Graph, conducting
from netaudit.devices import KINDS
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    if site.graph.circuit is not site.board.circuits[0]:
        return
    graphs = [site.graph, *(Graph(c) for c in site.board.circuits[1:])]
    for device in site.graph.circuit.devices:
        if device.missing:
            continue
        for pin in KINDS[device.kind].controls(device):
            net = device.pins[pin]
            if pin in device.open_pins or not any(_driven(g, device.name, net) for g in graphs):
                yield Finding(
                    RULE.name,
                    RULE.level,
                    f"{device.name}:{pin} on net {net} is driven by nothing in any mode: "
                    "give it a level with a resistor to a rail or a driver",
                    net=None if pin in device.open_pins else net,
                    pin=pin,
                    **about(device),
                )


def _driven(graph: Graph, device: str, net: str) -> bool:
    """Whether something else that conducts, or leaves the board, is on the net."""
    for pin in graph.on_net.get(net, ()):
        if pin.device.kind in ("connector", "unmodelled") or pin.device.kind == "current-source":
            return True
        if net in graph.circuit.grounds:
            return True
        controls = () if pin.device.missing else KINDS[pin.device.kind].controls(pin.device)
        conducts = any(pin.name in group for group in conducting(pin.device))
        if pin.device.name != device and conducts and pin.name not in controls:
            return True
        # a part may bias itself: its own conducting pin tied to its control pin
        if pin.device.name == device and conducts and pin.name not in controls:
            return True
    return False


RULE = Rule("graph/floating-control", "error", "structure", "a control pin that nothing drives", find)
