"""A junction's parameters from measured curves: I_S, n, R_S, leakage, breakdown, and how they move with temperature.

Forward: v = n V_T ln(i / I_S + 1) + R_S i, first as a linear least-squares problem in (n V_T, n V_T ln I_S, R_S), then
with every point weighed by its uncertainty, sigma^2 = sigma_v^2 + (sigma_i dv/di)^2.  Temperatures: I_S(T) of the
netlist language with E_g from the slope of ln I_S against 1/T.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from netaudit.failure import InputError
from netaudit.parts.measured import Array, Curve
from netaudit.parts.reverse import Breakdown, reverse_branch
from netaudit.place import Place

BOLTZMANN, CHARGE = 1.380649e-23, 1.602176634e-19
#: a fit whose largest deviation is beyond these is no exponential: the curve itself is kept
LARGEST_ERROR, LARGEST_SHARE = 0.05, 0.05
_LEAST_POINTS = 4
#: of longer curves every so-manieth point is taken
_MOST = 20_000
#: within this share of a current limit a point is at it
_AT_LIMIT = 2e-3
#: volts around the origin at which a junction carries next to nothing
_NEAR = 0.05
#: volts or amperes beyond which nothing was measured
_LARGEST = 1e9
#: a forward branch does not reach further than this, V
_LONGEST = 5.0


@dataclass(frozen=True)
class Meter:
    """The stated uncertainty of the instrument: volts, share of the current, amperes (the offset noise), and the
    compliance current at which it limits (None: looked for)."""

    volts: float = 1e-3
    share: float = 0.01
    amperes: float = 0.0
    limit: float | None = None


@dataclass(frozen=True)
class Fit:
    """Parameters of one junction with their standard errors, and what was left out.

    ``exponential`` False: no exponential fits and ``points`` (volts, amperes, rising) are the model.
    ``errors`` by parameter; ``worst`` the largest deviation in volts and where; ``left_out`` sentences.
    """

    exponential: bool
    I_S: float = math.nan
    n: float = math.nan
    R_S: float = 0.0
    temperature: float = 25.0
    errors: dict[str, float] = field(default_factory=dict)
    leakage: tuple[float, float] | None = None
    breakdown: Breakdown | None = None
    E_g: float | None = None
    alpha_VF: tuple[float, float] | None = None
    worst: float = math.nan
    worst_at: tuple[float, float] = (math.nan, math.nan)
    points: tuple[tuple[float, float], ...] = ()
    left_out: tuple[str, ...] = ()


def fit_curves(curves: Sequence[Curve], meter: Meter | None = None, temperature: float = 25.0) -> Fit:
    """The fit of one part from its curves; ``temperature`` (degC) is taken where a curve does not state its own.

    Raises InputError for a curve that cannot be one: fewer than two points, two currents at one voltage.
    """
    meter = meter or Meter()
    # data that is no junction's runs out of numbers somewhere and ends as no exponential
    with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
        fits = [_one(c, meter, temperature) for c in curves]
    main = min(fits, key=lambda f: abs(f.temperature - 25.0))
    hot = [f for f in fits if f.exponential]
    if not main.exponential or len(hot) < 2 or np.ptp([f.temperature for f in hot]) < 5.0:
        return main
    return _with_temperatures(main, hot)


def _one(curve: Curve, meter: Meter, temperature: float) -> Fit:
    t = curve.temperature if curve.temperature is not None else temperature
    order = np.argsort(curve.v, kind="stable")
    v, i = curve.v[order], curve.i[order]
    step = -(-len(v) // _MOST)
    v, i = v[::step], i[::step]
    v, i, left_out = _usable(v, i, meter)
    if step > 1:
        left_out = (*left_out, f"{len(curve.v) - len(order[::step])} of {len(curve.v)} points: each {step}th was taken")
    if _turned(v, i, meter, t):
        v, i = -v[::-1], -i[::-1]
        left_out = (*left_out, "no points: the leads were reversed, voltage and current are taken with the other sign")
    if len(v) < 2 or v[0] == v[-1]:
        what = "fewer than two usable points are left" if len(v) < 2 else f"every point lies at {v[0]:.4g} V"
        raise InputError(what, mend="check the limits of the instrument and the order of the columns")
    floor = _noise(v, i, meter)
    forward = (v > 0) & (i > max(3 * floor, 0.0)) & (i > 0)
    if floor > 0 and (dropped := int(((v > 0) & ~forward).sum())):
        left_out = (*left_out, f"{dropped} forward points below the offset noise of {floor:.3g} A")
    if forward.sum() < _LEAST_POINTS:
        return Fit(False, temperature=t, points=_single(v, i, curve), left_out=left_out)
    fit = _forward(v[forward], i[forward], meter, t)
    if fit is None or not _close(fit, v[forward], i[forward]):
        return Fit(
            False, temperature=t, points=_single(v, i, curve), left_out=left_out, worst=fit.worst if fit else math.nan
        )
    leakage, breakdown = reverse_branch(v, i, meter.volts, meter.share, max(2 * fit.I_S, 3 * floor))
    return Fit(
        True, fit.I_S, fit.n, fit.R_S, t, fit.errors, leakage, breakdown, None, None, fit.worst, fit.worst_at,
        _single(v, i, curve), left_out,
    )  # fmt: skip


def _turned(v: Array, i: Array, meter: Meter, t: float) -> bool:
    """Whether the leads were the other way round: all of a junction's forward branch at negative volts."""
    if (i > 0).sum() >= _LEAST_POINTS or ((v < 0) & (i < 0)).sum() < _LEAST_POINTS or float(v.min()) < -_LONGEST:
        return False
    back = (v < 0) & (i < 0)
    fit = _forward(-v[back][::-1], -i[back][::-1], meter, t)
    return fit is not None and fit.n < 5.0 and _close(fit, -v[back][::-1], -i[back][::-1])


