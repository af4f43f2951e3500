"""A current source whose current has no way back.

The current that leaves + must come back to - through something that conducts.  Where nothing joins the two sides but
other current sources, capacitors or open contacts, no voltage satisfies the circuit.  A source with a ``compliance``
ends at that voltage instead, and what a covered part draws ends without a supply; one that delivers (a negative draw)
is such a source, too.

Mend: join the two nets by what closes the circuit on the board (a load, a suppressor, the contact's other position).

Source: common practice (Kirchhoff's current law over a cut of current sources).

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        I1 current-source 10mA +:A -:GND
        C1 capacitor 1u 1:A 2:GND

    passes:
        I1 current-source 10mA +:A -:GND
        C1 capacitor 1u 1:A 2:GND
        R1 resistor 100R 1:A 2:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.devices.base import Device
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    islands = site.graph.islands
    for device in site.graph.circuit.devices:
        for a, b in _currents(device):
            start, back = device.pins[a], device.pins[b]
            if islands.find(start) != islands.find(back):
                text = (
                    f"the current of {device.name} from {start} to {back} has no way back: "
                    "join the two nets by something that conducts"
                )
                yield Finding(RULE.name, RULE.level, text, net=start, **about(device))


def _currents(device: Device) -> Iterable[tuple[str, str]]:
    """Pin pairs between which the device forces a current."""
    if device.kind == "current-source" and device.nominal("value", 0.0) != 0.0:
        yield "+", "-"
    for source, sink, current in device.draws:
        if current.nominal < 0.0:
            yield source, sink


RULE = Rule("graph/source-cut", "error", "structure", "a current source whose current has no way back", find)
