"""``point/thermal-runaway``: a fold on the way from cold, at nominal values and at the hottest corners."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

import numpy as np

from netaudit.audit.rule import about
from netaudit.audit.worst import Explorer
from netaudit.finding import Finding
from netaudit.solve.operate import Operation
from netaudit.solve.point import ModeResult, Point
from netaudit.solve.runaway import Followed, follow
from netaudit.solve.sensitivity import assign
from netaudit.solve.settle import Job

#: thermal loop gain from which a warning is given
GAIN = 0.5
#: below this gain at nominal values the corners are not followed
_QUIET = 0.1


def thermal_findings(operation: Operation, explorer: Explorer, result: ModeResult, point: Point) -> Iterable[Finding]:
    """Runaway (error) and large loop gain (warning) of a mode."""
    if not operation.solver.heat.any:
        return
    if result.runaway:
        yield _runaway(operation, result.runaway, {})
        return
    gains = dict(point.thermal_gain)
    corner: Mapping[str, float] = {}
    if explorer.spans and (explorer.failures or max(gains.values(), default=0.0) > _QUIET):
        followed, corner = _hottest(operation, explorer)
        if followed.runaway:
            yield _runaway(operation, followed.runaway, corner)
            return
        matrix = followed.settled.gain_matrix
        if matrix is not None:
            diagonal = np.diagonal(matrix[0])
            gains = {
                operation.system.devices[k].name: float(g)
                for k, g in zip(operation.solver.heat.devices, diagonal, strict=True)
            }
    for name, gain in gains.items():
        if gain > GAIN:
            device = operation.circuit.device(name)
            yield Finding(
                "point/thermal-runaway",
                "warning",
                f"{name}: the thermal loop gain R_th dP/dT_j is {gain:.2f} (runaway at 1): improve its cooling or "
                "lower its power",
                quantity="loop-gain",
                value=gain,
                limit=GAIN,
                unit="1",
                mode=result.mode,
                corner=corner,
                **about(device),
            )


def _hottest(operation: Operation, explorer: Explorer) -> tuple[Followed, dict[str, float]]:
    """Follows the corner that failed, else the one with the hottest junction."""
    solver = operation.solver
    if explorer.failures:
        row = np.array([explorer.failures[0][v.key] for v in explorer.spans])
    else:
        hottest = [float(np.max(explorer.boards[b].temperature[m][solver.heat.devices])) for b, m in explorer.member]
        row = explorer.rows[int(np.argmax(hottest))]
    overrides, air = assign(explorer.spans, row[None, :], solver.system.circuit.ambient.nominal)
    ambient = np.broadcast_to(np.asarray(air, dtype=float), (1,))
    t0 = np.broadcast_to(ambient[:, None], (1, len(solver.system.devices))).copy()
    job = Job(overrides, ambient, 1, solver.system.start[None, :], t0)
    return follow(solver, job), {v.key: float(x) for v, x in zip(explorer.spans, row, strict=True)}


def _runaway(operation: Operation, names: tuple[str, ...], corner: Mapping[str, float]) -> Finding:
    device = operation.circuit.device(names[0])
    others = f" (together with {', '.join(names[1:])})" if len(names) > 1 else ""
    return Finding(
        "point/thermal-runaway",
        "error",
        f"{names[0]}{others} runs away thermally: followed from cold, the operating point folds before the actual "
        "thermal resistance is reached; improve the cooling or lower the power",
        quantity="loop-gain",
        limit=1.0,
        unit="1",
        mode=operation.circuit.mode,
        corner=corner,
        **about(device),
    )
