"""The linear solves inside Newton: dense for boards and batches, sparse for large circuits.

Measured on rail-heavy resistor-diode nets: LAPACK on the dense matrix wins up to about 200 unknowns (and imports
nothing); beyond, SuperLU with the MMD ordering of A^T + A, which was 4 to 8 times faster there than its default.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any, Protocol

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.system import Numbers, System

DENSE_LIMIT = 200


class Linear(Protocol):
    def solve_many(self, system: System, num: Numbers, slope: Array, right: Array) -> Array: ...

    """(J + diag(shift)) x = right for a batch; also the loaded resistance z_k = B_k J^-1 A_k of every branch when
    ``turn`` >= 0 (below: a polishing solve, zeros)."""

    def solve(
        self, system: System, num: Numbers, slope: Array, right: Array, turn: int, shift: Array | None = None
    ) -> tuple[Array, Array]: ...


class Dense:
    """LAPACK on the whole batch at once."""

    def solve_many(self, system: System, num: Numbers, slope: Array, right: Array) -> Array:
        """J^-1 of several right-hand sides a member: right (batch, k, n), the same shape back."""
        return np.swapaxes(_solve(system.jacobian(num, slope), np.swapaxes(right, -1, -2)), -1, -2)

    def solve(
        self, system: System, num: Numbers, slope: Array, right: Array, turn: int, shift: Array | None = None
    ) -> tuple[Array, Array]:
        jac = system.jacobian(num, slope)
        if shift is not None:
            jac = jac + np.diag(shift)
        if turn < 0 or system.m == 0:
            return _solve(jac, right[..., None])[..., 0], np.zeros_like(slope)
        inject = np.broadcast_to(system.injection(num), (*right.shape[:-1], system.n, system.m))
        solution = _solve(jac, np.concatenate([right[..., None], inject], axis=-1))
        columns = system.extended(np.swapaxes(solution[..., 1:], -1, -2))
        picked = columns[..., system.b_branch, system.position[system.b_column]]
        return solution[..., 0], system.sensing.spread(num.sense * picked)


def _solve(jac: Array, right: Array) -> Array:
    """Batched solve; members with a singular matrix give nan instead of spoiling the batch."""
    try:
        return np.asarray(np.linalg.solve(jac, right), dtype=float)
    except np.linalg.LinAlgError:
        if jac.ndim == 2:
            return np.full(right.shape, np.nan)
        out = np.full(right.shape, np.nan)
        for k in range(len(jac)):
            out[k] = _solve(jac[k], right[k])
        return out


@dataclass
class Sparse:
    """SuperLU for one member at a time.

    The seen resistances merely steer: they are refreshed on some turns only, and a batch, whose members are values of
    one board, takes those of its first member.
    """

    _z: Array = field(default_factory=lambda: np.zeros(0))

    def solve(
        self, system: System, num: Numbers, slope: Array, right: Array, turn: int, shift: Array | None = None
    ) -> tuple[Array, Array]:
        rows = [self._one(system, num, k, slope[k], right[k], turn, shift) for k in range(len(right))]
        return np.array([x for x, _ in rows]), np.array([z for _, z in rows])

    def _one(
        self, system: System, num: Numbers, member: int, slope: Array, right: Array, turn: int, shift: Array | None
    ) -> tuple[Array, Array]:
        one = num.single(member)
        jac = self._matrix(system, one, slope, shift)
        factor = self._factor(jac)
        if factor is None:
            return np.full(system.n, np.nan), np.zeros(system.m)
        x = factor.solve(right)
        x = x + factor.solve(right - jac @ x)
        if member == 0 and turn >= 0 and (turn < 3 or turn % 4 == 0):
            self._z = self._seen(system, one, factor)
        return x, self._z if len(self._z) == system.m else np.zeros(system.m)

    def solve_many(self, system: System, num: Numbers, slope: Array, right: Array) -> Array:
        """J^-1 of several right-hand sides a member: right (batch, k, n), the same shape back."""
        out = np.empty_like(right)
        for member in range(len(right)):
            one = num.single(member)
            factor = self._factor(self._matrix(system, one, slope[member], None))
            if factor is None:
                out[member] = np.nan
            else:
                out[member] = factor.solve(right[member].T.copy()).T
        return out

    @staticmethod
    def _matrix(system: System, num: Numbers, slope: Array, shift: Array | None) -> Any:
        import scipy.sparse as sparse

        entries = system.jacobian_entries(num, slope).reshape(-1)
        starts = np.searchsorted(system.pattern_column, np.arange(system.n + 1))
        jac = sparse.csc_array((entries, system.pattern_row, starts), shape=(system.n, system.n))
        return jac if shift is None else sparse.csc_array(jac + sparse.diags_array(shift))

    @staticmethod
    def _factor(jac: Any) -> Any:
        from scipy.sparse.linalg import splu

        try:
            return splu(jac, permc_spec="MMD_AT_PLUS_A")
        except RuntimeError:
            return None

    @staticmethod
    def _seen(system: System, num: Numbers, factor: Any) -> Array:
        import scipy.sparse as sparse

        position = system.position
        inject, sense = num.inject.reshape(-1), num.sense.reshape(-1)
        rows, columns = position[system.a_row], position[system.b_column]
        a = sparse.csc_array(
            (inject[rows >= 0], (rows[rows >= 0], system.a_branch[rows >= 0])), shape=(system.n, system.m)
        )
        kept = columns >= 0
        b = sparse.csr_array((sense[kept], (system.b_branch[kept], columns[kept])), shape=(system.m, system.n))
        z = np.empty(system.m)
        for start in range(0, system.m, 256):
            stop = min(start + 256, system.m)
            block = factor.solve(a[:, start:stop].toarray())
            z[start:stop] = np.asarray(b[start:stop].multiply(block.T).sum(axis=1)).reshape(-1)
        return z


def choose(system: System) -> Linear:
    """Dense up to DENSE_LIMIT unknowns, sparse beyond."""
    return Dense() if system.n <= DENSE_LIMIT else Sparse()
