"""Circuits on which iterations fail easily: each must settle, with its certificate, in few steps."""

from __future__ import annotations

import numpy as np
import pytest

import netaudit
from netaudit.solve.point import ModeResult

HEAD = "netlist 1\nground GND\n"


def solve(text: str) -> ModeResult:
    return netaudit.loads(HEAD + text).solve()[0]


def string(
    volts: float, ohms: float, count: int, saturations: tuple[str, ...], reversed_at: tuple[int, ...] = ()
) -> str:
    lines = [f"PS1 supply {volts}V sinks=yes +:IN -:GND", f"R1 resistor {ohms}ohm 1:IN 2:N0"]
    for k in range(count):
        a, b = f"N{k}", "GND" if k == count - 1 else f"N{k + 1}"
        if k in reversed_at:
            a, b = b, a
        lines.append(f"D{k} diode I_S={saturations[k % len(saturations)]} A:{a} K:{b}")
    return "\n".join(lines) + "\n"


@pytest.mark.parametrize(
    ("text", "most"),
    [
        (string(1000, 100, 10, ("1e-14",)), 20),
        (string(1000, 0.001, 10, ("1e-14",)), 20),
        (string(100, 100, 1000, ("1e-14",)), 20),
        (string(1000, 100, 1000, ("1e-14", "1e-9", "1e-12")), 40),
        (string(-100, 100, 30, ("1e-14", "1e-9", "1e-12", "5e-13")), 40),
        (string(100, 100, 30, ("1e-14", "1e-9", "1e-12", "5e-13"), (3, 17)), 20),
    ],
)
def test_strings_of_junctions(text: str, most: int) -> None:
    result = solve(text)
    assert result.points, result.failure
    assert result.points[0].method == "newton"
    assert result.points[0].iterations <= most
    assert result.uniqueness == "proven"


def test_thirty_zeners_in_series() -> None:
    lines = ["PS1 supply 400V +:IN -:GND", "R1 resistor 1k 1:IN 2:N0"]
    for k in range(30):
        b = "GND" if k == 29 else f"N{k + 1}"
        lines.append(f"D{k} zener V_Z={3 + k % 9}.1V I_Z=5mA r_Z=20ohm K:N{k} A:{b}")
    result = solve("\n".join(lines) + "\n")
    assert result.points, result.failure
    assert result.points[0].iterations <= 40


def test_bridge_on_325_volts() -> None:
    result = solve(
        "ambient 25degC\nPS1 supply 325V +:A -:B\nR1 resistor 10R 1:A 2:C\n"
        "D1 bridge I_S=1nA n=1.8 AC1:C AC2:B +:P -:GND\nR2 resistor 1k 1:P 2:GND\n"
    )
    assert result.points, result.failure
    assert result.points[0].nets["P"] == pytest.approx(325 * 1000 / 1010, rel=0.01)


def test_supply_in_its_limit_down_to_a_short() -> None:
    for ohms in ("1k", "12R", "1R", "1mohm"):
        result = solve(f"PS1 supply 12V limit=1A +:A -:GND\nR1 resistor {ohms} 1:A 2:GND\n")
        assert result.points, result.failure
        r = {"1k": 1e3, "12R": 12.0, "1R": 1.0, "1mohm": 1e-3}[ohms]
        assert result.points[0].nets["A"] == pytest.approx(min(12.0, r * 1.0), rel=1e-9)


def test_negative_supply_in_its_limit() -> None:
    result = solve("PS1 supply -12V limit=1A +:A -:GND\nR1 resistor 2R 1:A 2:GND\n")
    assert result.points[0].nets["A"] == pytest.approx(-2.0, rel=1e-9)


def test_diode_across_a_stiff_supply_is_named_and_not_solved_to_a_fantastic_current() -> None:
    board = netaudit.loads(HEAD + "PS1 supply 12V +:A -:GND\nD1 diode I_S=1e-14 A:A K:GND\n")
    assert [f.rule for f in board.lint() if f.level == "error"] == ["graph/unlimited-junction"]
    assert not board.solve()[0].points


