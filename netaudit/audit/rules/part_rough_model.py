"""A model that is the material's default or a generic class, not the part's own.

Its operating point is roughly right; a check near its limit is not to be trusted to the last tenth.

Mend: a row with two or three points of the data sheet (``forward``), or measured ones.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:A
        D1 diode material=silicon A:A K:GND

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:A
        D1 diode I_S=2.5nA n=1.75 A:A K:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    for device in site.graph.circuit.devices:
        if device.rough and not device.missing and not device.covered:
            text = f"{device.name}: {device.rough}, not the part's own data"
            yield Finding(RULE.name, RULE.level, text, **about(device))


RULE = Rule("part/rough-model", "note", "structure", "a model that is only a default", find)
