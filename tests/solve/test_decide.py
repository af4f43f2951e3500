"""Every operating point, with proof: published and closed-form counts, theorems, and no claim beyond the proof."""

from __future__ import annotations

from itertools import islice
from pathlib import Path

import numpy as np
import pytest

import netaudit
from netaudit.solve.groups import alone, groups
from netaudit.solve.newton import newton
from netaudit.solve.point import ModeResult
from netaudit.solve.settle import Solver
from netaudit.solve.system import System
from tests.solve.known_counts import HEAD, circuits
from tests.solve.test_several import flip_flop

#: Chua and Ushida, Int. J. Circuit Theory Appl. 4, 215-239, 1976 (parameters from memory): all nine roots of the pair of
#: cubics computed in 40 digits; v1, v2 in volts
NINE = (
    (0.199790592527, 3.75421709994),
    (0.219854573201, 1.67295140901),
    (0.228266851846, 0.828626137388),
    (1.66637784045, 0.739343469503),
    (1.70265775821, 1.80902994675),
    (1.77550356138, 3.70717771427),
    (2.22472975324, 3.69304397424),
    (2.27759700614, 1.85749173187),
    (2.30522206300, 0.705560377491),
)


def solved(text: str) -> ModeResult:
    return netaudit.loads(HEAD + text).solve()[0]


def tunnel(path: Path, cubic: tuple[float, float, float], end: float) -> None:
    volts = np.arange(-0.3, end, 0.01)
    amperes = 1e-3 * np.polyval([*cubic, 0.0], volts)
    rows = "".join(f"{v:.2f},{i:.15g}\n" for v, i in zip(volts, amperes, strict=True))
    path.write_text("voltage,current\n" + rows, encoding="utf-8")


def test_the_published_pair_of_tunnel_diodes_has_its_nine_points_of_which_four_are_stable(tmp_path: Path) -> None:
    tunnel(tmp_path / "a.csv", (2.5, -10.5, 11.8), 3.5)
    tunnel(tmp_path / "b.csv", (0.43, -2.69, 4.56), 5.5)
    text = (
        "PS1 supply 30V +:IN -:GND\nR1 resistor 13.3kohm 1:IN 2:X\nX1 curve points=a.csv +:X -:Y\n"
        "X2 curve points=b.csv +:Y -:GND\n"
    )
    (tmp_path / "pair.netlist").write_text(HEAD + text, encoding="utf-8")
    result = netaudit.load(str(tmp_path / "pair.netlist")).solve()[0]
    assert result.uniqueness == "complete"
    found = sorted((p.nets["X"] - p.nets["Y"], p.nets["Y"]) for p in result.points)
    assert np.allclose(found, NINE, atol=3e-4)
    assert sum(p.stable is True for p in result.points) == 4
    assert sum(p.stable is False for p in result.points) == 5


def test_two_latches_multiply_and_no_point_with_a_middle_rests() -> None:
    result = solved("PS1 supply 5V +:VCC -:GND\n" + flip_flop("a") + flip_flop("b"))
    assert (result.uniqueness, len(result.points)) == ("complete", 9)
    assert [p.stable for p in result.points].count(True) == 4
    assert [p.stable for p in result.points].count(False) == 5


def test_a_supply_whose_limit_is_out_of_reach_does_not_cost_the_proof() -> None:
    result = solved("PS1 supply 5V limit=50mA +:VCC -:GND\n" + flip_flop())
    assert (result.uniqueness, len(result.points)) == ("complete", 3)


def test_a_supply_that_limits_at_one_of_the_points_is_searched_with_its_limit() -> None:
    """The middle point would draw 7.85 mA: with 7 mA it stands at a lower voltage."""
    result = solved("PS1 supply 5V limit=7mA +:VCC -:GND\n" + flip_flop())
    assert (result.uniqueness, len(result.points)) == ("complete", 3)
    assert min(p.nets["VCC"] for p in result.points) < 4.9


@pytest.mark.parametrize(("power", "least", "count"), [(5.0, 3.0, 1), (6.0, 0.5, 3), (8.0, 0.5, 1)])
def test_a_constant_power_load_behind_a_cable(power: float, least: float, count: int) -> None:
    """u^2 - E u + R P = 0 above V_min, two solutions below the most power E^2 / (4 R) = 7.2 W; one more below V_min."""
    result = solved(f"PS1 supply 12V +:V -:GND\nR1 resistor 5R 1:V 2:X\nP1 load {power}W V_min={least}V +:X -:GND\n")
    assert (result.uniqueness, len(result.points)) == ("proven" if count == 1 else "complete", count)
    roots = np.roots([1.0, -12.0, 5.0 * power])
    wanted = sorted(float(r.real) for r in roots if abs(r.imag) < 1e-12 and r.real > least)
    found = sorted(p.nets["X"] for p in result.points if p.nets["X"] > least)
    assert np.allclose(found, wanted, rtol=1e-9)


def test_a_schmitt_trigger_with_an_op_amp_has_three_points() -> None:
    text = (
        "PS1 supply 12V +:VP -:GND\nPS2 supply 12V +:GND -:VN\nPS3 supply 1V +:IN -:GND\n"
        "U1 opamp IN+:P IN-:IN OUT:O V+:VP V-:VN\nR1 resistor 10k 1:O 2:P\nR2 resistor 10k 1:P 2:GND\n"
    )
    result = solved(text)
    assert result.uniqueness == "complete"
    assert sorted(round(p.nets["O"], 3) for p in result.points) == [-12.0, 2.0, 12.0]


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        (
            "PS1 supply 9V +:VP -:GND\nR9 resistor 100R 1:VP 2:V\nU1 opamp IN+:P IN-:GND OUT:O V+:V V-:GND\n"
            "R1 resistor 10k 1:O 2:P\nR2 resistor 10k 1:P 2:GND\n",
            "U1 can lift a net",
        ),
        (
            "J1 current-source 1mA +:B -:GND\nPS1 supply 5V +:V -:GND\nR1 resistor 1k 1:V 2:C\n"
            "Q1 npn I_S=0.01pA beta_F=100 B:B C:C E:GND\n",
            "no resistance holds net B",
        ),
    ],
)
def test_without_a_derived_box_nothing_is_claimed(text: str, reason: str) -> None:
    result = solved(text)
    assert result.uniqueness == "searched"
    assert reason in result.because


