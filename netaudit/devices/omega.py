"""Wright's omega function for real arguments, without scipy's import (which costs more than a small audit's solve)."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def wright_omega(x: Array) -> Array:
    """The real solution w > 0 of w + ln w = x, for any real x (arrays of any shape).

    Start: exp(x) below -2, a rational guess between, x - ln x above 1; then three Fritsch-Shafer-Crowley steps (CACM
    16(2) 123-124, 1973), each of fourth order: full double precision.  Checked against scipy.special.wrightomega.
    """
    x = np.asarray(x, dtype=float)
    clipped = np.clip(x, -700.0, None)
    with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
        low = np.exp(np.minimum(clipped, 1.0))
        middle = 0.567143290409783873 * np.exp(0.362 * np.clip(clipped, -2.0, 1.0)) + 0.0
        high = np.maximum(clipped - np.log(np.maximum(clipped, 1.0)), 0.5)
        w = np.where(clipped < -2.0, low, np.where(clipped < 1.0, middle, high))
        for _ in range(3):
            r = clipped - w - np.log(w)
            one = 1.0 + w
            t = 2.0 * one * (one + (2.0 / 3.0) * r)
            w = w * (1.0 + (r / one) * (t - r) / (t - 2.0 * r))
    # below -700 the clipped start is the answer itself: w = exp(x), down to where that underflows
    tiny = np.where(x > -745.2, np.exp(np.clip(x, -745.2, -700.0)), 0.0)
    return np.asarray(np.where(x < -700.0, tiny, np.where(np.isposinf(x), x, w)))
