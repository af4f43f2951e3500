"""Two reference nets in one conductively connected part of the circuit.

Each ``ground`` holds its net at 0 V.  Two of them in one connected part are a short between the two nets that the board
does not have.  Keep one, and join the nets by what joins them on the board (a link, a resistor).

    fails:  ground GND  ground AGND  with R1 resistor 10R 1:GND 2:AGND
    passes: ground GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    graph = site.graph
    seen: dict[str, str] = {}
    for net in graph.circuit.grounds:
        island = graph.islands.find(net)
        if island not in seen:
            seen[island] = net
            continue
        pin = next(iter(graph.on_net[net]), None)
        yield Finding(
            RULE.name,
            RULE.level,
            f"grounds {seen[island]} and {net} are joined by parts that conduct: keep one ground statement",
            net=net,
            file=pin.device.place.file if pin else None,
            line=pin.device.place.line if pin else None,
        )


RULE = Rule("graph/joined-grounds", "error", "structure", "two references in one connected part", find)
