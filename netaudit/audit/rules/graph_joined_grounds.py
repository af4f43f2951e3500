"""Two reference nets in one conductively connected part of the circuit.

Every ``ground`` holds its net at 0 V.  Two of them in one connected part act as a short between the two nets that the
board does not have, and currents through it are not seen.

Mend: keep one ``ground`` for each galvanically separate part, and join the nets by what joins them on the board (a
link, a resistor).

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        ground AGND
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:AGND
        R2 resistor 10R 1:AGND 2:GND

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:AGND
        R2 resistor 10R 1:AGND 2:GND
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
