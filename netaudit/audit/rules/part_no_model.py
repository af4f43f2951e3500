"""A device that cannot be solved or audited.

An ``unmodelled`` part (an IC), or a part whose row and line give no model.  It carries no current in the circuit and
counts in the coverage as not audited.

Mend: a model makes it an audited part; a ``covered`` line says knowingly what it draws, or that it draws nothing.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 10R 1:VIN 2:VCC
        U1 unmodelled VCC:VCC GND:GND

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 10R 1:VIN 2:VCC
        U1 unmodelled VCC:VCC GND:GND
        covered U1 "measured on the bench" draws VCC:GND=80mA
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    for device in site.graph.circuit.devices:
        if device.covered or not (device.missing or device.kind == "unmodelled"):
            continue
        text = f"{device.name} cannot be solved: {device.missing}"
        if device.kind == "unmodelled":
            text = (
                f"{device.name} has no model and counts as not audited: add covered {device.name} "
                '"why" no-current, or draws PIN:PIN=current'
            )
        yield Finding(RULE.name, RULE.level, text, **about(device))


RULE = Rule("part/no-model", "warning", "structure", "a device without a model", find)
