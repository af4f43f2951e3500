"""A device that cannot be solved or audited.

An ``unmodelled`` part (an IC), or a part whose row and line give no model.  It carries no current in the circuit and
counts in the coverage.  A ``covered`` line says knowingly what it draws; a model makes it an audited part.

    fails:  U1 unmodelled VCC:V5 GND:GND
    passes: covered U1 "bench, 4 May" draws VCC:GND=80mA
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    for device in site.graph.circuit.devices:
        if device.covered:
            continue
        if device.kind == "unmodelled":
            text = (
                f"{device.name} has no model and counts as not audited: add covered {device.name} "
                '"why" no-current or draws PIN:PIN=current'
            )
        elif device.missing:
            text = f"{device.name} cannot be solved: {device.missing}"
        else:
            continue
        yield Finding(RULE.name, RULE.level, text, **about(device))


RULE = Rule("part/no-model", "warning", "structure", "a device without a model", find)
