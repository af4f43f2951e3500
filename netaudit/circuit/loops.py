"""Loops of stiff branches: around them nothing limits the current, or nothing says how it shares."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from netaudit.circuit.graph import Islands, stiff_pairs
from netaudit.devices.base import Device

_Tree = dict[str, list[tuple[str, Device]]]


def stiff_loops(devices: Sequence[Device]) -> Iterable[list[Device]]:
    """One loop for each stiff branch that closes one; a branch with both ends on one net is a loop of its own.

    Supplies are laid first, so that a loop that could be told without a supply shows it.
    """
    branches = [(d, a, b) for d in devices for a, b in stiff_pairs(d)]
    islands = Islands(d.pins[pin] for d, a, b in branches for pin in (a, b))
    tree: _Tree = {}
    for device, pin_a, pin_b in sorted(branches, key=lambda branch: branch[0].kind != "supply"):
        a, b = device.pins[pin_a], device.pins[pin_b]
        if a == b:
            yield [device]
        elif islands.find(a) == islands.find(b):
            yield [device, *_path(tree, a, b)]
        else:
            islands.join(a, b)
            tree.setdefault(a, []).append((b, device))
            tree.setdefault(b, []).append((a, device))


def _path(tree: _Tree, start: str, goal: str) -> list[Device]:
    """The devices on the tree's path between two nets."""
    came: dict[str, tuple[str, Device] | None] = {start: None}
    waiting = [start]
    while waiting and goal not in came:
        net = waiting.pop()
        for other, device in tree[net]:
            if other not in came:
                came[other] = (net, device)
                waiting.append(other)
    out: list[Device] = []
    step = came[goal]
    while step is not None:
        out.append(step[1])
        step = came[step[0]]
    return out
