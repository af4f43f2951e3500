"""A net called ``NC`` or ``"nc"`` that joins two pins or more.

A bare ``nc`` leaves each pin open by itself.  ``NC`` in capitals, or ``"nc"`` in quotes, is a net like others: pins that
were meant to stay open would be joined.

    fails:  U1 unmodelled 7:NC 8:NC
    passes: U1 unmodelled 7:nc 8:nc
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about, listed
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    for net in ("NC", "nc"):
        pins = site.graph.on_net.get(net, [])
        if len(pins) > 1:
            names = listed(f"{p.device.name}:{p.name}" for p in pins)
            yield Finding(
                RULE.name,
                RULE.level,
                f"net {net} joins {names}: write nc without quotes to leave each open, or give the net another name",
                net=net,
                **about(pins[0].device),
            )


RULE = Rule("graph/nc-net", "warning", "structure", 'a net "NC" that joins pins meant to stay open', find)
