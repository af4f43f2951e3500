"""Starts for iterations that look for what one start misses: junctions, channels and limits put on and off in turn.

Where the combinations are few all of them are taken, else a seeded choice; a seeded spread of others follows.
"""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise, product

import numpy as np

from netaudit.devices.base import Array
from netaudit.devices.families import Exponential, Ramp, Square
from netaudit.devices.table import Table
from netaudit.solve.system import Numbers, System

_STRUCTURED = 256
_SPREAD = 192


def levels(system: System, k: int, num: Numbers) -> list[float]:
    """The values of one branch from which a start may set out."""
    family = system.families[k]
    if isinstance(family, Exponential):
        scale = float(np.max(_parameter(num, k, "V")))
        on = -float(np.max(_parameter(num, k, "log_I"))) - 7.0
        return [0.0, scale * on] if scale < 1.0 else [0.0]
    if isinstance(family, Square):
        threshold = float(np.max(_parameter(num, k, "offset")))
        return [threshold - 1.0, threshold + 1.5]
    if isinstance(family, Ramp):
        offset = float(np.max(_parameter(num, k, "offset")))
        return [offset - 1.0, offset + 1.0]
    if isinstance(family, Table):
        return _turning(family)
    return [share * reach(system) for share in (0.03, 0.3, 0.65, 1.0)]


def reach(system: System) -> float:
    """The sum of all supplies' voltages: what no branch of a net without gain can exceed."""
    volts = [abs(d.nominal("value", 0.0)) for d in system.devices if d.kind == "supply"]
    return max(sum(volts), 1.0)


def _turning(family: Table) -> list[float]:
    """The middle of every rising and falling stretch of a measured curve."""
    x = np.array([p[0] for p in family.points])
    y = np.array([p[1] for p in family.points])
    signs = np.sign(np.diff(y))
    starts = [0, *(np.flatnonzero(signs[1:] * signs[:-1] < 0) + 1), len(x) - 1]
    return [float(0.5 * (x[a] + x[b])) for a, b in pairwise(starts)]


def _parameter(num: Numbers, k: int, name: str) -> Array:
    for _, index, parameters in num.branches.groups:
        position = np.flatnonzero(index == k)
        if len(position):
            return np.asarray(parameters[name][..., position[0]])
    raise KeyError(name)


def starts(system: System, num: Numbers) -> Array:
    """Structured starts, then a seeded spread: shape (count, m)."""
    options = [levels(system, k, num) for k in range(system.m)]
    count = float(np.prod([float(len(o)) for o in options]))
    rng = np.random.default_rng(20)
    if count <= _STRUCTURED:
        rows = np.array(list(product(*options)))
    else:
        rows = np.array([[o[i] for o, i in zip(options, pick, strict=True)] for pick in _picks(options, rng)])
    low = np.array([min(o) - 0.3 for o in options])
    high = np.array([max(o) + 0.3 for o in options])
    spread = low + (high - low) * rng.random((_SPREAD, system.m))
    return np.concatenate([system.start[None, :], rows, spread])


def _picks(options: list[list[float]], rng: np.random.Generator) -> Iterator[list[int]]:
    for _ in range(_STRUCTURED):
        yield [int(rng.integers(len(o))) for o in options]