def test_a_thermistor_that_heats_itself_has_three_points_and_none_is_called_the_only_one() -> None:
    """10 kohm of 250 K/W on 17 V through 100 ohm: three solutions of T = T_a + R_th P(T)."""
    result = solved(
        "PS1 supply 17V +:V -:GND\nR1 resistor 100R 1:V 2:X\nRT1 thermistor 10k B=3950K R_th_ja=250K/W 1:X 2:GND\n"
    )
    assert result.uniqueness == "searched"
    assert len(result.points) == 3
    assert [p.stable for p in sorted(result.points, key=lambda p: p.temperatures["RT1"])] == [True, False, True]
    for point in result.points:
        t = point.temperatures["RT1"]
        r = 10e3 * np.exp(3950.0 * (1 / (t + 273.15) - 1 / 298.15))
        assert t == pytest.approx(25.0 + 250.0 * r * (17.0 / (100.0 + r)) ** 2, abs=1e-4)


def test_heat_that_changes_no_law_leaves_the_proof_and_what_feeds_itself_takes_it() -> None:
    text = "PS1 supply 17V +:V -:GND\nR1 resistor 100R R_th_ja=99K/W 1:V 2:X\nRT1 thermistor 10k B=3950K {} 1:X 2:GND\n"
    free = solved(text.format(""))
    assert free.uniqueness == "proven"
    calm = solved(text.format("R_th_ja=10K/W"))
    assert calm.uniqueness == "proven"
    assert "temperatures solved" in calm.because
    assert "temperatures solved" not in free.because.replace("at these temperatures", "")
    assert solved(text.format("R_th_ja=100K/W")).uniqueness == "searched"


def test_no_claim_is_false_on_circuits_of_known_count(tmp_path: Path) -> None:
    """A seeded part of ``python -m tests.benchmarks.known_counts``, which takes 2,000."""
    decided = 0
    for known in islice(circuits(5), 40):
        for name, text in known.files.items():
            (tmp_path / name).write_text(text, encoding="utf-8")
        (tmp_path / "known.netlist").write_text(known.text, encoding="utf-8")
        result = netaudit.load(str(tmp_path / "known.netlist")).solve()[0]
        if result.uniqueness != "searched":
            decided += 1
            assert len(result.points) == known.count, known.text
            assert (result.uniqueness == "proven") == (known.count == 1)
    assert decided >= 38


@pytest.mark.parametrize("branches", [4, 9])
def test_networks_of_increasing_branches_never_give_a_second_point(branches: int) -> None:
    """Duffin, Bull. AMS 53, 963-971, 1947: from 200 starts each."""
    rng = np.random.default_rng(branches)
    lines = ["PS1 supply 9V +:N0 -:GND", "R0 resistor 220R 1:N0 2:N1"]
    for k in range(branches):
        a, b = rng.choice(5, 2, replace=False)
        ends = [f"N{a}" if a else "GND", f"N{b}" if b else "GND"]
        lines.append(f"D{k} diode I_S=1e-{rng.integers(9, 16)}A n=1.5 A:{ends[0]} K:{ends[1]}")
    lines += [f"R{k} resistor {int(10 ** rng.uniform(2, 4))}R 1:N{k} 2:GND" for k in range(1, 5)]
    circuit = netaudit.loads(HEAD + "\n".join(lines) + "\n").board.circuits[0]
    system = System(circuit)
    result = newton(system, system.numbers({}), rng.uniform(-9, 9, (200, system.m)), Solver(system).linear)
    assert result.converged.sum() > 100
    spread = np.ptp(result.x[result.converged], axis=0)
    assert spread.max() < 1e-6
    assert netaudit.loads(HEAD + "\n".join(lines) + "\n").solve()[0].uniqueness == "proven"


def test_groups_are_cut_at_stiff_supplies_and_not_joined_by_connectors() -> None:
    text = "PS1 supply 5V +:VCC -:GND\n" + flip_flop("a") + flip_flop("b") + "J1 connector 1:C1a 2:C1b 3:VCC\n"
    circuit = netaudit.loads(HEAD + text).board.circuits[0]
    found = groups(circuit)
    assert [len(g.devices) for g in found] == [6, 6]
    assert System(alone(circuit, found[0])).m == 4


def test_three_regulators_behind_one_diode_have_one_point() -> None:
    """Newton also ends where a net would stand at 1e17 V and all rows round to zero: that is no point."""
    lines = ["PS1 supply 24V +:V -:GND", "F1 fuse 5A R=10mohm 1:V 2:VF", "D0 diode I_S=1nA A:VF K:VB"]
    for k in range(3):
        lines.append(f"U{k} regulator 5V limit=1A I_Q=5mA V_drop=1V IN:VB OUT:O{k} GND:GND")
        lines.append(f"R{k} resistor 330R 1:O{k} 2:L{k}")
        lines.append(f"D{k + 1} led I_S=1e-18A n=2 A:L{k} K:GND")
    result = solved("\n".join(lines) + "\n")
    assert len(result.points) == 1
