"""What holds for every kind: pin currents sum to zero, the derivative is the difference, passive parts deliver nothing."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import netaudit
from netaudit.devices import KINDS
from netaudit.solve.system import System

EXAMPLES: dict[str, list[str]] = {
    "resistor": ["1k 1:A 2:B", "100R alpha=0.004 alpha_2=1e-6 1:A 2:B", "0R 1:A 2:B", "1mohm 1:A 2:B"],
    "link": ["1:A 2:B", "R=10mohm 1:A 2:B"],
    "trimmer": ["10k at=0.3 1:A W:B 2:C", "10k at=0 1:A W:B 2:C"],
    "thermistor": ["10k B=3950K 1:A 2:B"],
    "capacitor": ["10u 1:A 2:B", "10u leakage=1Mohm +:A -:B"],
    "inductor": ["10uH R=1ohm 1:A 2:B"],
    "fuse": ["2A R=50mohm 1:A 2:B", "open 1:A 2:B"],
    "switch": ["closed R_on=20mohm 1:A 2:B", "open 1:A 2:B"],
    "relay": ["on R=120ohm C1:A C2:B COM:C NO:D NC:E", "off R=120ohm C1:A C2:B COM:C NO:D NC:E"],
    "supply": ["12V +:A -:B", "12V R=1ohm limit=1A +:A -:B", "-5V limit=1A +:A -:B", "off +:A -:B"],
    "current-source": ["10mA +:A -:B", "10mA compliance=5V +:A -:B"],
    "load": ["100mA +:A -:B", "5W V_min=3V +:A -:B", "50ohm +:A -:B"],
    "driver": [f"{state} R_high=30ohm R_low=20ohm OUT:A V:B G:C" for state in ("high", "low", "off")],
    "diode": ["I_S=1nA n=1.8 R_S=0.1ohm A:A K:B", 'I_S=1nA I_R="10uA @ 40V" V_Z=60V A:A K:B'],
    "led": ["material=red A:A K:B"],
    "zener": ["V_Z=5.1V I_Z=5mA r_Z=20ohm A:A K:B", "V_Z=12V r_Z=10ohm I_Z=10mA r_ZK=200ohm I_ZK=1mA A:A K:B"],
    "suppressor": ["V_Z=13V I_Z=1mA r_Z=2ohm A:A K:B", "V_Z=13V I_Z=1mA r_Z=2ohm 1:A 2:B"],
    "bridge": ["I_S=1nA n=1.8 AC1:A AC2:B +:C -:D"],
    "shunt-reference": ["V_ref=2.495V r_K=0.2ohm K:A A:B REF:C"],
    "npn": ["I_S=0.01pA beta_F=100 beta_R=2 B:A C:B E:C", "h_FE=200 R_B=10ohm R_C=1ohm R_E=0.5ohm B:A C:B E:C"],
    "pnp": ["I_S=0.01pA beta_F=100 B:A C:B E:C", "h_FE=200 V_EBO=5V B:A C:B E:C"],
    "nmos": ["V_th=2V K=0.5 G:A D:B S:C", 'V_GS_th=1.5V R_DS_on="50mohm @ 4.5V" G:A D:B S:C'],
    "pmos": ["V_th=-2V K=0.5 G:A D:B S:C"],
    "njfet": ["I_DSS=5mA V_P=-2V G:A D:B S:C"],
    "pjfet": ["I_DSS=5mA V_P=2V G:A D:B S:C"],
    "optocoupler": ["CTR=100% A:A K:B C:C E:D"],
    "opamp": ["IN+:A IN-:B OUT:C V+:D V-:E", "swing=1V limit=20mA I_Q=1mA I_B=1uA IN+:A IN-:B OUT:C V+:D V-:E"],
    "regulator": ["5V V_drop=1V limit=500mA I_Q=5mA IN:A OUT:B GND:C", "off IN:A OUT:B GND:C"],
    "converter": ["5V efficiency=85% V_I_min=7V limit=1A IN:A OUT:B GND:C", "off IN:A OUT:B GND:C"],
    "connector": ["1:A 2:B"],
    "testpoint": ["1:A"],
    "unmodelled": ["VCC:A GND:B"],
}
#: kinds that neither deliver nor control: their heat is never negative
PASSIVE = [
    "resistor",
    "link",
    "trimmer",
    "thermistor",
    "capacitor",
    "inductor",
    "fuse",
    "switch",
    "relay",
    "load",
    "driver",
    "diode",
    "led",
    "zener",
    "suppressor",
    "bridge",
    "npn",
    "pnp",
    "nmos",
    "pmos",
    "njfet",
    "pjfet",
]
CASES = [(kind, text) for kind, texts in EXAMPLES.items() for text in texts]


def system(kind: str, text: str) -> System:
    board = netaudit.loads(f"netlist 1\nground REF\nX1 {kind} {text}\nRref resistor 1Gohm 1:A 2:REF\n").board
    return System(board.circuits[0])


def test_every_kind_has_an_example() -> None:
    assert set(EXAMPLES) | {"curve"} == set(KINDS)


@pytest.mark.parametrize(("kind", "text"), CASES)
@settings(max_examples=15, deadline=None, derandomize=True)
@given(seed=st.integers(0, 10_000))
def test_pin_currents_sum_to_zero_whatever_the_unknowns(kind: str, text: str, seed: int) -> None:
    s = system(kind, text)
    x = np.random.default_rng(seed).normal(0, 1.0, s.n)
    num = s.numbers()
    sums = s.handle_sums(num, x, num.branches.value(s.sense(num, x))[0])
    # inner nodes of the part balance among themselves as well
    number = s.index_of["X1"]
    inner = [h for (k, _), h in s.inner.items() if k == number and s.is_node[s.position[h]]]
    mine = [n for n, (k, _) in enumerate(s.pins) if k == number] + inner
    size = np.abs(s.contributions(num, x, num.branches.value(s.sense(num, x))[0])).sum()
    assert abs(sums[mine].sum()) <= 1e-12 * size + 1e-18


@pytest.mark.parametrize(("kind", "text"), CASES)
@settings(max_examples=10, deadline=None, derandomize=True)
@given(seed=st.integers(0, 10_000))
def test_the_derivative_is_the_difference(kind: str, text: str, seed: int) -> None:
    s = system(kind, text)
    rng = np.random.default_rng(seed)
    x, direction = rng.normal(0, 0.6, s.n), rng.normal(0, 1.0, s.n)
    num = s.numbers()
    h = 1e-7

    def residual(at: np.ndarray) -> np.ndarray:
        return s.residual(num, at, num.branches.value(s.sense(num, at))[0])

    slope = num.branches.value(s.sense(num, x))[1]
    # a point within a step of a kink (a ramp's corner) has two derivatives
    ahead, behind = (num.branches.value(s.sense(num, x + k * h * direction))[1] for k in (1, -1))
    if not np.allclose(ahead, behind, rtol=1e-3, atol=1e-12):
        return
    difference = (residual(x + h * direction) - residual(x - h * direction)) / (2 * h)
    exact = s.jacobian(num, slope) @ direction
    scale = np.abs(exact).max() + np.abs(residual(x)).max() + 1e-9
    assert np.abs(difference - exact).max() <= 1e-5 * scale


@pytest.mark.parametrize(("kind", "text"), [c for c in CASES if c[0] in PASSIVE])
@settings(max_examples=8, deadline=None, derandomize=True)
@given(volts=st.lists(st.floats(-8, 8), min_size=5, max_size=5))
def test_passive_parts_never_deliver_power(kind: str, text: str, volts: list[float]) -> None:
    lines = [f"PS{p} supply {v:.3f}V R=10ohm sinks=yes +:{p} -:REF" for p, v in zip("ABCDE", volts, strict=True)]
    board = netaudit.loads("netlist 1\nground REF\n" + "\n".join(lines) + f"\nX1 {kind} {text}\n")
    result = board.solve()[0]
    assert result.points, result.failure
    for point in result.points:
        scale = sum(abs(float(point.view(f"PS{p}").power)) for p in "ABCDE")
        assert float(point.view("X1").power) >= -1e-9 * scale - 1e-15


def test_a_file_of_the_room_is_a_kind_or_serves_several() -> None:
    from pathlib import Path

    import netaudit.devices

    shared = {
        "base",
        "measured",
        "families",
        "omega",
        "junction",
        "table",
        "common",
        "rows",
        "power",
        "bipolar",
        "field_effect",
    }
    files = {p.stem for p in Path(netaudit.devices.__file__).parent.glob("*.py")} - {"__init__"} - shared
    assert files == {name.replace("-", "_") for name in KINDS}
