"""Sums over groups of entries, for any number of leading batch axes, worked out once for an index."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


class SegmentSum:
    """out[..., index[k]] += values[..., k]; entries whose index is negative are dropped.

    ``present`` are the targets that receive anything, in rising order; ``sums`` gives just those, ``spread`` all ``size``.
    """

    def __init__(self, index: NDArray[np.intp], size: int) -> None:
        index = np.asarray(index, dtype=np.intp)
        kept = np.flatnonzero(index >= 0)
        self.size = size
        self.order = kept[np.argsort(index[kept], kind="stable")]
        ordered = index[self.order]
        first = np.ones(len(ordered), dtype=bool)
        first[1:] = ordered[1:] != ordered[:-1]
        self.starts = np.flatnonzero(first)
        self.present = ordered[self.starts]

    def sums(self, values: Array) -> Array:
        """The sums of the targets in ``present``: shape (..., len(present))."""
        if len(self.starts) == 0:
            return np.zeros((*values.shape[:-1], 0), dtype=values.dtype)
        return np.add.reduceat(values[..., self.order], self.starts, axis=-1)

    def spread(self, values: Array) -> Array:
        """The sums of all targets: shape (..., size)."""
        out = np.zeros((*values.shape[:-1], self.size), dtype=values.dtype)
        out[..., self.present] = self.sums(values)
        return out
