"""Bias examples of a textbook, from memory: Sedra and Smith, Microelectronic Circuits, 5th edition.

The book assumes a constant V_BE; here I_S is chosen so that the junction has that voltage at the book's current, which
makes the assumption exact at the answer.
"""

from __future__ import annotations

import math

import pytest

import netaudit

HEAD = "netlist 1\nground GND\nambient 25degC\n"
VT = 1.380649e-23 * 298.15 / 1.602176634e-19


def test_example_5_4_a_bipolar_stage() -> None:
    """V_B 4 V, R_E 3.3 kohm, R_C 4.7 kohm, 10 V, beta 100: I_E 1 mA, I_C 0.99 mA, V_C 5.3 V (V_BE 0.7 V)."""
    i_s = 0.99e-3 / math.expm1(0.7 / VT)
    board = netaudit.loads(
        f"{HEAD}PS1 supply 10V +:VCC -:GND\nPS2 supply 4V +:B -:GND\nR1 resistor 4.7kohm 1:VCC 2:C\n"
        f"R2 resistor 3.3kohm 1:E 2:GND\nQ1 npn I_S={i_s!r} beta_F=100 beta_R=1 B:B C:C E:E\n"
    )
    point = board.solve()[0].points[0]
    assert point.nets["E"] == pytest.approx(3.3, abs=0.002)
    assert -float(point.view("Q1").i("E")) == pytest.approx(1e-3, rel=1e-3)
    assert float(point.view("Q1").i("C")) == pytest.approx(0.99e-3, rel=1e-3)
    assert point.nets["C"] == pytest.approx(5.3, abs=0.06)


def test_example_4_2_a_field_effect_stage() -> None:
    """V_t 0.7 V, 100 uA/V^2 times 32, +-2.5 V, R_D 5 kohm, R_S 3.25 kohm: I_D 0.4 mA, V_D +0.5 V, V_S -1.2 V."""
    board = netaudit.loads(
        f"{HEAD}PS1 supply 2.5V +:VDD -:GND\nPS2 supply -2.5V +:VSS -:GND\nR1 resistor 5kohm 1:VDD 2:D\n"
        "R2 resistor 3.25kohm 1:S 2:VSS\nQ1 nmos V_th=0.7V K=3.2e-3 body=no G:GND D:D S:S\n"
    )
    point = board.solve()[0].points[0]
    assert float(point.view("Q1").i("D")) == pytest.approx(0.4e-3, rel=1e-9)
    assert point.nets["D"] == pytest.approx(0.5, abs=1e-9)
    assert point.nets["S"] == pytest.approx(-1.2, abs=1e-9)
