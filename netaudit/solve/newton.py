"""Newton's method for a batch of operating points.

The iterate is the vector u of branch values, not x.  Each step solves the linear circuit in which every branch is
replaced by its tangent, which gives x and, for each branch, a proposal (u^, i^).  The family's limiting step then takes
the branch to where its own curve meets the load line of slope -1/rho through that proposal; for a junction this is
Newton in the variable u + rho i.  Converged: the unlimited step is small for every branch.  Then x itself is polished
by plain Newton steps whose residual is summed in extended precision.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.linear import Linear
from netaudit.solve.system import Index, Numbers, System

#: a step of the branch values that counts as converged: absolute (V) and relative
STEP_ABSOLUTE = 1e-9
STEP_RELATIVE = 1e-9
#: KCL residual that counts as rounding: relative to the currents that meet, and to the terms that were summed
CURRENT_RELATIVE = 1e-9
TERM_RELATIVE = 256 * np.finfo(float).eps
#: steps after which a balance at its rounding floor counts, whatever the steps of the voltages
_PATIENCE = 8
#: batches up to this size are summed in long double
_WIDE_SUMS = 64
#: beyond this no part of a board carries the current: the iterate has no physical meaning
CURRENT_LIMIT = 1e12


@dataclass(frozen=True)
class Iterate:
    """A batch of solutions: x (batch, n), branch values u (batch, m), which converged, and the steps each took."""

    x: Array
    u: Array
    converged: np.ndarray
    iterations: np.ndarray


@dataclass(frozen=True)
class Anchor:
    """A pull of every row towards x0: F(x) + weight (x - x0) = 0, as an implicit step of pseudo-time has it."""

    weight: Array
    x0: Array


@dataclass(frozen=True)
class Effort:
    """How a Newton run is tried: steps at most, share of each branch step that is taken, and a pull or none."""

    limit: int = 60
    damping: float = 1.0
    anchor: Anchor | None = None


def newton(system: System, num: Numbers, u0: Array, linear: Linear, effort: Effort | None = None) -> Iterate:
    """Solves every member of a batch with one axis from the branch values u0 (batch, m)."""
    effort = effort or Effort()
    count = u0.shape[0]
    u = u0.copy()
    x = np.zeros((count, system.n))
    settled = np.zeros(count, dtype=bool)
    iterations = np.zeros(count, dtype=int)
    active: Index = np.arange(count)
    part = num
    for turn in range(effort.limit):
        if not len(active):
            break
        now = u[active]
        with np.errstate(all="ignore"):
            x_new, new, at_rest = _step(system, part, now, linear, turn, effort)
            if turn >= _PATIENCE and effort.anchor is None:
                at_rest |= _balanced(system, part, x_new)
        iterations[active] += 1
        fine = np.isfinite(x_new).all(axis=-1) & np.isfinite(new).all(axis=-1)
        x[active], u[active] = x_new, new
        settled[active] = at_rest & fine
        keep = ~at_rest & fine
        if not keep.all():
            active = active[keep]
            part = num.take(active) if num.batch else num
    if effort.anchor is not None:
        return Iterate(x, u, settled, iterations)
    x, u, good, extra = _polish(system, num, x, u, settled, linear)
    return Iterate(x, u, good, iterations + extra)


def _step(
    system: System, num: Numbers, u: Array, linear: Linear, turn: int, effort: Effort
) -> tuple[Array, Array, np.ndarray]:
    """One step: x, the next branch values, and which members are at rest."""
    phi, slope = num.branches.value(u)
    right = system.right_side(num, phi, slope, u)
    shift = None
    if effort.anchor is not None:
        shift = effort.anchor.weight
        right = right + shift * effort.anchor.x0
    x, z = linear.solve(system, num, slope, right, turn, shift)
    proposal = system.sense(num, x)
    change = proposal - u
    current = phi + slope * change
    rho = seen_resistance(z, slope)
    new = num.branches.limit(u, proposal, current, rho)
    small = STEP_ABSOLUTE + STEP_RELATIVE * np.abs(u)
    at_rest = np.asarray((np.abs(change) <= small).all(axis=-1))
    if effort.damping < 1.0:
        new = u + effort.damping * (new - u)
    return x, new, at_rest


def _balanced(system: System, num: Numbers, x: Array) -> np.ndarray:
    """Whether x already balances every row to the rounding of its terms.

    In strings of blocking junctions the voltages themselves are uncertain by more than any step bound, since a change
    of millivolts moves no current that the node voltages can resolve; there this is all that can be asked for.
    """
    phi, _ = num.branches.value(system.sense(num, x))
    return _at_floor(system, num, x, phi, 1e-12)[1]


def seen_resistance(z: Array, slope: Array) -> Array:
    """The resistance that a branch sees without its own conductance: z / (1 - phi' z), from the loaded z."""
    rest = 1.0 - slope * z
    rho = np.where(rest > 1e-12, z / np.maximum(rest, 1e-12), np.inf)
    return np.where(z > 0, rho, 0.0)


def _polish(
    system: System, num: Numbers, x: Array, u: Array, settled: np.ndarray, linear: Linear
) -> tuple[Array, Array, np.ndarray, int]:
    """Plain Newton on F(x) = 0 with the residual summed in long double, until it is at its rounding floor."""
    good = np.zeros(len(x), dtype=bool)
    if not settled.any():
        return x, u, good, 0
    extra = 0
    with np.errstate(all="ignore"):
        for extra in range(1, 6):
            u = np.where(settled[:, None], system.sense(num, x), u)
            phi, slope = num.branches.value(u)
            f, at_floor = _at_floor(system, num, x, phi)
            good = settled & at_floor
            if extra > 1 and good[settled].all():
                break
            dx, _ = linear.solve(system, num, slope, -f, -1)
            better = settled & np.isfinite(dx).all(axis=-1)
            x = np.where(better[:, None], x + dx, x)
        u = np.where(settled[:, None], system.sense(num, x), u)
    return x, u, good, extra


def _at_floor(
    system: System, num: Numbers, x: Array, phi: Array, relative: float = CURRENT_RELATIVE
) -> tuple[Array, np.ndarray]:
    """F(x) and, for each member, whether every row is zero within the rounding of its terms.

    The sums run in long double for single boards, which are reported to the last digit; in a large batch plain doubles
    are several times faster and their rounding lies within the bound.
    """
    wide = np.longdouble if len(x) <= _WIDE_SUMS else np.float64
    terms = system.contributions(num, x.astype(wide), phi.astype(wide))
    sums = system.balance.spread(terms)
    f = system.to_rows.spread(sums).astype(float)
    size = system.to_rows.spread(system.balance.spread(np.abs(terms))).astype(float)
    carried = system.to_rows.spread(np.abs(sums)).astype(float)
    bound = relative * np.where(system.is_node, carried, 0.0) + TERM_RELATIVE * size + 1e-18
    small = (np.abs(f) <= bound).all(axis=-1)
    return f, small & (np.abs(carried * system.is_node) < CURRENT_LIMIT).all(axis=-1)
