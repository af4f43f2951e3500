"""The reverse branch of a measured junction: leakage, and the breakdown behind its knee.

Leakage below the knee: ln i straight in ln v.  Breakdown: v = V_Z + V_k ln(i / I_Z) + R (i - I_Z), the law of the netlist
language, by linear least squares in (V_k, R, V_Z).  Where the knee lies is tried at every point: the split with the
smallest sum of squared residuals, each over its uncertainty, counts.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.parts.measured import Array

#: leakage is no straight line to better than this in ln i
_LEAKAGE_SCATTER = 0.1
#: at most so many places of the knee are tried
_TRIED = 150
#: a breakdown rises at least so many times, and faster than this power of the voltage
_RISE, _POWER = 30.0, 4.0
#: points that lie further from the law in ln i (root mean square) are no breakdown
_SCATTER = 0.3
_LEAST_KNEE = 1e-3
#: V_Z and r_Z are stated at this current where the data reaches twice as far, A (common practice)
_I_Z = 5e-3


@dataclass(frozen=True)
class Breakdown:
    """V_Z and slope r_Z at I_Z, slope r_ZK at the smaller current I_ZK (volts, ohms, amperes)."""

    V_Z: float
    I_Z: float
    r_Z: float
    r_ZK: float
    I_ZK: float


def reverse_branch(
    v: Array, i: Array, volts: float, share: float, least: float
) -> tuple[tuple[float, float] | None, Breakdown | None]:
    """(amperes, volts) of the leakage and the breakdown, each None where the points do not show it.

    ``volts`` and ``share`` are the meter's uncertainty; leakage below ``least`` amperes is none.
    """
    back = (v < 0) & (i < 0)
    order = np.argsort(-v[back], kind="stable")
    u, j = -v[back][order], -i[back][order]
    if len(u) < 2:
        return None, None
    knee, breakdown = _knee(u, j, volts, share)
    u, j = u[:knee], j[:knee]
    if not len(u):
        return None, breakdown
    leak = float(np.exp(_line(u, j)[-1])) if len(u) > 2 else float(j[-1])
    return ((leak, float(u[-1])) if leak > least else None), breakdown


def _line(u: Array, j: Array) -> Array:
    """ln j by the straight line through (ln u, ln j)."""
    return np.asarray(np.polyval(np.polyfit(np.log(u), np.log(j), 1 if np.ptp(u) > 0 else 0), np.log(u)))


def _knee(u: Array, j: Array, volts: float, share: float) -> tuple[int, Breakdown | None]:
    """Where the breakdown begins, and its parameters; the number of points and None without one."""
    best, at, found = np.inf, len(u), None
    last = len(u) - 4
    for k in np.unique(np.linspace(0, last, min(last + 1, _TRIED)).astype(int)) if last >= 0 else ():
        power = np.log(j[-1] / j[k]) / max(np.log(u[-1] / u[k]), 1e-9)
        if j[-1] < _RISE * j[k] or power < _POWER or np.median(j[-3:]) < _RISE * np.median(j[: max(k, 1)]):
            continue
        cost = 0.0
        if k >= 3:
            cost = float((((np.log(j[:k]) - _line(u[:k], j[:k])) / _LEAKAGE_SCATTER) ** 2).sum())
        fitted = _breakdown(u[k:], j[k:], float(j[k - 1]) if k else 0.0, volts, share)
        # points before the knee of which a line is no test count like points that fit
        if fitted is not None and (total := cost + fitted[0]) < best:
            best, at, found = total, int(k), fitted[1]
    return at, found


def _breakdown(u: Array, j: Array, leak: float, volts: float, share: float) -> tuple[float, Breakdown] | None:
    """(cost, parameters) of the breakdown's law through these points; the leakage before the knee taken off."""
    i = j - leak
    above = i > 0.1 * j
    u, i = u[above], i[above]
    if len(u) < 4:
        return None
    columns = np.stack([np.log(i), i, np.ones_like(i)], axis=-1)
    weight = np.ones_like(u)
    v_k = r = v_0 = 0.0
    for _ in range(3):
        v_k, r, v_0 = _solved(columns, u, weight)
        weight = 1.0 / np.hypot(volts, share * (v_k + r * i))
    off = u - columns @ np.array([v_k, r, v_0])
    if float(np.sqrt(np.mean((off / (v_k + r * i)) ** 2))) > _SCATTER:
        return None
    cost = float(((off * weight) ** 2).sum())
    # where data sheets state it, as far as the data reaches
    i_z = float(np.clip(min(_I_Z, 0.5 * i.max()), i.min(), i.max()))
    i_zk = i_z / 10.0
    v_z = v_0 + v_k * np.log(i_z) + r * i_z
    return cost, Breakdown(float(v_z), i_z, v_k / i_z + r, v_k / i_zk + r, i_zk)


def _solved(columns: Array, u: Array, weight: Array) -> tuple[float, float, float]:
    """V_k, R and the constant, V_k at least a millivolt and R not negative."""
    (v_k, r, v_0), *_ = np.linalg.lstsq(columns * weight[:, None], u * weight, rcond=None)
    if r < 0.0:
        (v_k, v_0), *_ = np.linalg.lstsq(columns[:, [0, 2]] * weight[:, None], u * weight, rcond=None)
        r = 0.0
    if v_k < _LEAST_KNEE:
        v_k = _LEAST_KNEE
        rest = (u - v_k * columns[:, 0]) * weight
        (r, v_0), *_ = np.linalg.lstsq(columns[:, 1:] * weight[:, None], rest, rcond=None)
    return float(v_k), max(float(r), 0.0), float(v_0)
