"""Kinds with limits at, below and beyond each of them, case by case against closed forms."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from scipy.optimize import brentq

import netaudit
from netaudit.solve.point import Point

HEAD = "netlist 1\nground GND\nambient 25degC\n"
VT = 1.380649e-23 * 298.15 / 1.602176634e-19


def solve(text: str) -> Point:
    result = netaudit.loads(HEAD + text).solve()[0]
    stable = [p for p in result.points if p.stable is not False]
    assert len(stable) == 1, (result.failure, [p.nets for p in result.points])
    return stable[0]


@pytest.mark.parametrize(
    ("v_in", "ohms", "v_out"),
    [
        (12.0, 100.0, 5.0),  # regulates
        (6.0, 100.0, 5.0),  # exactly at its headroom of 1 V
        (5.5, 100.0, 4.5),  # drop-out: v_in - V_drop
        (0.5, 100.0, 0.0),  # below the drop-out there is nothing
        (12.0, 5.0, 2.5),  # 500 mA limit into 5 ohm
        (12.0, 0.01, 0.005),  # shorted
    ],
)
def test_regulator(v_in: float, ohms: float, v_out: float) -> None:
    p = solve(
        f"PS1 supply {v_in}V +:A -:GND\nU1 regulator 5V V_drop=1V limit=500mA I_Q=2mA IN:A OUT:B GND:GND\n"
        f"R1 resistor {ohms}ohm 1:B 2:GND\n"
    )
    assert p.nets["B"] == pytest.approx(v_out, abs=2e-9)
    quiescent = 2e-3 * min(v_in, 1.0)
    assert -float(p.view("PS1").i("+")) == pytest.approx(v_out / ohms + quiescent, rel=1e-6, abs=1e-9)


def test_regulator_is_fed_backwards_through_its_pass_transistor() -> None:
    p = solve(
        "PS1 supply 5V R=1ohm sinks=yes +:B -:GND\nU1 regulator off V_drop=1V IN:A OUT:B GND:GND\nR1 resistor 1k 1:A 2:GND\n"
    )
    current = brentq(lambda i: VT * np.log1p(i / 1e-14) + i * 1001 - 5, 1e-6, 1e-2)
    assert p.nets["A"] == pytest.approx(current * 1e3, rel=1e-6)


@pytest.mark.parametrize(("v_in", "delivers"), [(12.0, True), (7.0, True), (6.0, False)])
def test_converter_balances_power(v_in: float, delivers: bool) -> None:
    p = solve(
        f"PS1 supply {v_in}V +:A -:GND\nU1 converter 5V efficiency=80% V_I_min=7V limit=2A IN:A OUT:B GND:GND\n"
        "R1 resistor 10ohm 1:B 2:GND\n"
    )
    assert p.nets["B"] == pytest.approx(5.0 if delivers else 0.0, abs=1e-9)
    drawn = -float(p.view("PS1").i("+")) * v_in
    assert drawn == pytest.approx(25 / 10 / 0.8 if delivers else 0.0, abs=1e-9)


def test_converter_in_its_limit() -> None:
    p = solve(
        "PS1 supply 12V +:A -:GND\nU1 converter 5V efficiency=80% V_I_min=7V limit=1A IN:A OUT:B GND:GND\n"
        "R1 resistor 2ohm 1:B 2:GND\n"
    )
    assert p.nets["B"] == pytest.approx(2.0, rel=1e-9)
    assert -float(p.view("PS1").i("+")) * 12 == pytest.approx(2.0 * 1.0 / 0.8, rel=1e-9)


@pytest.mark.parametrize(
    ("v_in", "ohms", "v_out"),
    [(2.0, 10e3, 2.0 / (1 + 1e-5)), (4.99, 10e3, 4.9), (0.01, 10e3, 0.1), (2.0, 50.0, 1.0)],
)
def test_op_amp_follower_at_its_swing_and_current_limit(v_in: float, ohms: float, v_out: float) -> None:
    """Gain 1e5 about the middle of the rails: v_out = (2.5 + A v_in) / (1 + A)."""
    p = solve(
        f"PS1 supply 5V +:V -:GND\nPS2 supply {v_in}V +:A -:GND\nR2 resistor 1M 1:A 2:GND\n"
        "U1 opamp gain=100000 swing=100mV limit=20mA IN+:A IN-:B OUT:B V+:V V-:GND\n"
        f"R1 resistor {ohms}ohm 1:B 2:GND\n"
    )
    wanted = (2.5 + 1e5 * v_in) / (1 + 1e5) if v_out == 2.0 / (1 + 1e-5) else v_out
    assert p.nets["B"] == pytest.approx(wanted, rel=1e-9)


def test_shunt_reference_regulates_and_starves() -> None:
    text = (
        "PS1 supply {}V +:A -:GND\nR1 resistor 1k 1:A 2:B\nU1 shunt-reference V_ref=2.5V r_K=0.5ohm K:B A:GND REF:B\n"
    )
    p = solve(text.format(5))
    # v = 2.5 + 0.5 i and 5 - v = 1000 i
    i = 2.5 / 1000.5
    assert float(p.view("U1").i("K")) == pytest.approx(i, rel=1e-9)
    p = solve(text.format(2))
    assert p.nets["B"] == pytest.approx(2.0, rel=1e-9)


def test_shunt_reference_with_a_divider() -> None:
    p = solve(
        "PS1 supply 12V +:A -:GND\nR1 resistor 1k 1:A 2:B\nR2 resistor 10k 1:B 2:C\nR3 resistor 10k 1:C 2:GND\n"
        "U1 shunt-reference V_ref=2.5V K:B A:GND REF:C\n"
    )
    assert p.nets["B"] == pytest.approx(5.0, rel=1e-9)


def test_optocoupler_in_its_active_region_and_saturated() -> None:
    text = (
        "I1 current-source 5mA +:A -:GND\nU1 optocoupler CTR=50% material=infrared A:A K:GND C:C E:GND\n"
        "PS2 supply 5V +:V -:GND\nR1 resistor {} 1:V 2:C\n"
    )
    assert float(solve(text.format("500R")).view("U1").i("C")) == pytest.approx(2.5e-3, rel=0.01)
    p = solve(text.format("10k"))
    assert p.nets["C"] < 0.2
    assert float(p.view("U1").i("C")) == pytest.approx(0.5e-3, rel=0.05)


@pytest.mark.parametrize(("state", "volts"), [("high", 5 * 1000 / 1030), ("low", 0.0), ("off", 0.0)])
def test_driver(state: str, volts: float) -> None:
    p = solve(
        f"PS1 supply 5V +:V -:GND\nU1 driver {state} R_high=30ohm R_low=20ohm OUT:O V:V G:GND\nR1 resistor 1k 1:O 2:GND\n"
    )
    assert p.nets["O"] == pytest.approx(volts, rel=1e-9, abs=1e-8)


def test_driver_clamps_an_input_above_its_rail() -> None:
    p = solve(
        "PS1 supply 5V sinks=yes +:V -:GND\nPS2 supply 12V +:A -:GND\nR1 resistor 1k 1:A 2:O\nU1 driver off OUT:O V:V G:GND\n"
    )
    assert 5.5 < p.nets["O"] < 5.9


@pytest.mark.parametrize(
    ("value", "volts", "amperes"),
    [
        ("100mA", 5.0, 0.1),
        ("100mA", 0.5, 0.05),
        ("10W V_min=2V", 5.0, 2.0),
        ("10W V_min=2V", 1.0, 2.5),
        ("50ohm", 5.0, 0.1),
    ],
)
def test_load_fades_below_its_least_voltage(value: str, volts: float, amperes: float) -> None:
    p = solve(f"PS1 supply {volts}V +:A -:GND\nP1 load {value} +:A -:GND\n")
    assert float(p.view("P1").i("+")) == pytest.approx(amperes, rel=1e-9)


@pytest.mark.parametrize(("ohms", "volts"), [(100.0, 1.0), (499.0, 4.99), (1000.0, 5.0)])
def test_current_source_up_to_its_compliance(ohms: float, volts: float) -> None:
    p = solve(f"I1 current-source 10mA compliance=5V +:A -:GND\nR1 resistor {ohms}ohm 1:A 2:GND\n")
    assert p.nets["A"] == pytest.approx(volts, rel=1e-9)


def test_current_source_against_a_higher_voltage_delivers_nothing() -> None:
    p = solve("I1 current-source 10mA compliance=5V +:A -:GND\nPS1 supply 12V +:B -:GND\nR1 resistor 1k 1:B 2:A\n")
    assert float(p.view("I1").i("+")) == pytest.approx(0.0, abs=1e-12)
    assert p.nets["A"] == pytest.approx(12.0)


def test_trimmer_and_thermistor() -> None:
    p = solve("PS1 supply 10V +:A -:GND\nRV1 trimmer 10k at=0.25 1:A W:W 2:GND\n")
    assert p.nets["W"] == pytest.approx(7.5)
    board = netaudit.loads(
        "netlist 1\nground GND\nambient 85degC\nI1 current-source 1uA +:A -:GND\nRT1 thermistor 10k B=3976K 1:A 2:GND\n"
    )
    exact = 10e3 * np.exp(3976 * (1 / 358.15 - 1 / 298.15))
    assert board.solve()[0].points[0].nets["A"] == pytest.approx(exact * 1e-6, rel=1e-9)


def test_relay_joins_what_its_state_says() -> None:
    text = (
        "PS1 supply 12V +:V -:GND\nK1 relay {} R=240ohm C1:V C2:GND COM:V NO:A NC:B\n"
        "R1 resistor 1k 1:A 2:GND\nR2 resistor 1k 1:B 2:GND\n"
    )
    assert solve(text.format("on")).nets["A"] == pytest.approx(12.0)
    assert solve(text.format("off")).nets["B"] == pytest.approx(12.0)


def test_two_way_suppressor_breaks_down_both_ways() -> None:
    for sign in (1, -1):
        p = solve(
            f"PS1 supply {sign * 30}V sinks=yes +:A -:GND\nR1 resistor 1k 1:A 2:B\nD1 suppressor V_Z=18V I_Z=1mA r_Z=2ohm 1:B 2:GND\n"
        )
        assert abs(p.nets["B"]) == pytest.approx(18.0, abs=0.05)


def test_zener_passes_through_its_stated_point_with_its_slope() -> None:
    def volts(amperes: float) -> float:
        return solve(f"I1 current-source {amperes!r}A +:A -:GND\nD1 zener V_Z=5.1V I_Z=5mA r_Z=20ohm K:A A:GND\n").nets[
            "A"
        ]

    assert volts(5e-3) == pytest.approx(5.1, abs=1e-8)
    assert (volts(5.001e-3) - volts(4.999e-3)) / 2e-6 == pytest.approx(20.0, rel=1e-4)


def test_zener_with_a_knee_resistance() -> None:
    def slope(amperes: float) -> float:
        a, b = (
            solve(
                f"I1 current-source {i!r}A +:A -:GND\nD1 zener V_Z=5.1V I_Z=5mA r_Z=20ohm r_ZK=400ohm I_ZK=250uA K:A A:GND\n"
            ).nets["A"]
            for i in (amperes * 0.9999, amperes * 1.0001)
        )
        return (b - a) / (amperes * 2e-4)

    assert slope(5e-3) == pytest.approx(20.0, rel=1e-3)
    assert slope(250e-6) == pytest.approx(400.0, rel=1e-3)


def test_single_stage_bias_against_fifty_digits() -> None:
    """Ebers-Moll in transport form, solved with mpmath from the written equations."""
    mp.mp.dps = 40
    i_s, bf, br, vt = mp.mpf("1e-14"), 100, 2, mp.mpf(VT)

    def equations(b, c, e):  # type: ignore[no-untyped-def]  # mpmath numbers
        cc, ec = i_s * mp.expm1((b - e) / vt), i_s * mp.expm1((b - c) / vt)
        i_c, i_b = cc - ec * (1 + mp.mpf(1) / br), cc / bf + ec / br
        return ((5 - b) / 47000 - b / 10000 - i_b, (5 - c) / 2200 - i_c, i_b + i_c - e / 470)

    b, c, e = mp.findroot(equations, (0.84, 4.0, 0.21))
    p = solve(
        "PS1 supply 5V +:V -:GND\nR1 resistor 47k 1:V 2:B\nR2 resistor 10k 1:B 2:GND\nR3 resistor 2k2 1:V 2:C\n"
        "R4 resistor 470R 1:E 2:GND\nQ1 npn I_S=0.01pA beta_F=100 beta_R=2 B:B C:C E:E\n"
    )
    for net, wanted in (("B", b), ("C", c), ("E", e)):
        assert p.nets[net] == pytest.approx(float(wanted), rel=1e-10)


def test_square_law_source_follower() -> None:
    """v_out = R K/2 (v_in - v_out - V_th)^2: quadratic in closed form."""
    p = solve(
        "PS1 supply 12V +:V -:GND\nPS2 supply 6V +:G -:GND\nR9 resistor 1M 1:G 2:GND\nQ1 nmos V_th=2V K=0.01 body=no G:G D:V S:S\n"
        "R1 resistor 1k 1:S 2:GND\n"
    )
    a = 1000 * 0.01 / 2
    w = (-1 + np.sqrt(1 + 4 * a * 4)) / (2 * a)
    assert p.nets["S"] == pytest.approx(4 - w, rel=1e-9)


def test_junction_fet_current_source() -> None:
    """Gate to source through R: i = I_DSS (1 - i R / |V_P|)^2."""
    p = solve("PS1 supply 12V +:V -:GND\nJ1 njfet I_DSS=5mA V_P=-2V G:GND D:V S:S\nR1 resistor 1k 1:S 2:GND\n")
    i = brentq(lambda i: i - 5e-3 * (1 - i * 1e3 / 2) ** 2, 0, 2e-3)
    assert p.nets["S"] == pytest.approx(i * 1e3, rel=1e-6)


def test_data_sheet_values_of_a_transistor_come_back() -> None:
    """h_FE 200 and V_BE 0.70 V at 10 mA; R_DS(on) 50 mohm at 4.5 V."""
    p = solve(
        'PS1 supply 5V +:V -:GND\nI1 current-source 50uA +:B -:GND\nQ1 npn h_FE=200 V_BE="0.7V @ 10mA" B:B C:V E:GND\n'
    )
    assert float(p.view("Q1").i("C")) == pytest.approx(10e-3, rel=1e-6)
    assert p.nets["B"] == pytest.approx(0.7, abs=1e-6)
    p = solve(
        "PS1 supply 4.5V +:G -:GND\nR9 resistor 1M 1:G 2:GND\nI1 current-source 1mA +:D -:GND\n"
        'Q1 nmos V_GS_th=1.5V R_DS_on="50mohm @ 4.5V" G:G D:D S:GND\n'
    )
    assert p.nets["D"] / 1e-3 == pytest.approx(0.05, rel=1e-4)
