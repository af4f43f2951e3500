"""The nonlinear branches of a circuit, sorted by family, evaluated all at once."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.families import Array, Family, Parameters

Indices = NDArray[np.intp]
Group = tuple[Family, Indices, Parameters]


class BranchGroups:
    """m branches phi_k(u_k) in groups of one family each.

    ``groups``: (family, the branch numbers that it holds, its parameters as arrays of shape (..., number of branches)).
    Every branch number below ``m`` stands in exactly one group.  All methods take u of shape (..., m) and give the same
    shape; leading axes of u and of the parameters broadcast against each other.
    """

    def __init__(self, groups: Sequence[Group], m: int) -> None:
        self.groups: tuple[Group, ...] = tuple(groups)
        self.m = m
        held = np.sort(np.concatenate([np.asarray(g[1]) for g in self.groups] or [np.zeros(0, dtype=np.intp)]))
        if not np.array_equal(held, np.arange(m)):
            raise ValueError("every branch must stand in exactly one group")
        # a run of neighbouring branches is read through a view, which costs no copy
        self._picks = tuple(_pick(index) for _, index, _ in self.groups)

    def value(self, u: Array) -> tuple[Array, Array]:
        """phi(u) and its slope."""
        return self._pair(lambda family, pick, p: family.value(u[..., pick], p), u.shape)

    def bounds(self, low: Array, high: Array) -> tuple[Array, Array]:
        """An enclosure of phi over the boxes [low, high], rounding included."""
        return self._pair(lambda family, pick, p: family.bounds(low[..., pick], high[..., pick], p), low.shape)

    def slope_bounds(self, low: Array, high: Array) -> tuple[Array, Array]:
        """An enclosure of the slopes over the boxes [low, high], rounding included."""
        return self._pair(lambda family, pick, p: family.slope_bounds(low[..., pick], high[..., pick], p), low.shape)

    def offset_bounds(self, low: Array, high: Array, slope: Array) -> tuple[Array, Array]:
        """An enclosure of phi(u) - slope u over the boxes [low, high], rounding included; ``slope`` shaped like them."""
        return self._pair(
            lambda family, pick, p: family.offset_bounds(low[..., pick], high[..., pick], slope[..., pick], p),
            low.shape,
        )

    def touch(self, slope: Array) -> Array:
        """About where each phi has this slope (nan: nowhere, or not known)."""
        out = np.empty((*slope.shape[:-1], self.m))
        with np.errstate(all="ignore"):
            for (family, _, p), pick in zip(self.groups, self._picks, strict=True):
                out[..., pick] = family.touch(slope[..., pick], p)
        return out

    def limit(self, old: Array, new: Array, current: Array, rho: Array) -> Array:
        """Each branch's next controlling value; ``rho`` (>= 0, inf allowed) is the resistance that the branch sees."""
        out: Array | None = None
        for (family, _, p), pick in zip(self.groups, self._picks, strict=True):
            part = family.limit(old[..., pick], new[..., pick], current[..., pick], rho[..., pick], p)
            if len(self.groups) == 1 and part.shape[-1] == self.m and isinstance(pick, slice):
                return part
            if out is None:
                out = np.empty((*part.shape[:-1], self.m))
            out[..., pick] = part
        return np.array(new) if out is None else out

    def _pair(
        self, call: Callable[[Family, slice | Indices, Parameters], tuple[Array, Array]], shape: tuple[int, ...]
    ) -> tuple[Array, Array]:
        """Both results of every group, side by side."""
        parts = [call(family, pick, p) for (family, _, p), pick in zip(self.groups, self._picks, strict=True)]
        if len(parts) == 1 and isinstance(self._picks[0], slice):
            return parts[0]
        lead = np.broadcast_shapes(shape[:-1], *(part[0].shape[:-1] for part in parts))
        first, second = np.empty((*lead, self.m)), np.empty((*lead, self.m))
        for (one, other), pick in zip(parts, self._picks, strict=True):
            first[..., pick] = one
            second[..., pick] = other
        return first, second


def _pick(index: Indices) -> slice | Indices:
    """The index as a slice where it is a rising run without gaps."""
    index = np.asarray(index, dtype=np.intp)
    if len(index) and np.array_equal(index, np.arange(index[0], index[0] + len(index))):
        return slice(int(index[0]), int(index[0]) + len(index))
    return index
