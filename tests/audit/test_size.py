"""Sizing against hand calculation."""

from __future__ import annotations

import pytest

import netaudit
from netaudit.audit.size import preferred_values, size
from netaudit.failure import InputError

HEAD = "netlist 1\nground GND\nambient 25degC\n"


def test_a_resistor_between_its_power_and_an_expectation() -> None:
    """P = V^2/R <= 0.25 W at 12 V and the low end: R >= 576 / 0.95; I >= 5 mA at 12 V and the high end: R <= 2400 / 1.05."""
    board = netaudit.loads(
        HEAD + "PS1 supply 12V +:A -:GND\nR1 resistor 1k 5% P_tot=250mW 1:A 2:GND\nexpect current R1 5mA..\n"
    ).board
    found = size(board, "R1", series=("E12", "E24"))
    assert found.passes == ((pytest.approx(576 / 0.95, rel=1e-4), pytest.approx(2400 / 1.05, rel=1e-4)),)
    assert found.limited_by == (("stress/power R1", "expect/missed R1"),)
    assert found.preferred["E12"] == (680.0, 820.0, 1000.0, 1200.0, 1500.0, 1800.0, 2200.0)


def test_no_value_passes() -> None:
    board = netaudit.loads(
        HEAD + "PS1 supply 12V +:A -:GND\nR1 resistor 1k P_tot=10mW 1:A 2:GND\nexpect current R1 50mA..\n"
    ).board
    assert size(board, "R1").passes == ()


def test_a_device_without_a_value_is_refused() -> None:
    board = netaudit.loads(
        HEAD + "PS1 supply 12V +:A -:GND\nD1 led material=red A:A K:B\nR1 resistor 1k 1:B 2:GND\n"
    ).board
    for name in ("D1", "R9"):
        with pytest.raises(InputError):
            size(board, name)


def test_preferred_values_of_iec_60063() -> None:
    """IEC 60063: E12 has twelve values a decade, E96 ninety-six."""
    assert preferred_values("E12", 1.0, 9.9) == [1.0, 1.2, 1.5, 1.8, 2.2, 2.7, 3.3, 3.9, 4.7, 5.6, 6.8, 8.2]
    assert len(preferred_values("E96", 100.0, 999.0)) == 96
