"""A loop of stiff branches with a supply in it.

Stiff branches are supplies without ``R``, links and inductors without ``R``, closed switches and fuses of 0 ohm.  Around
such a loop nothing limits the current: two supplies in parallel fight, a supply across a link is shorted.  Without a
supply in the loop it is a note: the voltages are fine, but how the current shares between the branches is unknown.

    fails:  PS1 supply 12V +:A -:GND  and  PS2 supply 5V +:A -:GND
    passes: PS2 supply 5V R=100mohm +:A -:GND
"""

from __future__ import annotations

from collections.abc import Iterable

from netaudit.audit.rule import Rule, Site, about, listed
from netaudit.circuit.graph import Islands, is_stiff
from netaudit.devices.base import Device
from netaudit.finding import Finding


def find(site: Site) -> Iterable[Finding]:
    graph = site.graph
    islands = Islands(graph.on_net)
    tree: dict[str, list[tuple[str, Device]]] = {net: [] for net in graph.on_net}
    stiff = [d for d in graph.circuit.devices if is_stiff(d)]
    # supplies first: then a loop closed later by a link still shows the supply it shorts
    for device in sorted(stiff, key=lambda d: d.kind != "supply"):
        a, b = device.pins.values()
        if a == b:
            continue
        if islands.find(a) == islands.find(b):
            loop = [device, *_path(tree, a, b)]
            yield _finding(loop)
        else:
            islands.join(a, b)
            tree[a].append((b, device))
            tree[b].append((a, device))


def _path(tree: dict[str, list[tuple[str, Device]]], start: str, goal: str) -> list[Device]:
    """The devices on the tree's path between two nets."""
    came: dict[str, tuple[str, Device] | None] = {start: None}
    waiting = [start]
    while waiting:
        net = waiting.pop()
        for other, device in tree[net]:
            if other not in came:
                came[other] = (net, device)
                waiting.append(other)
    out: list[Device] = []
    step = came.get(goal)
    while step is not None:
        out.append(step[1])
        step = came[step[0]]
    return out


def _finding(loop: list[Device]) -> Finding:
    supplies = [d for d in loop if d.kind == "supply"]
    names = listed([d.name for d in loop])
    if supplies:
        text = f"nothing limits the current around the loop of {names}: give one of them a resistance, or part them"
        return Finding(RULE.name, RULE.level, text, **about(supplies[0]))
    text = f"how the current shares between {names} is unknown: give them their resistances"
    return Finding(RULE.name, "note", text, **about(loop[0]))


RULE = Rule("graph/source-loop", "error", "structure", "a loop of stiff branches with a supply in it", find)
