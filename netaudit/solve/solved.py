"""Solved boards: one operating point or a batch of them, and how a device shows itself there."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from netaudit.devices.base import Array, Value
from netaudit.solve.system import Index, Numbers, Overrides, System


@dataclass(frozen=True)
class Solved:
    """Solutions of one system: x (..., n), branch values u (..., m), device temperatures (..., devices) in degC.

    ``overrides`` and ``ambient`` are the values it was solved with (nominal where not named).
    """

    system: System
    num: Numbers
    x: Array
    u: Array
    temperature: Array
    ambient: Value
    overrides: Overrides = field(default_factory=dict)

    @cached_property
    def phi(self) -> Array:
        return self.num.branches.value(self.u)[0]

    @cached_property
    def handle_sums(self) -> Array:
        """Pin currents (first the pins) and the residuals of inner rows."""
        return self.system.handle_sums(self.num, self.x, self.phi)

    @cached_property
    def powers(self) -> Array:
        return self.system.powers(self.x, self.handle_sums)

    @cached_property
    def pin_voltages(self) -> Array:
        return self.system.pin_voltages(self.x)

    @cached_property
    def extended(self) -> Array:
        return self.system.extended(self.x)

    def view(self, device: str) -> DeviceView:
        """The device of that designator as it stands here."""
        return DeviceView(self, self.system.index_of[device])

    def net(self, name: str) -> Array:
        """Volts of a net against the reference."""
        return np.asarray(self.extended[..., self.system.net_position[self.system.net_of[name]]])

    def pick(self, member: int) -> Solved:
        """One member of a batch with one axis, its arrays without it."""

        def one(a: Value, axes: int) -> Array:
            a = np.asarray(a)
            return np.asarray(a[member]) if a.ndim > axes else a

        changed: Mapping[tuple[str, str], Value] = {k: one(v, 0) for k, v in self.overrides.items()}
        return Solved(
            self.system,
            self.num.single(member),
            one(self.x, 1),
            one(self.u, 1),
            one(self.temperature, 1),
            one(self.ambient, 0),
            changed,
        )


class DeviceView:
    """See ``netaudit.devices.base.View``."""

    def __init__(self, solved: Solved, number: int) -> None:
        self._solved = solved
        self._number = number
        self._device = solved.system.devices[number]
        self._pins = solved.system.pin_numbers[number]

    def v(self, pin: str) -> Array:
        return np.asarray(self._solved.pin_voltages[..., self._pins[pin]])

    def i(self, pin: str) -> Array:
        return np.asarray(self._solved.handle_sums[..., self._pins[pin]])

    @property
    def power(self) -> Array:
        return np.asarray(self._solved.powers[..., self._number])

    @property
    def temperature(self) -> Array:
        return np.asarray(self._solved.temperature[..., self._number])

    @property
    def ambient(self) -> Array:
        return np.asarray(self._solved.ambient, dtype=float)

    def value(self, name: str) -> Array:
        changed = self._solved.overrides.get((self._device.name, name))
        return np.asarray(self._device.values[name].nominal if changed is None else changed, dtype=float)

    def branch(self, k: int) -> tuple[Array, Array]:
        number = self._branches[k]
        return np.asarray(self._solved.u[..., number]), np.asarray(self._solved.phi[..., number])

    def inner(self, name: str) -> Array:
        position = self._solved.system.position[self._solved.system.inner[(self._number, name)]]
        return np.asarray(self._solved.extended[..., position])

    @cached_property
    def _branches(self) -> Index:
        return np.flatnonzero(self._solved.system.branch_device == self._number)