def _single(v: Array, i: Array, curve: Curve) -> tuple[tuple[float, float], ...]:
    """Rising voltages, readings at one voltage averaged when they agree; two different currents there are an error."""
    order = np.argsort(v, kind="stable")
    v, i = v[order], i[order]
    volts, first, count = np.unique(v, return_index=True, return_counts=True)
    low, high = np.minimum.reduceat(i, first), np.maximum.reduceat(i, first)
    torn = high - low > 0.2 * np.maximum(np.abs(low), np.abs(high)) + 1e-9
    if torn.any():
        k = int(np.argmax(torn))
        line = curve.lines[int(np.flatnonzero(np.abs(curve.v) == abs(volts[k]))[-1])]
        raise InputError(
            f"two currents at one voltage: {low[k]:.4g} A and {high[k]:.4g} A at {volts[k]:.4g} V",
            place=Place("", line),
            mend="keep one of them",
        )
    return tuple(zip(volts.tolist(), (np.add.reduceat(i, first) / count).tolist(), strict=True))


def _usable(v: Array, i: Array, meter: Meter) -> tuple[Array, Array, tuple[str, ...]]:
    """The points that are not at the instrument's current limit: as stated, else where either branch ends in a plateau."""
    near = max(_AT_LIMIT, 4.0 * meter.share)
    at_limit = np.zeros(len(v), dtype=bool)
    said = []
    for sign in (1.0, -1.0):
        top = meter.limit if meter.limit is not None else _plateau(sign * v, sign * i, near, sign < 0)
        if top is None:
            continue
        here = sign * i >= top * (1.0 - (near if meter.limit is None else _AT_LIMIT))
        if here.any():
            begin = float(v[here][np.argmin(np.abs(v[here]))])
            said.append(f"{int(here.sum())} points at the current limit of {top:.4g} A (from {begin:.4g} V on)")
            at_limit |= here
    return v[~at_limit], i[~at_limit], tuple(said)


def _plateau(v: Array, i: Array, near: float, reverse: bool) -> float | None:
    """The current at which the branch of positive currents ends in a plateau, None when it rises to its end.

    Three points or more lie within ``near`` of the largest current and span four times the voltage that the slope before
    them would.  A reverse branch must have risen a thousandfold: a saturated leakage is flat as well.
    """
    branch = (v > 0) & (i > 0)
    order = np.argsort(v[branch], kind="stable")
    u, j = v[branch][order], i[branch][order]
    if len(u) < 4 or (reverse and j.max() < 1e3 * j.min()):
        return None
    flat = j >= np.median(j[j >= j.max() * (1.0 - near)]) * (1.0 - near)
    first = int(np.argmax(flat))
    if flat.sum() < 3 or first == 0:
        return None
    begin = min(int(np.searchsorted(j[:first], 0.5 * j[first])), first - 1)
    slope = (u[first] - u[begin]) / max(j[first] - j[begin], 1e-300)
    level = float(np.median(j[flat]))
    span = float(u[-1] - u[first])
    return level if span > max(0.02, 4.0 * slope * near * level) else None


def _noise(v: Array, i: Array, meter: Meter) -> float:
    """The offset noise: as stated, else the largest current of the wrong sign, or that which stands near the origin
    where a junction carries next to nothing (and far below the largest current)."""
    if meter.amperes > 0:
        return meter.amperes
    wrong = (v > 0) & (i < 0)
    noise = float(np.max(-i[wrong])) if wrong.any() else 0.0
    near = np.abs(v) < _NEAR
    if near.sum() >= 2 and (level := float(np.median(np.abs(i[near])))) < 1e-3 * float(np.max(np.abs(i))):
        noise = max(noise, level)
    return noise


