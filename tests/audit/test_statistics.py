"""Samples: moments of a linear divider in closed form, the same boards for the same seed, correlated groups."""

from __future__ import annotations

import numpy as np
import pytest

import netaudit
from netaudit.audit.statistics import Plan, draw, proportion
from netaudit.solve.operate import Operation
from netaudit.solve.sensitivity import variables

BOARD = (
    "netlist 1\nground GND\nambient 25degC\nPS1 supply 10V 9V..11V +:A -:GND\nR1 resistor 1k 10% P_tot=100mW 1:A 2:B\n"
    "R2 resistor 1k 10% P_tot=100mW 1:B 2:GND\n"
)


def spans():  # type: ignore[no-untyped-def]  # variables of a solver
    return variables(Operation(netaudit.loads(BOARD).board.circuits[0]).solver)


@pytest.mark.parametrize("method", ["sobol", "latin-hypercube", "plain"])
def test_moments_of_the_drawn_values(method: str) -> None:
    values = draw(spans(), Plan(4096, method=method))  # type: ignore[arg-type]  # the three methods
    assert values[:, 0].mean() == pytest.approx(10.0, abs=0.05)
    assert values[:, 0].std() == pytest.approx(2 / 12**0.5, rel=0.05)
    assert values.min(axis=0).tolist() >= [9.0, 900.0, 900.0]


def test_normal_values_stay_within_their_span() -> None:
    values = draw(spans(), Plan(4096, distribution="normal"))
    assert values[:, 1].std() == pytest.approx(100 / 3, rel=0.05)
    assert np.abs(values[:, 1] - 1000).max() <= 100


def test_the_same_seed_draws_the_same_boards_and_groups_move_together() -> None:
    a, b, c = (draw(spans(), Plan(64, seed=s)) for s in (1, 1, 2))
    assert (a == b).all()
    assert (a != c).any()
    tied = draw(spans(), Plan(64, together=(("R1", "R2"),)))
    assert np.allclose(tied[:, 1], tied[:, 2])


def test_share_beyond_a_limit_and_its_drivers() -> None:
    """V_B^2 / R_2 of a divider: with both resistors tied, P = V^2 / (4 R)."""
    plan = Plan(2048, together=(("R1", "R2"),))
    board = netaudit.loads(BOARD.replace("R2 resistor 1k 10% P_tot=100mW", "R2 resistor 1k 10% P_tot=26mW"))
    sampled = next(s for s in board.audit(plan=plan).samples if s.device == "R2")
    rng = np.random.default_rng(0)
    v, r = 9 + 2 * rng.random(400_000), 900 + 200 * rng.random(400_000)
    share = float((v**2 / (4 * r) > 0.026).mean())
    assert sampled.statistics.beyond == pytest.approx(share, abs=0.01)
    low, high = sampled.statistics.interval
    assert low < share < high
    assert sampled.statistics.drivers[0][0] == "PS1"
    assert sampled.statistics.unsolved == 0


def test_exact_interval_of_a_share() -> None:
    """Clopper and Pearson: none of ten has the upper end 1 - 0.025^(1/10)."""
    assert proportion(0, 10)[1] == pytest.approx(1 - 0.025**0.1)
    assert proportion(10, 10) == (pytest.approx(0.025**0.1), 1.0)
