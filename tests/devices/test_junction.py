"""Junctions: temperature, leakage, knees, and what is refused."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

import netaudit
from netaudit.failure import InputError
from netaudit.interface import LoadedBoard
from netaudit.solve.point import Point

BOLTZMANN, CHARGE = 1.380649e-23, 1.602176634e-19
T0 = 298.15


def solve(text: str, celsius: float = 25.0) -> Point:
    result = netaudit.loads(f"netlist 1\nground GND\nambient {celsius}degC\n{text}").solve()[0]
    assert len(result.points) == 1, result.failure
    return result.points[0]


def forward_voltage(keys: str, amperes: float, celsius: float = 25.0) -> float:
    return solve(f"I1 current-source {amperes!r}A +:A -:GND\nD1 diode {keys} A:A K:GND\n", celsius).nets["A"]


def breakdown_voltage(keys: str, amperes: float, celsius: float = 25.0) -> float:
    return solve(f"I1 current-source {amperes!r}A +:A -:GND\nD1 zener {keys} K:A A:GND\n", celsius).nets["A"]


@pytest.mark.parametrize("celsius", [-40.0, 25.0, 60.0, 125.0])
@pytest.mark.parametrize(
    ("extra", "gap", "power"), [("", 1.12, 3.0), ("E_g=1.2eV", 1.2, 3.0), ("material=schottky", 0.69, 2.0)]
)
def test_saturation_current_follows_its_law(celsius: float, extra: str, gap: float, power: float) -> None:
    """The law as the language states it, with its sum written out here."""
    n, i_s, i, t = 1.7, 2e-9, 3e-3, celsius + 273.15
    hot = i_s * (t / T0) ** (power / n) * np.exp(gap * CHARGE / (n * BOLTZMANN) * (1 / T0 - 1 / t))
    wanted = n * BOLTZMANN * t / CHARGE * np.log1p(i / hot)
    assert forward_voltage(f"I_S=2nA n={n} {extra}", i, celsius) == pytest.approx(wanted, rel=1e-9)


def test_saturation_current_stated_at_another_temperature() -> None:
    """At T_0 the stated I_S holds as it is."""
    wanted = BOLTZMANN * 358.15 / CHARGE * np.log1p(1e-3 / 1e-9)
    assert forward_voltage("I_S=1nA T_0=85degC", 1e-3, 85.0) == pytest.approx(wanted, rel=1e-9)


def test_measured_drift_of_the_forward_voltage_wins_over_the_gap() -> None:
    keys = 'I_S=1nA n=1.8 R_S=2ohm E_g=0.5eV alpha_VF="-1.9mV/K @ 1mA"'
    cold, hot = (forward_voltage(keys, 1e-3, t) for t in (25.0, 75.0))
    assert (hot - cold) / 50 == pytest.approx(-1.9e-3, rel=1e-4)


def test_silicon_falls_by_about_two_millivolts_a_kelvin() -> None:
    """Common practice: about -2 mV/K near 1 mA for a small silicon junction."""
    drift = (forward_voltage("I_S=10fA", 1e-3, 35.0) - forward_voltage("I_S=10fA", 1e-3, 25.0)) / 10
    assert -2.3e-3 < drift < -1.6e-3


@pytest.mark.parametrize(("celsius", "factor"), [(25.0, 1.0), (35.0, 2.0), (65.0, 16.0)])
def test_leakage_is_exact_at_its_point_and_doubles_each_ten_kelvin(celsius: float, factor: float) -> None:
    text = 'PS1 supply 40V sinks=yes +:V -:GND\nD1 diode I_S=1e-20 I_R="100uA @ 40V" K:V A:GND\n'
    assert float(solve(text, celsius).view("D1").i("K")) == pytest.approx(100e-6 * factor, rel=1e-9)


def test_nothing_flows_without_a_voltage() -> None:
    for kind, keys in (("diode", 'I_S=1nA I_R="1uA @ 40V" V_Z=60V'), ("zener", "V_Z=3V I_Z=5mA r_Z=90ohm")):
        p = solve(f"R1 resistor 1k 1:A 2:GND\nD1 {kind} {keys} A:A K:GND\n", 85.0)
        assert float(p.view("D1").i("A")) == 0.0


@pytest.mark.parametrize(
    "keys", ["V_Z=5.1V I_Z=5mA r_Z=20ohm", "V_Z=2.4V I_Z=5mA r_Z=400ohm", "V_Z=75V I_Z=2mA r_Z=1ohm"]
)
def test_breakdown_passes_through_its_point_even_when_soft(keys: str) -> None:
    volts, amperes = float(keys.split("V_Z=")[1].split("V")[0]), float(keys.split("I_Z=")[1].split("mA")[0]) * 1e-3
    assert breakdown_voltage(f"{keys} I_S=1e-25", amperes) == pytest.approx(volts, rel=1e-9)


@pytest.mark.parametrize(
    ("alpha", "volts"), [("0.05%/K", 5.1 * 1.03), ("500ppm/K", 5.1 * 1.03), ("-1.5mV/K", 5.1 - 0.09)]
)
def test_breakdown_voltage_moves_with_temperature(alpha: str, volts: float) -> None:
    keys = f"V_Z=5.1V I_Z=5mA r_Z=20ohm alpha_VZ={alpha} I_S=1e-25"
    assert breakdown_voltage(keys, 5e-3, 85.0) == pytest.approx(volts, rel=1e-9)


def test_spread_of_the_slope_resistance_reaches_the_worst_case() -> None:
    """At 20 mA the largest r_Z gives the largest power: v = V_Z + r_Z/2 (I_Z ln(i/I_Z) + i - I_Z)."""
    board = netaudit.loads(
        "netlist 1\nground GND\nambient 25degC\nI1 current-source 20mA +:A -:GND\n"
        "D1 zener V_Z=5.1V I_Z=5mA r_Z=20ohm,10..40 P_tot=1W K:A A:GND\n"
    )
    power = next(s for s in board.audit().stresses if (s.device, s.quantity) == ("D1", "power"))
    wanted = 0.02 * (5.1 + 20 * (5e-3 * np.log(4) + 15e-3))
    assert power.worst == pytest.approx(wanted, rel=1e-6)
    assert power.corner["D1.r_Z"] == 40.0


@pytest.mark.parametrize(
    ("device", "said"),
    [
        ("diode n=2", "n without I_S"),
        ("led material=red n=1.2", "n without I_S"),
        ("diode I_S=1nA I_R=1uA", "I_R needs its condition"),
        ('diode I_S=1nA alpha_VF="2mV/K @ 1mA"', "with its sign"),
        ("diode I_S=1nA V_F=0.7V", "no key V_F"),
        ("diode I_S=0A", "above zero"),
        ("zener V_Z=3.3V I_Z=20mA r_Z=400ohm", "r_Z I_Z is not below V_Z"),
        ("zener V_Z=5.1V I_Z=5mA r_Z=20ohm r_ZK=10ohm I_ZK=1mA", "r_ZK must be above r_Z"),
        ("zener V_Z=5.1V I_Z=5mA r_Z=20ohm r_ZK=100ohm", "at an I_ZK below I_Z"),
        ("zener V_Z=5.1V I_Z=5mA r_Z=20ohm r_ZK=100ohm I_ZK=5mA", "at an I_ZK below I_Z"),
    ],
)
def test_contradictions_are_wrong_input_with_a_place(device: str, said: str) -> None:
    with pytest.raises(InputError, match=said) as error:
        netaudit.loads(f"netlist 1\nground GND\nD1 {device} A:A K:GND\n").solve()
    assert error.value.place is not None
    assert error.value.place.line == 3


@pytest.mark.parametrize(
    ("device", "missing", "rough"),
    [
        ("diode A:A K:GND", "no model", ""),
        ("zener A:A K:GND", "no V_Z", ""),
        ("suppressor V_RWM=10V 1:A 2:GND", "no V_Z", ""),
        ("diode I_S=1nA A:A K:GND", "", ""),
        ("led material=blue A:A K:GND", "", "default of"),
        ("zener V_Z=5.1V I_Z=5mA r_Z=20ohm A:A K:GND", "", ""),
        ("zener V_Z=5.1V A:A K:GND", "", "I_Z and r_Z are those of a typical 5.1 V part"),
        ("zener V_Z=5.1V I_Z=5mA A:A K:GND", "", "r_Z is that of a typical 5.1 V part"),
    ],
)
def test_what_a_model_lacks_is_said_and_not_guessed(device: str, missing: str, rough: str) -> None:
    circuit = netaudit.loads(f"netlist 1\nground GND\nD1 {device}\nR1 resistor 1k 1:A 2:GND\n").board.circuits[0]
    found = circuit.device("D1")
    assert (bool(found.missing), bool(found.rough)) == (bool(missing), bool(rough))
    assert missing in found.missing
    assert rough in found.rough


def board_with(tmp_path: Path, row: str, netlist: str) -> LoadedBoard:
    (tmp_path / "parts.toml").write_text(row, encoding="utf-8")
    path = tmp_path / "board.netlist"
    path.write_text(f'netlist 1\nparts "parts.toml"\nground GND\nambient 25degC\n{netlist}', encoding="utf-8")
    return netaudit.load(str(path))


def test_spread_of_the_forward_voltage_moves_the_curve_by_that_voltage(tmp_path: Path) -> None:
    row = '[D]\nkind="diode"\nI_S="1nA"\nn=1.8\nspread={ V_F="0.1V" }\n[D.ratings]\nP_tot="1W"\n'
    board = board_with(tmp_path, row, "I1 current-source 10mA +:A -:GND\nD1 diode part=D A:A K:GND\n")
    power = next(s for s in board.audit().stresses if (s.device, s.quantity) == ("D1", "power"))
    assert power.worst - power.nominal == pytest.approx(0.1 * 10e-3, rel=1e-6)
    assert power.corner["D1.V_F"] == pytest.approx(0.1)
