"""A net with a single pin on it.

Usually a name written in two ways, or a wire that was forgotten.  Nets leave the board by a connector and are probed
at a test point, and a pin that stays open on purpose is written ``PIN:nc``: none of these is reported.  A pin whose
partners are not fitted in some mode only is not alone.

Mend: correct the name, add what is missing, or write ``PIN:nc``.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:OUT
        R2 resistor 1k 1:OUTT 2:GND
        R3 resistor 1k 1:OUT 2:GND

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:OUT
        R2 resistor 1k 1:nc 2:GND
        R3 resistor 1k 1:OUT 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.circuit.graph import Pin
from netaudit.finding import Finding

_MARKS = frozenset({"connector", "testpoint"})


def find(site: Site) -> Iterable[Finding]:
    alone: dict[str, Pin | None] = {}
    for graph in site.graphs:
        for net in graph.circuit.nets:
            for pin in graph.on_net[net]:
                known = alone.setdefault(net, pin)
                if known is not None and (known.device.name, known.name) != (pin.device.name, pin.name):
                    alone[net] = None
    for net, only in alone.items():
        if only is None or only.device.kind in _MARKS:
            continue
        text = (
            f"net {net} has a single pin, {only.device.name}:{only.name}: join it to something, or write "
            f"{only.name}:nc if it stays open on purpose"
        )
        yield Finding(RULE.name, RULE.level, text, net=net, pin=only.name, **about(only.device))


RULE = Rule("graph/single-pin-net", "warning", "structure", "a net with a single pin on it", find, whole=True)
