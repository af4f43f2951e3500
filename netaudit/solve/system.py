"""A circuit as arrays: G x + A phi(B x) - s = 0 with the structure fixed and the numbers in arrays of any batch shape.

x holds the node voltages (reference nets left out) and the extra unknowns.  Every device writes its stamps once for the
structure; further calls give numbers for other values, temperatures or whole batches.  A handle is a pin, an inner node
or an extra unknown; sums over a device's own handles give its pin currents on a path that knows nothing of the matrix.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from netaudit.circuit.circuit import Circuit
from netaudit.devices import KINDS
from netaudit.devices.base import Array, Device, Value, Values
from netaudit.devices.families import Family
from netaudit.solve.branches import BranchGroups
from netaudit.solve.record import Recorder, stack
from netaudit.solve.reference import carried, references, shared
from netaudit.solve.segment import SegmentSum

Index = NDArray[np.intp]
Overrides = Mapping[tuple[str, str], Value]

#: stamped in place of 0 in loops of shorts (ohm): far below any real contact, far above the rounding of a voltage
_SHARED_OHMS = 1e-6


@dataclass(frozen=True)
class Numbers:
    """The numbers of one evaluation: entries of G, s, A, B and the branch parameters; leading axes are the batch."""

    g: Array
    s: Array
    inject: Array
    sense: Array
    branches: BranchGroups
    batch: tuple[int, ...]

    def take(self, rows: Index) -> Numbers:
        """The numbers of some members of a batch with one axis."""

        def pick(a: Array) -> Array:
            return a[rows] if a.ndim > 1 else a

        groups = tuple((f, i, {k: pick(v) for k, v in p.items()}) for f, i, p in self.branches.groups)
        return replace(
            self,
            g=pick(self.g),
            s=pick(self.s),
            inject=pick(self.inject),
            sense=pick(self.sense),
            branches=BranchGroups(groups, self.branches.m),
            batch=(len(rows),),
        )

    def single(self, member: int) -> Numbers:
        """The numbers of one member, every array without the batch axis."""
        one = self.take(np.array([member])) if self.batch else self
        groups = tuple((f, i, {k: v.reshape(-1) for k, v in p.items()}) for f, i, p in one.branches.groups)
        return Numbers(
            one.g.reshape(-1), one.s.reshape(-1), one.inject.reshape(-1), one.sense.reshape(-1),
            BranchGroups(groups, self.branches.m), (),
        )  # fmt: skip


class System:
    """The compiled form of one circuit (one mode)."""

    def __init__(self, circuit: Circuit) -> None:
        self.circuit = circuit
        self.devices: tuple[Device, ...] = tuple(d for d in circuit.devices if not d.missing)
        self.index_of = {d.name: k for k, d in enumerate(self.devices)}
        self.pins: list[tuple[int, str]] = [(k, p) for k, d in enumerate(self.devices) for p in d.pins]
        self.pin_numbers: list[dict[str, int]] = [{} for _ in self.devices]
        for number, (k, p) in enumerate(self.pins):
            self.pin_numbers[k][p] = number
        self.nets: list[str] = list(dict.fromkeys([*circuit.nets, *(d.pins[p] for d in self.devices for p in d.pins)]))
        self.net_of = {net: k for k, net in enumerate(self.nets)}
        self.pin_net: Index = np.array([self.net_of[self.devices[k].pins[p]] for k, p in self.pins], dtype=np.intp)
        self.reference_nets = references(circuit, self.devices, self.nets)
        self.carry = carried(self.devices)
        self.shared = shared(self.devices)
        self._structure(self._stamp({}, None, None))

    def _stamp(self, overrides: Overrides, temperature: Array | None, ambient: Value | None) -> Recorder:
        """All devices' stamps with the given values (nominal where not given)."""
        record = Recorder(len(self.pins))
        air: Value = self.circuit.ambient.nominal if ambient is None else ambient
        changed: dict[str, dict[str, Value]] = {}
        for (owner, name), value in overrides.items():
            changed.setdefault(owner, {})[name] = value
        for k, device in enumerate(self.devices):
            numbers: dict[str, Value] = {name: q.nominal for name, q in device.values.items()}
            numbers.update(changed.get(device.name, {}))
            t: Value = air if temperature is None else temperature[..., k]
            least = _SHARED_OHMS if device.name in self.shared else 0.0
            record.begin(k, self.pin_numbers[k], device.name in self.carry, least)
            KINDS[device.kind].stamp(device, Values(numbers, t, air), record)
        return record

    def _structure(self, record: Recorder) -> None:
        """Index arrays, from the first stamping."""
        pins = len(self.pins)
        handles = pins + len(record.inner_names)
        self.inner = {key: pins + k for k, key in enumerate(record.inner_names)}
        self.handle_device: Index = np.array(
            [k for k, _ in self.pins] + [k for k, _ in record.inner_names], dtype=np.intp
        )
        free = [k for k, net in enumerate(self.nets) if net not in self.reference_nets]
        position = np.full(len(self.nets), -1, dtype=np.intp)
        position[free] = np.arange(len(free))
        inner = len(free) + np.arange(len(record.inner_names), dtype=np.intp)
        self.position = np.concatenate([position[self.pin_net], inner]) if handles else np.zeros(0, dtype=np.intp)
        self.net_position = position
        self.n = len(free) + len(record.inner_names)
        self.is_node = np.concatenate([np.ones(len(free), dtype=bool), np.array(record.inner_is_node, dtype=bool)])
        self.m = len(record.families)
        self.families = record.families
        self.start = np.array(record.starts, dtype=float)
        self.branch_device: Index = np.array(record.branch_device, dtype=np.intp)
        self.g_row = _ints(record.rows)
        self.g_column = _ints(record.columns)
        self.s_row = _ints(record.source_rows)
        self.a_branch, self.a_row = _ints([k for k, _, _ in record.inject]), _ints([r for _, r, _ in record.inject])
        self.b_branch, self.b_column = _ints([k for k, _, _ in record.sense]), _ints([c for _, c, _ in record.sense])
        self._groups()
        self._sums(handles)

    def _groups(self) -> None:
        """Branches of one family side by side."""
        by_family: dict[Family, list[int]] = {}
        for k, family in enumerate(self.families):
            by_family.setdefault(family, []).append(k)
        self.groups = [(family, _ints(ks)) for family, ks in by_family.items()]

    def _sums(self, handles: int) -> None:
        """The segment sums of balance, residual, right-hand side, Jacobian and sensing."""
        self.balance = SegmentSum(np.concatenate([self.g_row, self.a_row, self.s_row]), handles)
        self.to_rows = SegmentSum(self.position, self.n)
        self.to_devices = SegmentSum(self.handle_device[: len(self.pins)], len(self.devices))
        self.to_nets = SegmentSum(self.pin_net, len(self.nets))
        rows = self.position
        self.right = SegmentSum(np.concatenate([rows[self.s_row], rows[self.a_row]]), self.n)
        self.sensing = SegmentSum(self.b_branch, self.m)
        starts = np.searchsorted(self.b_branch, np.arange(self.m))
        ends = np.searchsorted(self.b_branch, np.arange(self.m), side="right")
        pairs = [(a, b) for a, k in enumerate(self.a_branch) for b in range(starts[k], ends[k])]
        self.pair_a, self.pair_b = _ints([a for a, _ in pairs]), _ints([b for _, b in pairs])
        row = np.concatenate([rows[self.g_row], rows[self.a_row[self.pair_a]]])
        column = np.concatenate([rows[self.g_column], rows[self.b_column[self.pair_b]]])
        # by column, then row: the order of compressed sparse columns
        self.pattern = SegmentSum(np.where((row < 0) | (column < 0), -1, column * self.n + row), self.n * self.n)
        self.pattern_row = self.pattern.present % max(self.n, 1)
        self.pattern_column = self.pattern.present // max(self.n, 1)
        self.a_flat = SegmentSum(
            np.where(rows[self.a_row] < 0, -1, rows[self.a_row] * self.m + self.a_branch), self.n * self.m
        )

    def numbers(
        self,
        overrides: Overrides | None = None,
        temperature: Array | None = None,
        ambient: Value | None = None,
        batch: tuple[int, ...] = (),
    ) -> Numbers:
        """Numbers for changed values (by designator and name), device temperatures (..., devices) and ambient (degC)."""
        r = self._stamp(overrides or {}, temperature, ambient)
        groups = []
        for family, ks in self.groups:
            parameters = {p: stack([r.parameters[k][p] for k in ks], batch) for p in family.parameters}
            groups.append((family, ks, parameters))
        return Numbers(
            stack(r.g, batch),
            stack(r.s, batch),
            stack([c for _, _, c in r.inject], batch),
            stack([c for _, _, c in r.sense], batch),
            BranchGroups(tuple(groups), self.m),
            batch,
        )

    def extended(self, x: Array) -> Array:
        """x with a zero appended, so that the reference's position -1 reads 0 V."""
        return np.concatenate([x, np.zeros((*x.shape[:-1], 1), dtype=x.dtype)], axis=-1)

    def sense(self, num: Numbers, x: Array) -> Array:
        """u = B x, shape (..., m)."""
        return self.sensing.spread(num.sense * self.extended(x)[..., self.position[self.b_column]])

    def contributions(self, num: Numbers, x: Array, phi: Array) -> Array:
        """Every single term of every balance, in the order of ``balance``: shape (..., terms)."""
        shape = np.broadcast_shapes(x.shape[:-1], num.g.shape[:-1], num.s.shape[:-1], num.inject.shape[:-1])
        linear = num.g * self.extended(x)[..., self.position[self.g_column]]
        parts = [linear, num.inject * phi[..., self.a_branch], -num.s]
        return np.concatenate([np.broadcast_to(p, (*shape, p.shape[-1])) for p in parts], axis=-1)

    def handle_sums(self, num: Numbers, x: Array, phi: Array) -> Array:
        """The balance of every handle: for a pin the current into it, for an inner row its residual."""
        return self.balance.spread(self.contributions(num, x, phi))

    def residual(self, num: Numbers, x: Array, phi: Array) -> Array:
        """F(x), shape (..., n)."""
        return self.to_rows.spread(self.handle_sums(num, x, phi))

    def jacobian_entries(self, num: Numbers, slope: Array) -> Array:
        """The nonzeros of J = G + A diag(phi') B in the order of ``pattern``."""
        pairs = num.inject[..., self.pair_a] * num.sense[..., self.pair_b] * slope[..., self.a_branch[self.pair_a]]
        g = np.broadcast_to(num.g, (*pairs.shape[:-1], num.g.shape[-1]))
        return self.pattern.sums(np.concatenate([g, pairs], axis=-1))

    def jacobian(self, num: Numbers, slope: Array) -> Array:
        """J as dense matrices, shape (..., n, n)."""
        entries = self.jacobian_entries(num, slope)
        out = np.zeros((*entries.shape[:-1], self.n * self.n))
        out[..., self.pattern_row * self.n + self.pattern_column] = entries
        return out.reshape(*entries.shape[:-1], self.n, self.n)

    def injection(self, num: Numbers) -> Array:
        """A as dense matrices, shape (..., n, m)."""
        return self.a_flat.spread(num.inject).reshape(*num.inject.shape[:-1], self.n, self.m)

    def right_side(self, num: Numbers, phi: Array, slope: Array, u: Array) -> Array:
        """s - A (phi - phi' u): the right-hand side of a Newton step taken from branch values u."""
        known = num.inject * (slope * u - phi)[..., self.a_branch]
        s = np.broadcast_to(num.s, (*known.shape[:-1], num.s.shape[-1]))
        return self.right.spread(np.concatenate([s, known], axis=-1))

    def pin_voltages(self, x: Array) -> Array:
        """Volts at every pin, shape (..., pins)."""
        return self.extended(x)[..., self.position[: len(self.pins)]]

    def powers(self, x: Array, handle_sums: Array) -> Array:
        """Watts that each device turns into heat: the sum over its pins of voltage times current into the pin."""
        pins = len(self.pins)
        return self.to_devices.spread(self.pin_voltages(x) * handle_sums[..., :pins])


def _ints(values: list[int]) -> Index:
    return np.array(values, dtype=np.intp)
