"""``stress/package-current``: what the devices of one package draw together from a rail, against the package's I_max."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from dataclasses import replace

import numpy as np

from netaudit.audit.records import Stress
from netaudit.audit.tasks import Task
from netaudit.audit.worst import Extreme
from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import Array, Device
from netaudit.finding import Finding
from netaudit.parts.part import Part
from netaudit.parts.policy import Policy
from netaudit.solve.solved import Solved

#: pins by which drivers and amplifiers hang on their rails
_RAIL_PINS = frozenset({"V", "G", "V+", "V-"})


def package_tasks(circuit: Circuit, policy: Policy, add: Callable[[Stress], None]) -> Iterator[Task]:
    """A task for every rail of every package with an I_max; its stress is handed to ``add``."""
    for name, (part, _) in circuit.packages.items():
        if "I_max" not in part.ratings:
            continue
        members = [d for d in circuit.devices if d.name.startswith(f"{name}/") and not d.missing]
        rails: dict[str, list[tuple[str, str]]] = {}
        for device in members:
            for pin, net in device.pins.items():
                if pin in _RAIL_PINS:
                    rails.setdefault(net, []).append((device.name, pin))
        for net, pins in rails.items():
            yield _task(circuit, policy, add, replace(members[0], name=name, part=part), part, net, pins)


def _task(
    circuit: Circuit,
    policy: Policy,
    add: Callable[[Stress], None],
    package: Device,
    part: Part,
    net: str,
    pins: list[tuple[str, str]],
) -> Task:
    rating = part.ratings["I_max"].nominal
    row = policy.row((part.name, package.kind), ("I_max",))
    limit = rating if row is None else float(row.limit(np.asarray(rating)))

    def drawn(board: Solved) -> Array:
        return np.asarray(np.abs(sum(board.view(device).i(pin) for device, pin in pins)))

    def verdict(extreme: Extreme, nominal: Solved) -> Iterable[Finding]:
        # findings follow from the stress, as for every other check
        add(
            Stress(
                package.name,
                "package-current",
                "A",
                float(drawn(nominal)),
                extreme.value,
                rating,
                limit,
                extreme.value / limit if limit > 0 else None,
                circuit.mode,
                extreme.corner,
                extreme.proof,
                symbol="I_max",
                row=str(row) if row is not None else "",
                origin=part.ratings["I_max"].origin,
                pin=net,
            )
        )
        return ()

    return Task(drawn, verdict)


def package_devices(circuit: Circuit) -> dict[str, Device]:
    """A device that stands for each package in findings: its name and the place of its statement."""
    out = {}
    for name, (part, place) in circuit.packages.items():
        first = next((d for d in circuit.devices if d.name.startswith(f"{name}/")), None)
        if first is not None:
            out[name] = replace(first, name=name, part=part, place=place)
    return out
