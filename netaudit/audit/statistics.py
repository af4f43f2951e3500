"""Samples of a board: what share of the boards built exceeds a limit, and which parts drive it.

Values are drawn over their spans by a scrambled Sobol sequence (Owen 1998) or a Latin hypercube (McKay, Beckman and
Conover, Technometrics 21(2), 1979), uniform over the span or normal with the span as +-3 sigma, cut at its ends.  Values
of one correlated group move together.  All samples are solved as one array program.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np

from netaudit.audit.worst import Rows, settle
from netaudit.devices.base import Array
from netaudit.solve.sensitivity import Variable, chunks
from netaudit.solve.settle import Solver
from netaudit.solve.solved import Solved
from netaudit.workers import IN_PROCESS, Workers

Method = Literal["sobol", "latin-hypercube", "plain"]
Distribution = Literal["uniform", "normal"]
QUANTILES = (0.05, 0.5, 0.95, 0.99)
_SIGMAS = 3.0


@dataclass(frozen=True)
class Plan:
    """How samples are drawn: their number, the seed, the sequence, the distribution, and groups of keys (as corners
    name them) that move together."""

    count: int
    seed: int = 1
    method: Method = "sobol"
    distribution: Distribution = "uniform"
    together: tuple[tuple[str, ...], ...] = ()


@dataclass(frozen=True)
class Sampled:
    """Statistics of one quantity: quantiles (by QUANTILES), the share above 1 of its ratio with the 95 % interval, and
    the values that drive it, largest first, as shares of the explained variance of the ranks."""

    quantiles: tuple[float, ...]
    beyond: float
    interval: tuple[float, float]
    drivers: tuple[tuple[str, float], ...]
    unsolved: int


def draw(spans: Sequence[Variable], plan: Plan) -> Array:
    """Values of every variable: shape (count, variables); the same for the same plan and spans."""
    from scipy.stats import norm, qmc

    group = _group_numbers(spans, plan.together)
    width = max(group, default=-1) + 1
    if plan.method == "sobol":
        power = int(np.ceil(np.log2(max(plan.count, 1))))
        unit = qmc.Sobol(width, rng=plan.seed).random_base2(power)[: plan.count]
    elif plan.method == "latin-hypercube":
        unit = qmc.LatinHypercube(width, rng=plan.seed).random(plan.count)
    else:
        unit = np.random.default_rng(plan.seed).random((plan.count, width))
    unit = np.asarray(unit)[:, group]
    low = np.array([v.quantity.low for v in spans])
    high = np.array([v.quantity.high for v in spans])
    if plan.distribution == "uniform":
        return np.asarray(low + unit * (high - low))
    tail = float(norm.cdf(-_SIGMAS))
    z = np.asarray(norm.ppf(tail + unit * (1.0 - 2.0 * tail))) / _SIGMAS
    middle = np.array([v.quantity.nominal for v in spans])
    return np.asarray(np.where(z < 0, middle + z * (middle - low), middle + z * (high - middle)))


def _group_numbers(spans: Sequence[Variable], together: Sequence[Sequence[str]]) -> list[int]:
    """The column of the unit cube that each variable takes its share from."""
    owner = {key: names[0] for names in together for key in names}
    numbers: dict[str, int] = {}
    return [numbers.setdefault(owner.get(v.key, v.key), len(numbers)) for v in spans]


def sample(
    solver: Solver,
    nominal: Solved,
    spans: Sequence[Variable],
    ratios: Sequence[Callable[[Solved], Array]],
    plan: Plan,
    workers: Workers = IN_PROCESS,
) -> list[Sampled]:
    """Statistics of every ratio (stress over limit) over the drawn boards; ``nominal`` is a batch of one.

    Raises Interrupted where the workers are told to stop: half of a sample has another confidence than was asked for.
    """
    solver.prepare(nominal)
    values = draw(spans, plan)
    size = chunks(solver, plan.count)
    parts = [values[start : start + size] for start in range(0, plan.count, size)]
    gain = solver.thermal_gain(nominal) if solver.heat.any else None
    pieces = [Rows(solver, tuple(spans), nominal, part, True, gain) for part in parts]
    columns = []
    for settled in workers.each(settle, pieces, "samples"):
        solved, count = replace(settled.solved, system=solver.system), len(settled.converged)
        out = np.stack([np.broadcast_to(f(solved), (count,)) for f in ratios], axis=-1)
        columns.append(np.where(settled.converged[:, None], out, np.nan))
    table = np.concatenate(columns)
    return [_statistics(table[:, k], values, spans) for k in range(len(ratios))]


def _statistics(ratio: Array, values: Array, spans: Sequence[Variable]) -> Sampled:
    solved = np.isfinite(ratio)
    good = ratio[solved]
    if not len(good):
        return Sampled((float("nan"),) * len(QUANTILES), float("nan"), (0.0, 1.0), (), len(ratio))
    over = int((good > 1.0).sum())
    quantiles = tuple(float(q) for q in np.quantile(good, QUANTILES))
    drivers = _drivers(good, values[solved], spans)
    return Sampled(quantiles, over / len(good), proportion(over, len(good)), drivers, int((~solved).sum()))


def proportion(hits: int, count: int, confidence: float = 0.95) -> tuple[float, float]:
    """The exact confidence interval of a share (Clopper and Pearson, Biometrika 26, 404-413, 1934)."""
    from scipy.stats import beta

    tail = (1.0 - confidence) / 2.0
    low = 0.0 if hits == 0 else float(beta.ppf(tail, hits, count - hits + 1))
    high = 1.0 if hits == count else float(beta.ppf(1.0 - tail, hits + 1, count - hits))
    return low, high


def _drivers(ratio: Array, values: Array, spans: Sequence[Variable]) -> tuple[tuple[str, float], ...]:
    """Squared rank correlations (Spearman) of each value with the quantity, scaled to sum to one; the largest five."""
    if len(ratio) < 8 or np.ptp(ratio) == 0.0:
        return ()
    ranks = _ranks(ratio)
    squares = np.array([np.corrcoef(ranks, _ranks(values[:, k]))[0, 1] ** 2 for k in range(values.shape[1])])
    total = squares.sum()
    order = np.argsort(-squares)[:5]
    return tuple((spans[k].key, float(squares[k] / total)) for k in order if squares[k] > 0.01 * total)


def _ranks(values: Array) -> Array:
    return np.argsort(np.argsort(values)).astype(float)
