"""A net called ``NC`` or ``"nc"`` that joins two pins or more.

A bare ``nc`` leaves each pin open by itself.  ``NC`` in capitals, or ``"nc"`` in quotes, is a net like others: pins that
were meant to stay open would be joined.

Mend: write ``nc`` without quotes for pins that stay open, or give the net a name that says what it is.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:GND
        S1 switch open 1:VIN 2:NC
        S2 switch open 1:VIN 2:NC

    passes:
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:GND
        S1 switch open 1:VIN 2:nc
        S2 switch open 1:VIN 2:nc
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about, listed
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    for net, pins in site.graph.on_net.items():
        # within a block the net is called A1/NC
        if len(pins) > 1 and net.rpartition("/")[2] in ("NC", "nc"):
            names = listed(f"{p.device.name}:{p.name}" for p in pins)
            text = f"net {net} joins {names}: write nc without quotes to leave each open, or give the net another name"
            yield Finding(RULE.name, RULE.level, text, net=net, **about(pins[0].device))


RULE = Rule("graph/nc-net", "warning", "structure", 'a net "NC" that joins pins meant to stay open', find)
