"""Circuits with several operating points of known number and stability."""

from __future__ import annotations

import pytest

import netaudit

HEAD = "netlist 1\nground GND\nambient 25degC\n"


def flip_flop(tag: str = "") -> str:
    return "".join(
        f"{line}\n"
        for line in (
            f"R1{tag} resistor 1k 1:VCC 2:C1{tag}",
            f"R2{tag} resistor 1k 1:VCC 2:C2{tag}",
            f"R3{tag} resistor 10k 1:C1{tag} 2:B2{tag}",
            f"R4{tag} resistor 10k 1:C2{tag} 2:B1{tag}",
            f"Q1{tag} npn I_S=0.01pA beta_F=100 beta_R=1 B:B1{tag} C:C1{tag} E:GND",
            f"Q2{tag} npn I_S=0.01pA beta_F=100 beta_R=1 B:B2{tag} C:C2{tag} E:GND",
        )
    )


def test_flip_flop_has_three_points_of_which_the_middle_one_is_unstable() -> None:
    result = netaudit.loads(HEAD + "PS1 supply 5V +:VCC -:GND\n" + flip_flop()).solve()[0]
    by_height = sorted(result.points, key=lambda p: p.nets["C1"])
    assert [p.stable for p in by_height] == [True, False, True]
    assert by_height[0].nets["C1"] == pytest.approx(by_height[2].nets["C2"], rel=1e-9)


def test_two_independent_flip_flops_have_nine() -> None:
    text = "PS1 supply 5V +:VCC -:GND\n" + flip_flop("a") + flip_flop("b")
    result = netaudit.loads(HEAD + text).solve()[0]
    assert len(result.points) == 9
    assert sum(p.stable is True for p in result.points) == 4


@pytest.mark.parametrize(("volts", "count"), [(1.0, 1), (3.0, 3), (4.5, 1)])
def test_emitter_coupled_schmitt_trigger(volts: float, count: int) -> None:
    text = (
        f"PS1 supply 12V +:VCC -:GND\nPS2 supply {volts}V +:IN -:GND\nR1 resistor 4k7 1:VCC 2:C1\nR2 resistor 1k 1:VCC 2:C2\n"
        "R3 resistor 10k 1:C1 2:B2\nR4 resistor 10k 1:B2 2:GND\nR5 resistor 470R 1:E 2:GND\n"
        "Q1 npn I_S=0.01pA beta_F=100 beta_R=1 B:IN C:C1 E:E\nQ2 npn I_S=0.01pA beta_F=100 beta_R=1 B:B2 C:C2 E:E\n"
    )
    result = netaudit.loads(HEAD + text).solve()[0]
    assert len(result.points) == count
    assert result.uniqueness != "proven" or count == 1


def test_several_points_are_a_finding_and_each_is_audited() -> None:
    audit = netaudit.loads(HEAD + "PS1 supply 5V +:VCC -:GND\n" + flip_flop()).audit()
    assert "point/several" in {f.rule for f in audit.findings}


def test_passive_boards_are_proven_and_say_why() -> None:
    result = netaudit.loads(
        HEAD + "PS1 supply 5V +:A -:GND\nR1 resistor 1k 1:A 2:B\nD1 diode I_S=1nA A:B K:GND\n"
    ).solve()[0]
    assert result.uniqueness == "proven"
    assert "no other operating point" in result.because
    assert result.points[0].stable is True
