"""Wright's omega function for real arguments, without scipy's import (which costs more than a small audit's solve)."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

#: below this argument omega is exp(x) and as good as zero; its logarithm stays finite down to here
LOWEST = -700.0
#: above this argument omega is x itself, to the last digit
HIGHEST = 1e300


def omega_start(x: Array) -> Array:
    """omega(x) within 3e-9 relative, for LOWEST <= x and finite.

    With L = ln(1 + e^x) the guess L (1 - ln(1 + L)/(2 + L)) after Winitzki (ICCSA 2003, LNCS 2667, 780-789, for W) is
    within 2 % everywhere; one Fritsch-Shafer-Crowley step (CACM 16(2) 123-124, 1973), of fourth order, does the rest.
    """
    soft = np.logaddexp(0.0, x)
    return _step(x, soft * (1.0 - np.log1p(soft) / (2.0 + soft)))


def wright_omega(x: Array) -> Array:
    """The real solution w > 0 of w + ln w = x, for any real x (arrays of any shape), in full double precision.

    Checked against scipy.special.wrightomega.
    """
    x = np.asarray(x, dtype=float)
    ordinary = np.clip(x, LOWEST, HIGHEST)
    w = _step(ordinary, omega_start(ordinary))
    # w = exp(x) exp(-w) does not round x against w, which would cost digits in proportion to |x|
    small = np.exp(np.minimum(x, -1.0)) * np.exp(-np.minimum(w, 1.0))
    return np.asarray(np.where(x < -1.0, small, np.where(x > HIGHEST, x, w)))


def _step(x: Array, w: Array) -> Array:
    """One Fritsch-Shafer-Crowley step for w + ln w = x."""
    r = x - w - np.log(w)
    one = 1.0 + w
    q, t = r / one, 2.0 * one + (4.0 / 3.0) * r
    return np.asarray(w * (1.0 + q * ((t - q) / (t - 2.0 * q))))
