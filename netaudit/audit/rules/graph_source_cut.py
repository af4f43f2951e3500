"""A current source whose current has no way back.

The current that leaves + must come back to - through something that conducts.  Where nothing joins the two sides, no
voltage satisfies the circuit.

    fails:  I1 current-source 1mA +:A -:GND  with nothing conductive between A and GND
    passes: R1 resistor 1k 1:A 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    graph = site.graph
    for device in graph.circuit.devices:
        pairs: list[tuple[str, str]] = []
        if device.kind == "current-source" and device.nominal("value", 0.0) != 0.0:
            pairs = [("+", "-")]
        elif device.draws:
            pairs = [(a, b) for a, b, q in device.draws if q.nominal != 0.0]
        for a, b in pairs:
            if graph.islands.find(device.pins[a]) != graph.islands.find(device.pins[b]):
                yield Finding(
                    RULE.name,
                    RULE.level,
                    f"the current of {device.name} from {device.pins[a]} to {device.pins[b]} has no way back: "
                    "join the two nets by something that conducts",
                    net=device.pins[a],
                    **about(device),
                )


RULE = Rule("graph/source-cut", "error", "structure", "a current source whose current has no way back", find)
