"""A net with a single pin on it.

Usually a name typed in two ways, or a wire that was forgotten.  Nets that leave the board do so by a connector, nets
that are probed by a test point, and a pin that stays open on purpose is written ``PIN:nc``: none of these is reported.

    fails:  R2 resistor 1k 1:OUT 2:GNDD     (nothing else is on GNDD)
    passes: R2 resistor 1k 1:OUT 2:nc
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about
from netaudit.finding import Finding

_MARKS = frozenset({"connector", "testpoint"})


def find(site: Site) -> Iterable[Finding]:
    fitted_elsewhere = {
        net for c in site.board.circuits for d in c.devices for net in d.pins.values() if d.kind in _MARKS
    }
    pins_anywhere: dict[str, set[tuple[str, str]]] = {}
    for circuit in site.board.circuits:
        for device in circuit.devices:
            for pin, net in device.pins.items():
                pins_anywhere.setdefault(net, set()).add((device.name, pin))
    for net in site.graph.circuit.nets:
        pins = site.graph.on_net[net]
        if len(pins) != 1 or net in fitted_elsewhere or len(pins_anywhere.get(net, ())) > 1:
            continue
        only = pins[0]
        if net in site.graph.circuit.grounds and len(site.graph.circuit.grounds) == 1:
            continue
        yield Finding(
            RULE.name,
            RULE.level,
            f"net {net} has a single pin, {only.device.name}:{only.name}: join it to something, or write "
            f"{only.name}:nc if it stays open on purpose",
            net=net,
            pin=only.name,
            **about(only.device),
        )


RULE = Rule("graph/single-pin-net", "warning", "structure", "a net with a single pin on it", find)
