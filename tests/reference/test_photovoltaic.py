"""Single-diode operating points published with pvlib 0.11.0 (BSD-3): ``precise_iv_curves1/2``, 6,400 points.

I = I_L - I_0 (exp((V + I R_s) / (n N_s V_T)) - 1) - (V + I R_s) / R_sh: a current source, a junction of n N_s, R_sh, R_s.
"""

from __future__ import annotations

import csv
import json
from importlib import resources

import numpy as np
import pytest

import netaudit
from netaudit.solve.operate import Operation
from netaudit.solve.settle import Job

CELLS = {1: 72, 2: 140}


def data(name: str) -> str:
    return resources.files("pvlib").joinpath("data", name).read_text()


@pytest.mark.parametrize("number", [1, 2])
def test_all_points_within_a_nanoampere(number: int) -> None:
    rows = list(csv.DictReader(data(f"precise_iv_curves_parameter_sets{number}.csv").splitlines()))
    curves = json.loads(data(f"precise_iv_curves{number}.json"))["IV Curves"]
    checked = 0
    for row, curve in zip(rows, curves, strict=True):
        assert int(row["Index"]) == curve["Index"]
        n = float(row["n"]) * int(row["cells_in_series"])
        board = netaudit.loads(
            f"netlist 1\nground GND\nI1 current-source {float(row['photocurrent'])!r}A +:X -:GND\n"
            f"D1 diode I_S={float(row['saturation_current'])!r} n={n!r} A:X K:GND\n"
            f"R1 resistor {float(row['resistance_shunt'])!r}ohm 1:X 2:GND\n"
            f"R2 resistor {float(row['resistance_series'])!r}ohm 1:X 2:OUT\nPS1 supply 1V sinks=yes +:OUT -:GND\n"
        )
        volts = np.array([float(v) for v in curve["Voltages"]])
        wanted = np.array([float(i) for i in curve["Currents"]])
        operation = Operation(board.board.circuits[0])
        count = len(volts)
        start = operation.solver.job({}, None, count)
        settled = operation.solver.settle(Job({("PS1", "value"): volts}, start.ambient, count, start.u0, start.t0))
        assert settled.converged.all()
        found = settled.solved.view("PS1").i("+")
        assert np.abs(found - wanted).max() <= 1e-9
        checked += count
    assert checked == 3200