def test_contradicting_supplies_have_no_point_and_say_so() -> None:
    result = solve("PS1 supply 12V +:A -:GND\nPS2 supply 5V +:A -:GND\nR1 resistor 1k 1:A 2:GND\n")
    assert not result.points
    assert "no operating point" in result.failure


def test_constant_power_load_behind_a_resistor_has_the_two_points_of_its_quadratic() -> None:
    """V = I R + P / I: v = V/2 +- sqrt(V^2/4 - P R); the lower one is unstable; below V_min it fades to a third."""
    result = solve("PS1 supply 24V +:IN -:GND\nR1 resistor 10R 1:IN 2:X\nP1 load 10W V_min=2V +:X -:GND\n")
    found = sorted(p.nets["X"] for p in result.points)
    root = np.sqrt(144 - 100)
    assert max(found) == pytest.approx(12 + root, rel=1e-9)
    assert any(v == pytest.approx(12 - root, rel=1e-9) for v in found)


def test_large_rail_heavy_board_runs_sparse() -> None:
    rng = np.random.default_rng(3)
    lines = ["PS1 supply 12V +:V0 -:GND", "PS2 supply 5V +:V1 -:GND"]
    for k in range(600):
        lines.append(f"R{k} resistor {rng.choice([100, 330, 1000, 4700])}ohm 1:V{k % 2} 2:N{k}")
        if k % 3 == 0:
            lines.append(f"D{k} diode I_S=1e-14 n=1.5 A:N{k} K:GND")
        else:
            lines.append(f"Q{k} resistor 1k 1:N{k} 2:{'GND' if k % 3 == 1 else f'N{rng.integers(max(1, k))}'}")
    result = solve("\n".join(lines) + "\n")
    assert result.points, result.failure
    assert result.points[0].residual_current < 1e-10


def test_a_current_forced_into_a_blocking_junction_is_refused_with_a_sentence() -> None:
    result = solve("I1 current-source 1mA +:A -:GND\nD1 diode I_S=1pA A:GND K:A\n")
    assert not result.points
    assert "no way back" in result.failure
    assert result.failure_net == "A"


def test_amplifier_holds_the_current_of_a_sink() -> None:
    """By hand: the loop holds the emitter at 1 V, 10 mA in 100 ohm; of them beta/(beta + 1) come from the collector."""
    result = solve(
        "PS1 supply 12V +:V -:GND\nPS2 supply 1V +:IN -:GND\nR0 resistor 1M 1:IN 2:GND\n"
        "U1 opamp gain=1e5 swing=100mV limit=20mA IN+:IN IN-:E OUT:B V+:V V-:GND\n"
        "Q1 npn I_S=1fA beta_F=100 B:B C:C E:E\nR1 resistor 100R 1:E 2:GND\nR2 resistor 470R 1:V 2:C\n"
    )
    assert result.points, result.failure
    nets = result.points[0].nets
    assert nets["E"] == pytest.approx(1.0, abs=5e-5)
    assert nets["C"] == pytest.approx(12.0 - 470.0 * 0.01 * 100 / 101, abs=1e-3)


@pytest.mark.parametrize(("volts", "output"), [(2.5, 0.05), (-2.5, 4.95)])
def test_amplifier_with_positive_feedback_rests_at_its_swing(volts: float, output: float) -> None:
    """By hand: half the output is fed back, 0.025 V or 2.475 V; an input beyond either leaves one point."""
    result = solve(
        f"PS1 supply 5V +:V -:GND\nPS2 supply {volts}V sinks=yes +:IN -:GND\nR0 resistor 1M 1:IN 2:GND\n"
        "U1 opamp gain=1e5 swing=50mV IN+:P IN-:IN OUT:O V+:V V-:GND\nR1 resistor 10k 1:O 2:P\nR2 resistor 10k 1:P 2:GND\n"
    )
    assert [p.nets["O"] for p in result.points] == [pytest.approx(output, abs=1e-3)]
