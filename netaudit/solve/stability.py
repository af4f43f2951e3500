"""Whether an operating point persists.

With capacitances C at the nodes the circuit moves by C dv/dt = -F(v).  After elimination of the rows without a
capacitance (branch currents, limits) that is C dv/dt = -S v near a point, S the Schur complement of J.

False only where it is proven for every positive C: det S < 0 where a passive circuit has det S > 0 (Green and Willson,
IEEE Trans. CAS-I 39(4), 1992: the product of the growth rates is then negative whatever C), or S symmetric with a
negative eigenvalue (C^-1/2 S C^-1/2 has one too, by Sylvester's law of inertia).  True where the symmetric part of S is
positive definite, or where the point decays with equal capacitances at every node.  Else undecided.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array

_SYMMETRIC = 1e-9


@dataclass(frozen=True)
class Stability:
    """``stable`` True, False or None (undecided) and the sentence that says why."""

    stable: bool | None
    because: str


def stability(jacobian: Array, is_node: np.ndarray) -> Stability:
    """From the dense J (n, n) of a point and which unknowns are node voltages."""
    s = reduced(jacobian, is_node)
    if s is None:
        return Stability(None, "not decided: some rows cannot be eliminated")
    if s.size == 0:
        return Stability(True, "every net is held by a supply")
    size = np.sqrt(np.abs(np.diag(s)) + 1e-300)
    scaled = s / np.outer(size, size)
    sign, log = np.linalg.slogdet(scaled)
    symmetric = float(np.abs(scaled - scaled.T).max()) <= _SYMMETRIC * float(np.abs(scaled).max())
    lowest = float(np.linalg.eigvalsh(0.5 * (scaled + scaled.T)).min())
    if symmetric and lowest < -1e-9:
        return Stability(
            False, "a small push grows whatever the capacitances (symmetric Jacobian, negative eigenvalue)"
        )
    if sign < 0 and log > -200:
        return Stability(
            False, "a small push grows whatever the capacitances (the Jacobian's determinant has the wrong sign)"
        )
    if lowest > 1e-12:
        return Stability(True, "it decays with any capacitances (positive definite)")
    rates = np.linalg.eigvals(s).real
    least = float(rates.min())
    if least > 0:
        return Stability(True, "it decays with equal small capacitances at every node")
    return Stability(None, "not decided: with equal capacitances at every node it grows, with others it may not")


def reduced(jacobian: Array, is_node: np.ndarray) -> Array | None:
    """The Schur complement on the nodes that rows without capacitance leave free.

    A supply's row fixes a combination of node voltages and brings an unknown current: the pair (rows without
    capacitance, unknowns that are no voltages) need not be square-solvable by itself, so nodes that are tied are
    eliminated with the currents that tie them.
    """
    nodes = np.flatnonzero(is_node)
    others = np.flatnonzero(~is_node)
    if not len(others):
        return jacobian
    d = jacobian[np.ix_(others, others)]
    a = jacobian[np.ix_(others, nodes)]
    b = jacobian[np.ix_(nodes, others)]
    left, values, right = np.linalg.svd(d)
    scale = max(float(values[0]) if len(values) else 0.0, 1.0)
    rank = int((values > 1e-12 * scale).sum())
    # constraints that no current can satisfy alone: combinations of node voltages that are held
    held = left[:, rank:].T @ a
    free_currents = right[rank:].T
    g = jacobian[np.ix_(nodes, nodes)]
    if rank:
        inverse = (right[:rank].T / values[:rank]) @ left[:, :rank].T
        g = g - b @ inverse @ a
    if rank == len(others):
        return np.asarray(g)
    # admissible motions: held @ v = 0; the unknown currents act along b @ free_currents
    forces = b @ free_currents
    basis = _null(held)
    test = _null(forces.T)
    if basis.shape[1] != test.shape[1] or basis.shape[1] == 0:
        return np.zeros((0, 0)) if basis.shape[1] == 0 else None
    coupling = test.T @ basis
    if np.linalg.cond(coupling) > 1e9:
        return None
    return np.asarray(np.linalg.solve(coupling, test.T @ g @ basis))


def _null(m: Array) -> Array:
    """An orthonormal basis of the null space of m."""
    _, values, right = np.linalg.svd(m)
    rank = int((values > 1e-9 * max(float(values[0]) if len(values) else 0.0, 1e-300)).sum())
    return np.asarray(right[rank:].T)
