"""A part with all its pins on one net.

It does nothing, so either a net name is wrong or the part is left over.

    fails:  R2 resistor 1k 1:VIN 2:VIN
    passes: R2 resistor 1k 1:VIN 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    for device in site.graph.circuit.devices:
        if (
            len(device.pins) > 1
            and len(set(device.pins.values())) == 1
            and device.kind not in ("connector", "testpoint")
        ):
            net = next(iter(device.pins.values()))
            yield Finding(
                RULE.name,
                RULE.level,
                f"all pins of {device.name} are on net {net}: correct a net, or leave the part out",
                net=net,
                **about(device),
            )


RULE = Rule("graph/bridged-part", "warning", "structure", "a part with all its pins on one net", find)
