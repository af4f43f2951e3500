"""``forward`` points of a data sheet to I_S, n and R_S.

v = n V_T ln(i / I_S + 1) + R_S i at 25 degC.  One point: n from the material, R_S 0.  Two: R_S 0.  More: least squares
in ln i (each point's residual in volts over n V_T) with R_S >= 0 and n between 0.5 and 20 a junction.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from netaudit.failure import InputError
from netaudit.parts.materials import Material
from netaudit.place import Place

V_T = 1.380649e-23 * 298.15 / 1.602176634e-19


@dataclass(frozen=True)
class Junction:
    """I_S in A, n, R_S in ohm, and the fit's largest error in volts at its points."""

    I_S: float
    n: float
    R_S: float
    error: float


def fit_forward(points: Sequence[tuple[float, float]], known: Material | None, place: Place) -> Junction:
    """Points as (volts, amperes).  Raises InputError for points that no junction can have."""
    ordered = sorted(points, key=lambda p: p[1])
    _check(ordered, known, place)
    v = np.array([p[0] for p in ordered])
    i = np.array([p[1] for p in ordered])
    if len(v) == 1:
        n = known.n if known is not None else 1.0
        scale, log_i, r = n * V_T, math.log(i[0]) - v[0] / (n * V_T), 0.0
    elif len(v) == 2:
        scale = float((v[1] - v[0]) / math.log(i[1] / i[0]))
        log_i, r = float(math.log(i[0]) - v[0] / scale), 0.0
    else:
        scale, log_i, r = _least_squares(v, i)
    if not 0.3 * V_T < scale < 1000 * V_T:
        raise InputError("the forward points do not lie on a junction's curve", place=place, mend="check V and I")
    i_s = math.exp(log_i)
    error = float(np.abs(scale * np.log1p(i / i_s) + r * i - v).max())
    return Junction(i_s, scale / V_T, r, error)


def _check(points: Sequence[tuple[float, float]], known: Material | None, place: Place) -> None:
    if not points:
        raise InputError("forward without points", place=place, mend='write it like forward = ["0.7V @ 10mA"]')
    for v, i in points:
        if v <= 0 or i <= 0:
            raise InputError(f"a forward point of {v:g} V and {i:g} A", place=place, mend="both must be positive")
    for (v0, i0), (v1, i1) in pairwise(points):
        if i0 == i1:
            raise InputError(f"two forward points at {i0:g} A", place=place, mend="keep one")
        if v1 <= v0:
            raise InputError(
                f"the forward voltage does not rise from {i0:g} A ({v0:g} V) to {i1:g} A ({v1:g} V)",
                place=place,
                mend="check the points",
            )
    if len(points) == 1 and known is None:
        raise InputError("one forward point needs a material (for n)", place=place, mend='add material = "silicon"')


def _least_squares(v: np.ndarray, i: np.ndarray) -> tuple[float, float, float]:
    """(n V_T, ln I_S, R_S): linear in n V_T, n V_T ln I_S and R_S as long as i is far above I_S."""
    columns = np.stack([np.log(i), np.ones_like(i), i], axis=-1)
    (a, b, r), *_ = np.linalg.lstsq(columns, v, rcond=None)
    if r < 0 or a <= 0:
        (a, b), *_ = np.linalg.lstsq(columns[:, :2], v, rcond=None)
        r = 0.0
    return float(a), float(-b / a), float(r)
