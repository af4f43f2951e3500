"""Linear networks: ``networkx.resistance_distance`` and closed forms of the textbooks (common practice)."""

from __future__ import annotations

import networkx as nx
import numpy as np
import pytest

import netaudit

HEAD = "netlist 1\nground GND\n"


def volts(text: str, net: str) -> float:
    result = netaudit.loads(HEAD + text).solve()[0]
    assert result.uniqueness == "proven"
    point = result.points[0]
    assert point.residual_current < 1e-9
    assert point.power_imbalance < 1e-9
    return point.nets[net]


@pytest.mark.parametrize("seed", range(12))
def test_effective_resistance_of_random_networks(seed: int) -> None:
    rng = np.random.default_rng(seed)
    size = int(rng.integers(4, 40))
    graph = nx.random_labeled_tree(size, seed=seed)
    for _ in range(size):
        a, b = rng.integers(size, size=2)
        if a != b:
            graph.add_edge(int(a), int(b))
    lines = ["I1 current-source 1A +:N1 -:GND"]
    for k, (a, b) in enumerate(graph.edges):
        ohms = float(10 ** rng.uniform(-2, 6))
        graph.edges[a, b]["r"] = ohms
        names = ["GND" if n == 0 else f"N{n}" for n in (a, b)]
        lines.append(f"R{k} resistor {ohms!r}ohm 1:{names[0]} 2:{names[1]}")
    wanted = nx.resistance_distance(graph, 0, 1, weight="r", invert_weight=True)
    assert volts("\n".join(lines) + "\n", "N1") == pytest.approx(wanted, rel=1e-6)


CUBE = [(a, a ^ bit) for a in range(8) for bit in (1, 2, 4) if a < a ^ bit]


@pytest.mark.parametrize(("corner", "wanted"), [(1, 7 / 12), (3, 3 / 4), (7, 5 / 6)])
def test_cube_of_unit_resistors_between_edge_face_and_space_diagonal(corner: int, wanted: float) -> None:
    names = ["GND" if k == 0 else f"N{k}" for k in range(8)]
    lines = [f"I1 current-source 1A +:{names[corner]} -:GND"]
    lines += [f"R{k} resistor 1ohm 1:{names[a]} 2:{names[b]}" for k, (a, b) in enumerate(CUBE)]
    assert volts("\n".join(lines) + "\n", names[corner]) == pytest.approx(wanted, rel=1e-12)


def test_balanced_wheatstone_bridge_has_no_voltage_across_its_galvanometer() -> None:
    text = (
        "PS1 supply 10V +:A -:GND\nR1 resistor 1k 1:A 2:B\nR2 resistor 2k 1:B 2:GND\nR3 resistor 5k 1:A 2:C\n"
        "R4 resistor 10k 1:C 2:GND\nR5 resistor 100R 1:B 2:C\n"
    )
    assert volts(text, "B") - volts(text, "C") == pytest.approx(0.0, abs=1e-14)


def test_long_ladder_approaches_the_golden_ratio() -> None:
    """R_in of the infinite ladder of unit resistors is (1 + sqrt 5) / 2."""
    lines = ["I1 current-source 1A +:N0 -:GND"]
    for k in range(40):
        lines.append(f"Rs{k} resistor 1ohm 1:N{k} 2:N{k + 1}")
        lines.append(f"Rp{k} resistor 1ohm 1:N{k + 1} 2:GND")
    assert volts("\n".join(lines) + "\n", "N0") == pytest.approx((1 + 5**0.5) / 2, rel=1e-12)


# IEC 60751, resistance of a Pt100 by its table (two decimals)
PT100 = {
    0: 100.00,
    50: 119.40,
    100: 138.51,
    150: 157.33,
    200: 175.86,
    300: 212.05,
    400: 247.09,
    600: 313.71,
    850: 390.48,
}


@pytest.mark.parametrize(("celsius", "ohms"), PT100.items())
def test_pt100_by_iec_60751(celsius: int, ohms: float) -> None:
    text = (
        f"ambient {celsius}degC\nI1 current-source 1mA +:A -:GND\n"
        "R1 resistor 100ohm alpha=3.9083e-3 alpha_2=-5.775e-7 T_0=0degC 1:A 2:GND\n"
    )
    assert volts(text, "A") * 1e3 == pytest.approx(ohms, abs=0.005)


def test_constants_are_those_of_codata() -> None:
    """scipy.constants (CODATA 2018): k and e are exact."""
    from scipy import constants

    from netaudit.devices import junction
    from netaudit.parts import fit

    assert constants.k == junction.BOLTZMANN
    assert constants.e == junction.CHARGE
    assert pytest.approx(constants.k * 298.15 / constants.e, rel=1e-15) == fit.V_T


# (volts, ohms, I_S, n, kelvin, amperes): closed form in 30 digits, computed
SINGLE = [
    (5.0, 1e3, 1e-14, 1.0, 300.15, 0.0043071121676178081),
    (5.0, 1e3, 2.52e-9, 1.752, 300.15, 0.0043492150382694999),
    (3.3, 100.0, 1e-18, 2.0, 298.15, 0.013899802162943877),
    (12.0, 470.0, 1e-12, 1.0, 358.15, 0.023962515557961612),
    (0.3, 1e3, 1e-14, 1.0, 300.15, 1.0895251893940313e-9),
]


@pytest.mark.parametrize(("v", "r", "i_s", "n", "kelvin", "amperes"), SINGLE)
def test_single_junction_at_its_own_temperature(
    v: float, r: float, i_s: float, n: float, kelvin: float, amperes: float
) -> None:
    celsius = kelvin - 273.15
    board = netaudit.loads(
        f"{HEAD}ambient {celsius!r}degC\nPS1 supply {v}V +:A -:GND\nR1 resistor {r}ohm 1:A 2:B\n"
        f"D1 diode I_S={i_s} n={n} T_0={celsius!r}degC A:B K:GND\n"
    )
    assert float(board.solve()[0].points[0].view("D1").i("A")) == pytest.approx(amperes, rel=1e-9)


def test_a_textbook_diode_example() -> None:
    """Neamen, Microelectronics, example 1.8 (from memory): 5 V, 2 kohm, I_S 1e-13 A, V_T 26 mV: 0.619 V, 2.19 mA.

    V_T = 26 mV is 28.5675 degC.
    """
    celsius = 0.026 * 1.602176634e-19 / 1.380649e-23 - 273.15
    board = netaudit.loads(
        f"{HEAD}ambient {celsius!r}degC\nPS1 supply 5V +:A -:GND\nR1 resistor 2k 1:A 2:B\n"
        f"D1 diode I_S=1e-13 T_0={celsius!r}degC A:B K:GND\n"
    )
    point = board.solve()[0].points[0]
    assert point.nets["B"] == pytest.approx(0.6190592, abs=1e-6)
    assert float(point.view("D1").i("A")) == pytest.approx(2.1904704e-3, rel=1e-6)
