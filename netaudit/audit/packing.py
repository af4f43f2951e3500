"""Many quantities on few boards: rows of values that do not disturb each other are solved as one row.

A quantity depends on some of the values only.  The row that it wants fixes those; the others are free, so that rows of
quantities from different corners of a board fit into one (first fit).  The same holds for the columns of a matrix of
sensitivities: values that no quantity shares may be moved together (Curtis, Powell and Reid, J. Inst. Maths Applics 13,
117-119, 1974).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.base import Array

Mask = NDArray[np.bool_]


@dataclass(frozen=True)
class Wanted:
    """A row of values (variables,), and which of them matter to whoever wants it."""

    values: Array
    matters: Mask


def pack(wanted: Sequence[Wanted]) -> tuple[list[Array], list[int]]:
    """Rows that together hold every wanted one, and for each wanted one the row that holds it."""
    if not wanted:
        return [], []
    width = len(wanted[0].values)
    rows, taken = np.empty((len(wanted), width)), np.zeros((len(wanted), width), dtype=bool)
    count, where = 0, []
    for one in wanted:
        clash = (one.matters & taken[:count] & (rows[:count] != one.values)).any(axis=1)
        free = np.flatnonzero(~clash)
        if len(free):
            at = int(free[0])
            rows[at, one.matters] = one.values[one.matters]
        else:
            at, count = count, count + 1
            rows[at] = one.values
        taken[at] |= one.matters
        where.append(at)
    return [row.copy() for row in rows[:count]], where


def together(pattern: Mask) -> Mask:
    """Groups of variables of which no quantity depends on two, for a pattern (quantities, variables): one row a group,
    (groups, variables)."""
    # in float32 the product runs through BLAS; it counts at most as many quantities as there are, which is exact enough
    used = pattern.astype(np.float32)
    shared = (used.T @ used) > 0
    groups: list[Mask] = []
    for column in range(pattern.shape[1]):
        for group in groups:
            if not (shared[column] & group).any():
                group[column] = True
                break
        else:
            groups.append(np.arange(pattern.shape[1]) == column)
    return np.array(groups, dtype=bool).reshape(len(groups), pattern.shape[1])
