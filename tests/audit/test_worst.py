"""The worst case against full enumeration of vertices and against closed forms."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest

import netaudit
from netaudit.audit.worst import Explorer
from netaudit.solve.operate import Operation
from netaudit.solve.sensitivity import assign
from netaudit.solve.settle import Job

HEAD = "netlist 1\nground GND\nambient 25degC\n"


def random_board(seed: int) -> str:
    rng = np.random.default_rng(seed)
    lines = ["PS1 supply 12V 10.8V..13.2V +:V -:GND"]
    nodes = ["V", "GND"]
    for k in range(7):
        a = nodes[int(rng.integers(len(nodes)))]
        lines.append(f"R{k} resistor {rng.integers(100, 5000)}ohm {rng.integers(1, 20)}% 1:{a} 2:N{k}")
        nodes.append(f"N{k}")
        if rng.random() < 0.4:
            b = nodes[int(rng.integers(len(nodes) - 1))]
            lines.append(f"D{k} diode I_S=1e-12 n=1.6 A:N{k} K:{b}")
    for k in range(7):
        b = nodes[int(rng.integers(len(nodes)))]
        if b != f"N{k}":
            lines.append(f"Q{k} resistor {rng.integers(100, 5000)}ohm 1:N{k} 2:{b}")
    return HEAD + "\n".join(lines) + "\n"


@pytest.mark.parametrize("seed", range(12))
def test_no_vertex_and_no_interior_point_is_worse(seed: int) -> None:
    operation = Operation(netaudit.loads(random_board(seed)).board.circuits[0])
    result = operation.result()
    assert result.points, result.failure
    explorer = Explorer(operation.solver, operation.boards[0])
    names = [d.name for d in operation.circuit.devices if d.kind != "supply"]
    objectives = [lambda b, n=n: b.view(n).power for n in names]
    extremes = explorer.extremes(objectives)
    vertices = np.array(list(product(*zip(explorer.low, explorer.high, strict=True))))
    rng = np.random.default_rng(seed)
    inside = explorer.low + (explorer.high - explorer.low) * rng.random((300, len(explorer.low)))
    rows = np.concatenate([vertices, inside])
    overrides, ambient = assign(explorer.spans, rows, 25.0)
    start = operation.solver.job({}, None, len(rows))
    job = Job(overrides, ambient, len(rows), np.repeat(operation.boards[0].u, len(rows), axis=0), start.t0)
    settled = operation.solver.settle(job)
    assert settled.converged.all()
    for objective, extreme in zip(objectives, extremes, strict=True):
        assert objective(settled.solved).max() <= extreme.value * (1 + 1e-9) + 1e-15


def test_power_that_peaks_inside_its_range() -> None:
    """Maximum power transfer: V^2 / (4 R_1) at R_2 = R_1, inside the range of R_2."""
    board = netaudit.loads(
        HEAD + "PS1 supply 10V 9V..10V +:A -:GND\nR1 resistor 100ohm 1% P_tot=5W 1:A 2:B\n"
        "R2 resistor 100ohm -50%..+100% P_tot=5W 1:B 2:GND\n"
    )
    stress = next(s for s in board.audit().stresses if s.device == "R2" and s.quantity == "power")
    assert stress.worst == pytest.approx(100 / (4 * 99), rel=1e-6)
    assert stress.corner["R1"] == pytest.approx(99.0)
    assert stress.corner["R2"] == pytest.approx(99.0, rel=1e-3)


def test_the_ratio_decides_with_the_limit_at_that_ambient() -> None:
    """P_tot falls from 70 degC to zero at 155 degC: at 112.5 degC half is left."""
    board = netaudit.loads(
        "netlist 1\nground GND\nambient 25degC -20degC..112.5degC\nPS1 supply 10V +:A -:GND\n"
        "R1 resistor 1k P_tot=125mW 1:A 2:GND\n"
    )
    stress = next(s for s in board.audit().stresses if s.device == "R1")
    assert stress.rating == pytest.approx(0.0625)
    assert stress.ratio == pytest.approx(1.6)
    assert stress.corner["ambient"] == pytest.approx(112.5)


def test_exactly_at_the_rating_passes() -> None:
    board = netaudit.loads(HEAD + "PS1 supply 10V +:A -:GND\nR1 resistor 100R P_tot=1W 1:A 2:GND\n")
    assert not [f for f in board.audit().findings if f.rule == "stress/power"]


def test_zero_current_at_the_limit_temperature_has_no_ratio() -> None:
    board = netaudit.loads(
        "netlist 1\nground GND\nambient 160degC\nPS1 supply 10V +:A -:GND\nR1 resistor 1k P_tot=125mW 1:A 2:GND\n"
    )
    audit = board.audit()
    assert audit.stresses[0].ratio is None
    assert audit.stresses[0].limit == 0.0
    assert audit.fails()
