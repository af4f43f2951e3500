"""A loop of stiff branches with a supply in it.

Stiff branches are supplies without ``R``, links and inductors without ``R``, closed switches and relay contacts without
``R_on``, fuses without ``R``, resistors of 0 ohm.  Around such a loop nothing limits the current: two supplies in
parallel fight over a difference of microvolts, a supply across a link is shorted.  Without a supply in the loop it is a
note only: the voltages are fine, but how the current shares between the branches is unknown.

Mend: give one of them the resistance that it has, or part them.

Source: common practice (a loop of voltage sources contradicts itself or leaves its current open).

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:A -:GND
        PS2 supply 12V +:A -:GND
        R1 resistor 1k 1:A 2:GND

    passes:
        PS1 supply 12V +:A -:GND
        PS2 supply 12V R=100mohm sinks=1A +:A -:GND
        R1 resistor 1k 1:A 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about, listed
from netaudit.circuit.loops import stiff_loops
from netaudit.devices.base import Device
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    shorted: dict[str, list[list[Device]]] = {}
    for loop in stiff_loops(site.graph.circuit.devices):
        supply = next((d for d in loop if d.kind == "supply"), None)
        if len(loop) == 1 and (supply is None or supply.nominal("value", 0.0) == 0.0):
            # both ends on one net: a part without effect, which graph/bridged-part names
            continue
        if supply is None:
            names = listed(d.name for d in loop)
            text = f"how the current shares between {names} is unknown: give them their resistances"
            yield Finding(RULE.name, "note", text, **about(loop[0]))
        else:
            shorted.setdefault(supply.name, []).append(loop)
    for loops in shorted.values():
        supply = next(d for d in loops[0] if d.kind == "supply")
        said = " and of ".join(listed(d.name for d in loop) for loop in loops[:3])
        text = f"nothing limits the current around the loop of {said}: give one of them a resistance, or part them"
        if loops == [[supply]]:
            text = f"supply {supply.name} is shorted: both its pins are on net {supply.pins['+']}"
        yield Finding(RULE.name, RULE.level, text, **about(supply))


RULE = Rule("graph/source-loop", "error", "structure", "a loop of stiff branches with a supply in it", find)