def _thermal(t: float) -> float:
    return BOLTZMANN * (t + 273.15) / CHARGE


def _forward(v: Array, i: Array, meter: Meter, t: float) -> Fit | None:
    """Gauss-Newton on v = n V_T ln(1 + i/I_S) + R_S i with R_S >= 0; standard errors from the normal matrix."""
    vt = _thermal(t)
    if not np.isfinite(v).all() or float(np.max(np.abs(v))) > _LARGEST or float(np.max(np.abs(i))) > _LARGEST:
        return None
    a, b, r = _start(v, i)
    with_r = r > 0
    theta = np.array([a, b, max(r, 0.0)])
    for _ in range(60):
        model, jac = _model(theta, i)
        slope = theta[0] / (i + np.exp(theta[1])) + theta[2]
        weight = 1.0 / np.hypot(meter.volts, slope * (meter.share * i + meter.amperes))
        free = [0, 1, 2] if with_r else [0, 1]
        weighted = jac[:, free] * weight[:, None]
        if not np.isfinite(weighted).all():
            return None
        step, *_ = np.linalg.lstsq(weighted, (v - model) * weight, rcond=None)
        theta[free] += np.clip(step, -0.5 * np.abs(theta[free]) - 1e-3, 0.5 * np.abs(theta[free]) + 1e-3)
        theta[0] = max(theta[0], 1e-4)
        if with_r and theta[2] < 0:
            theta[2], with_r = 0.0, False
        if np.abs(step).max() < 1e-12:
            break
    if not np.isfinite(theta).all():
        return None
    model, _ = _model(theta, i)
    covariance = np.linalg.pinv(weighted.T @ weighted)
    scale = max(1.0, float((((v - model) * weight) ** 2).sum()) / max(len(v) - len(free), 1))
    sigma = np.sqrt(np.diag(covariance) * scale)
    worst = int(np.argmax(np.abs(v - model)))
    i_s = float(np.exp(theta[1]))
    errors = {
        "n": float(sigma[0] / vt),
        "I_S": float(sigma[1] * i_s),
        "R_S": float(sigma[2]) if len(free) == 3 else 0.0,
    }
    return Fit(
        True, i_s, float(theta[0] / vt), float(theta[2]), t, errors, worst=float(abs(v - model)[worst]),
        worst_at=(float(v[worst]), float(i[worst])),
    )  # fmt: skip


def _model(theta: Array, i: Array) -> tuple[Array, Array]:
    """v(i) and its derivatives by (n V_T, ln I_S, R_S)."""
    ratio = i / np.exp(theta[1])
    log = np.log1p(ratio)
    return theta[0] * log + theta[2] * i, np.stack([log, -theta[0] * ratio / (1 + ratio), i], axis=-1)


def _start(v: Array, i: Array) -> tuple[float, float, float]:
    """The linear problem v = A ln i + B + R i, each point weighed alike in volts; A = n V_T, ln I_S = -B / A."""
    columns = np.stack([np.log(i), np.ones_like(i), i], axis=-1)
    (a, b, r), *_ = np.linalg.lstsq(columns, v, rcond=None)
    if a <= 1e-3 or r < 0:
        (a, b), *_ = np.linalg.lstsq(columns[:, :2], v, rcond=None)
        r = 0.0
    a = max(float(a), 5e-3)
    return a, float(np.clip(-b / a, -120.0, 0.0)), float(r)


def _close(fit: Fit, v: Array, i: Array) -> bool:
    """Whether the fit is good enough to be the part's model, and physical."""
    if not (0.5 < fit.n < 400 and fit.I_S > 0):
        return False
    return fit.worst <= LARGEST_ERROR or fit.worst <= LARGEST_SHARE * float(np.max(v))


def _with_temperatures(main: Fit, fits: Sequence[Fit]) -> Fit:
    """E_g from ln I_S against 1/T with the exponent 3/n, and the forward voltage's drift at 1 mA."""
    kelvin = np.array([f.temperature + 273.15 for f in fits])
    log = np.log([f.I_S for f in fits]) - 3.0 / main.n * np.log(kelvin)
    slope = np.polyfit(1.0 / kelvin, log, 1)[0]
    e_g = float(-slope * main.n * BOLTZMANN / CHARGE)
    at = 1e-3
    volts = [f.n * _thermal(f.temperature) * math.log1p(at / f.I_S) + f.R_S * at for f in fits]
    drift = float(np.polyfit(kelvin, volts, 1)[0])
    return Fit(**{**main.__dict__, "E_g": e_g, "alpha_VF": (drift, at)})
