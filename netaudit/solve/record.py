"""What the devices stamp, collected: first the structure with the numbers, afterwards numbers alone."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from netaudit.devices.base import Array, Terms, Value
from netaudit.devices.families import Family


class Recorder:
    """An Assembly that collects the stamps of all devices, one device after the other.

    Handles are global: a pin's number, or the number of pins plus that of an inner node or extra unknown.
    """

    def __init__(self, pin_count: int) -> None:
        self.pin_count = pin_count
        self.inner_names: list[tuple[int, str]] = []
        self.inner_is_node: list[bool] = []
        self.rows: list[int] = []
        self.columns: list[int] = []
        self.g: list[Value] = []
        self.source_rows: list[int] = []
        self.s: list[Value] = []
        self.families: list[Family] = []
        self.branch_device: list[int] = []
        self.inject: list[tuple[int, int, Value]] = []
        self.sense: list[tuple[int, int, Value]] = []
        self.parameters: list[dict[str, Value]] = []
        self.starts: list[float] = []
        self._pins: dict[str, int] = {}
        self._inner: dict[tuple[int, str], int] = {}
        self._device = -1
        self.carry = False
        self.least = 0.0

    def begin(self, device: int, pins: dict[str, int], carry: bool, least: float) -> None:
        """The next device: its number, its pins' numbers, whether its resistance needs a current unknown, and the least
        resistance that it is stamped with."""
        self._device, self._pins, self.carry, self.least = device, pins, carry, least

    @property
    def carry_current(self) -> bool:
        return self.carry

    @property
    def least_ohms(self) -> float:
        return self.least

    def pin(self, name: str) -> int:
        return self._pins[name]

    def _add_inner(self, name: str, is_node: bool) -> int:
        key = (self._device, name)
        if key not in self._inner:
            self._inner[key] = self.pin_count + len(self.inner_names)
            self.inner_names.append(key)
            self.inner_is_node.append(is_node)
        return self._inner[key]

    def node(self, name: str) -> int:
        return self._add_inner(name, True)

    def unknown(self, name: str) -> int:
        return self._add_inner(name, False)

    def add(self, row: int, column: int, value: Value) -> None:
        self.rows.append(row)
        self.columns.append(column)
        self.g.append(value)

    def source(self, row: int, value: Value) -> None:
        self.source_rows.append(row)
        self.s.append(value)

    def branch(self, family: Family, inject: Terms, sense: Terms, *, start: Value = 0.0, **parameters: Value) -> None:
        k = len(self.families)
        self.starts.append(float(np.asarray(start).reshape(-1)[0]))
        self.families.append(family)
        self.branch_device.append(self._device)
        self.parameters.append(parameters)
        self.inject.extend((k, row, c) for row, c in inject)
        self.sense.extend((k, column, c) for column, c in sense)


def stack(values: Sequence[Value], batch: tuple[int, ...]) -> Array:
    """Numbers with or without batch axes side by side in a last axis: shape (..., len(values))."""
    if not any(isinstance(v, np.ndarray) and v.ndim for v in values):
        return np.array([float(v) for v in values], dtype=float)
    out = np.empty((*batch, len(values)))
    for k, v in enumerate(values):
        out[..., k] = v
    return out
