"""Kirchhoff and Tellegen recomputed from the pins of a few hundred random circuits; order does not change the answer."""

from __future__ import annotations

import numpy as np
import pytest

import netaudit
from netaudit.solve.point import ModeResult

HEAD = ["netlist 1", "ground GND", "ambient 25degC"]
SATURATIONS = ("0.001pA", "0.01pA", "1pA", "4.7pA", "2.52nA", "6.89nA", "1uA")
SERIES = ("", "R_S=42mohm", "R_S=5ohm", "R_S=25ohm")


def mesh(seed: int) -> list[str]:
    """Resistors in a tree, diodes anywhere, a few supplies and current sources."""
    rng = np.random.default_rng(seed)
    nodes, lines = ["GND"], []

    def ohms() -> str:
        return f"{10 ** rng.uniform(0.5, 4.5):.3g}ohm"

    for k in range(1, int(rng.integers(4, 25))):
        lines.append(f"R{k} resistor {ohms()} 1:N{k} 2:{rng.choice(nodes)}")
        nodes.append(f"N{k}")
    for k in range(int(rng.integers(2, 25))):
        a, b = rng.choice(nodes, 2, replace=False)
        lines.append(
            f"D{k} diode I_S={rng.choice(SATURATIONS)} n={rng.choice([1, 1.08, 1.9])} {rng.choice(SERIES)} A:{a} K:{b}"
        )
    for k in range(int(rng.integers(1, 5))):
        lines.append(f"PS{k} supply {rng.choice([3.3, 5, 24, 48, -12])}V sinks=yes +:S{k} -:GND")
        lines.append(f"Rs{k} resistor {ohms()} 1:S{k} 2:{rng.choice(nodes[1:])}")
    for k in range(int(rng.integers(0, 4))):
        a, b = rng.choice(nodes, 2, replace=False)
        lines.append(f"I{k} current-source {rng.choice(['100uA', '5mA', '20mA'])} +:{a} -:{b}")
    return lines


def stages(seed: int) -> list[str]:
    """Transistors of both polarities among resistors."""
    rng = np.random.default_rng(seed)
    lines, nodes = (
        ["PS1 supply 12V sinks=yes +:VCC -:GND", "PS2 supply -5V sinks=yes +:VEE -:GND"],
        ["VCC", "GND", "VEE"],
    )
    for k in range(int(rng.integers(4, 9))):
        lines.append(f"R{k} resistor {10 ** rng.uniform(1.5, 4.5):.3g}ohm 1:N{k} 2:{rng.choice(nodes)}")
        nodes.append(f"N{k}")
    for k in range(int(rng.integers(1, 4))):
        b, c, e = rng.choice(nodes[3:], 3, replace=False)
        lines.append(f"Q{k} {rng.choice(['npn', 'pnp'])} I_S=0.01pA beta_F=100 beta_R=2 B:{b} C:{c} E:{e}")
    return lines


def solved(lines: list[str]) -> ModeResult:
    result = netaudit.loads("\n".join([*HEAD, *lines]) + "\n").solve()[0]
    assert result.points, result.failure
    return result


def check(result: ModeResult) -> None:
    for point in result.points:
        sums: dict[str, float] = {}
        sizes: dict[str, float] = {}
        total = turned = 0.0
        for device in result.circuit.devices:
            view = point.view(device.name)
            for pin, net in device.pins.items():
                i, v = float(view.i(pin)), float(view.v(pin))
                sums[net] = sums.get(net, 0.0) + i
                sizes[net] = sizes.get(net, 0.0) + abs(i)
                total += v * i
                turned += abs(v * i)
        assert all(abs(sums[net]) <= 1e-9 * sizes[net] + 1e-15 for net in sums)
        assert abs(total) <= 1e-9 * turned + 1e-15


@pytest.mark.parametrize("first", range(0, 200, 20))
def test_random_meshes_balance(first: int) -> None:
    for seed in range(first, first + 20):
        check(solved(mesh(seed)))


@pytest.mark.parametrize("first", range(0, 60, 20))
def test_random_transistor_stages_balance(first: int) -> None:
    for seed in range(first, first + 20):
        check(solved(stages(seed)))


@pytest.mark.parametrize("seed", range(12))
def test_the_order_of_the_statements_does_not_change_the_answer(seed: int) -> None:
    lines = mesh(seed)
    nets = solved(lines).points[0].nets
    again = solved(list(np.random.default_rng(seed).permutation(lines))).points[0].nets
    assert {k: pytest.approx(v, rel=1e-9, abs=1e-9) for k, v in nets.items()} == dict(again)
