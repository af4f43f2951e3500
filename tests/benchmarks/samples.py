"""Speed of samples and of the worst case, as ratios measured side by side in one run:  python -m tests.benchmarks.samples

Compared with a loop over scipy.optimize.root with the analytic Jacobian (started warm from the nominal point, and cold
by Levenberg-Marquardt) and with the floor of batched dense LAPACK solves.  All give the same answers within 1e-9.
"""

from __future__ import annotations

import time
from collections.abc import Callable

import numpy as np
from scipy.optimize import root

import netaudit
from netaudit.audit.worst import Explorer
from netaudit.solve.operate import Operation
from netaudit.solve.sensitivity import Variable, assign, variables
from netaudit.solve.settle import Job, Settled

SAMPLES, LOOPED = 10_000, 200


def board(seed: int = 2) -> str:
    """60 nodes, 100 parts, 14 junctions."""
    rng = np.random.default_rng(seed)
    lines = ["netlist 1", "ground GND", "ambient 25degC", "PS1 supply 12V 10.8V..13.2V +:V -:GND"]
    for k in range(60):
        lines.append(f"R{k} resistor 1k 5% P_tot=125mW 1:{'V' if k % 4 == 0 else f'N{k - 1}'} 2:N{k}")
        if k % 4 == 1:
            lines.append(f"D{k} diode I_S=1e-14 n=1.5 A:N{k} K:GND")
        elif k % 5 < 3 and len(lines) < 103:
            lines.append(f"Q{k} resistor 2k2 5% P_tot=125mW 1:N{k} 2:{'GND' if k < 8 else f'N{rng.integers(k)}'}")
    return "\n".join(lines) + "\n"


def timed(work: Callable[[], object], repeat: int = 3) -> float:
    best = np.inf
    for _ in range(repeat):
        start = time.perf_counter()
        work()
        best = min(best, time.perf_counter() - start)
    return best


def baseline(operation: Operation, spans: tuple[Variable, ...], values: np.ndarray, cold: bool) -> np.ndarray:
    """A loop over samples with scipy.optimize.root."""
    system = operation.system
    out = []
    x0 = np.zeros(system.n) if cold else operation.boards[0].x[0]
    for row in values:
        overrides, _ = assign(spans, row, 25.0)
        num = system.numbers(overrides)

        def residual(x: np.ndarray) -> np.ndarray:
            return system.residual(num, x, num.branches.value(system.sense(num, x))[0])  # noqa: B023

        def jacobian(x: np.ndarray) -> np.ndarray:
            return system.jacobian(num, num.branches.value(system.sense(num, x))[1])  # noqa: B023

        with np.errstate(all="ignore"):
            found = root(residual, x0, jac=jacobian, method="lm" if cold else "hybr", tol=1e-13)
        out.append(found.x)
    return np.array(out)


def main() -> None:
    operation = Operation(netaudit.loads(board()).board.circuits[0])
    operation.result()
    solver, system = operation.solver, operation.system
    spans = variables(solver)
    solver.prepare(operation.boards[0])
    print(f"{len(operation.circuit.devices)} parts, {system.n} unknowns, {system.m} junctions, {len(spans)} tolerances")
    rng = np.random.default_rng(1)
    low, high = (np.array([getattr(v.quantity, side) for v in spans]) for side in ("low", "high"))
    values = low + (high - low) * rng.random((SAMPLES, len(spans)))

    def ours() -> Settled:
        overrides, _ = assign(spans, values, 25.0)
        start = solver.job({}, None, SAMPLES)
        u0 = np.repeat(operation.boards[0].u, SAMPLES, axis=0)
        return solver.settle(Job(overrides, 25.0, SAMPLES, u0, start.t0))

    rate = SAMPLES / timed(ours)
    settled = ours()
    part = values[:LOOPED]
    warm = LOOPED / timed(lambda: baseline(operation, spans, part, False), 1)
    cold = LOOPED / 4 / timed(lambda: baseline(operation, spans, part[: LOOPED // 4], True), 1)
    reference = baseline(operation, spans, part, False)
    error = float(np.abs(reference - settled.solved.x[:LOOPED]).max())
    iterations = int(settled.iterations.max())
    jac = system.jacobian(settled.solved.num, settled.solved.num.branches.value(settled.solved.u)[1])
    right = np.ones((SAMPLES, system.n, 1))
    floor = SAMPLES / (timed(lambda: np.linalg.solve(jac, right)) * iterations)
    print(
        f"samples: {rate:,.0f}/s; over warm root {rate / warm:.0f}, over cold LM {rate / cold:.0f}, "
        f"over {iterations} batched LAPACK solves {rate / floor:.1f}; largest difference {error:.1e}"
    )

    def cold_solve() -> object:
        return solver.settle(solver.job())

    def worst() -> object:
        names = [d.name for d in operation.circuit.devices if d.kind != "supply"]
        return Explorer(solver, operation.boards[0]).extremes([lambda b, n=n: b.view(n).power for n in names])

    print(f"worst case of all powers: {timed(worst, 2) / timed(cold_solve):.0f} cold solves")


if __name__ == "__main__":
    main()
