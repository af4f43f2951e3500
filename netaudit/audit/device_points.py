"""Point rules of kinds with a say of their own: references, regulators, transistors, amplifiers, relays."""

from __future__ import annotations

from collections.abc import Iterator

from netaudit.audit.tasks import Task
from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import Device


def device_tasks(device: Device, circuit: Circuit, regulating: frozenset[str]) -> Iterator[Task]:
    """Tasks that the device's kind brings."""
    yield from ()
