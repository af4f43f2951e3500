"""Self-heating against closed forms."""

from __future__ import annotations

import numpy as np
import pytest

import netaudit

HEAD = "netlist 1\nground GND\nambient 25degC\n"


def test_resistor_with_a_positive_coefficient_settles_at_its_quadratic() -> None:
    """P = V^2 / (R (1 + a dT)), dT = R_th P: a dT^2 + dT - R_th V^2 / R = 0."""
    board = netaudit.loads(HEAD + "PS1 supply 10V +:A -:GND\nR1 resistor 100R alpha=0.01 R_th_ja=100K/W 1:A 2:GND\n")
    point = board.solve()[0].points[0]
    rise = (-1 + np.sqrt(1 + 4 * 0.01 * 100 * 100 / 100)) / (2 * 0.01)
    assert point.temperatures["R1"] == pytest.approx(25 + rise, abs=1e-6)


@pytest.mark.parametrize(("share", "runs_away"), [(0.98, False), (1.02, True)])
def test_leaky_junction_runs_away_at_the_limit_of_stability(share: float, runs_away: bool) -> None:
    """Leakage that doubles each 10 K at constant voltage: dT = c exp(b dT) has a solution only for c b e <= 1."""
    b = np.log(2) / 10
    c = share / (b * np.e)
    volts, leak = 40.0, 1e-3
    r_th = float(c / (volts * leak))
    board = netaudit.loads(
        HEAD + f"PS1 supply {volts}V +:A -:GND\n"
        f'D1 diode I_S=1fA I_R="{leak}A @ {volts}V" R_th_ja={r_th!r}K/W T_j=175degC I_F=1A V_R=100V K:A A:GND\n'
    )
    rules = {f.rule for f in board.audit().findings if f.level == "error"}
    assert ("point/thermal-runaway" in rules) is runs_away


def test_parts_on_one_heat_path_warm_each_other() -> None:
    board = netaudit.loads(
        HEAD
        + "PS1 supply 10V +:A -:GND\nR1 resistor 100R R_th_jc=5K/W 1:A 2:GND\nR2 resistor 200R R_th_jc=10K/W 1:A 2:GND\n"
        "same-heat R1 R2 R_th=20K/W\n"
    )
    point = board.solve()[0].points[0]
    assert point.temperatures["R1"] == pytest.approx(25 + 20 * 1.5 + 5 * 1.0, abs=1e-6)
    assert point.temperatures["R2"] == pytest.approx(25 + 20 * 1.5 + 10 * 0.5, abs=1e-6)
