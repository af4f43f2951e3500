"""Shorts in parallel, shorts onto themselves, and islands without a ground: the rest of the board must still be solved."""

from __future__ import annotations

import pytest

import netaudit

HEAD = "netlist 1\nground GND\nPS1 supply 12V +:V -:GND\n"


@pytest.mark.parametrize(
    "pair",
    [
        "X1 link 1:V 2:A\nX2 link 1:V 2:A\n",
        "S1 switch closed 1:V 2:A\nX2 link 1:A 2:V\n",
        "L1 inductor 1m 1:V 2:A\nF1 fuse 1A 1:V 2:A\n",
        "R5 resistor 0R 1:V 2:A\nK1 relay on R=100R C1:V C2:V COM:V NO:A NC:nc\n",
    ],
)
def test_current_of_parallel_shorts_is_shared_evenly(pair: str) -> None:
    (result,) = netaudit.loads(HEAD + pair + "R1 resistor 12R 1:A 2:GND\n").solve()
    (point,) = result.points
    assert point.nets["A"] == pytest.approx(12.0, abs=2e-6)
    assert point.view("R1").i("1") == pytest.approx(1.0, rel=1e-6)
    names = [line.split()[0] for line in pair.splitlines()]
    currents = [abs(float(point.view(n).i("COM" if n.startswith("K") else "1"))) for n in names]
    assert currents == pytest.approx([0.5, 0.5])


def test_a_short_onto_itself_carries_nothing() -> None:
    (result,) = netaudit.loads(HEAD + "X1 link 1:A 2:A\nR1 resistor 1k 1:V 2:A\nR2 resistor 1k 1:A 2:GND\n").solve()
    assert result.points[0].nets["A"] == pytest.approx(6.0)
    assert result.points[0].view("X1").i("1") == 0.0


def test_two_supplies_against_each_other_still_have_no_point() -> None:
    board = netaudit.loads(HEAD + "PS2 supply 5V +:V -:GND\nR1 resistor 1k 1:V 2:GND\n")
    assert board.solve()[0].points == ()


def test_an_island_of_transistors_without_ground_is_solved_beside_the_rest() -> None:
    island = "Q1 npn I_S=1fA beta_F=100 B:B C:C E:E\nR2 resistor 1k 1:B 2:C\nR3 resistor 1k 1:C 2:E\n"
    (result,) = netaudit.loads(HEAD + "R1 resistor 1k 1:V 2:GND\n" + island).solve()
    assert result.points[0].view("R1").i("1") == pytest.approx(0.012)
    assert abs(float(result.points[0].view("R3").i("1"))) < 1e-15
