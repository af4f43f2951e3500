"""``point/several``: what tells the points apart and how a board gets into each."""

from __future__ import annotations

import netaudit
from tests.solve.known_counts import HEAD
from tests.solve.test_several import flip_flop


def said(text: str) -> str:
    found = [f.message for f in netaudit.loads(HEAD + text).audit(nominal=True).findings if f.rule == "point/several"]
    return found[0] if found else ""


def test_an_uneven_latch_rises_into_the_point_of_its_stronger_side() -> None:
    text = flip_flop().replace("R1 resistor 1k", "R1 resistor 1k2")
    message = said("PS1 supply 5V +:VCC -:GND\n" + text)
    assert "Q1 4.5 mA, reached with PS1 rising from zero" in message
    assert "Q2 5.31 mA, Q1 off, not reached by switching on" in message
    assert "complete" in message


def test_a_balanced_latch_is_left_to_its_tolerances() -> None:
    message = said("PS1 supply 5V +:VCC -:GND\n" + flip_flop())
    assert "tolerances decide" in message
    assert message.count("not reached by switching on") == 2


def test_the_order_of_the_supplies_chooses_the_state_of_a_trigger() -> None:
    text = (
        "PS1 supply 12V +:VCC -:GND\nPS2 supply 3V +:IN -:GND\nR1 resistor 4k7 1:VCC 2:C1\nR2 resistor 1k 1:VCC 2:C2\n"
        "R3 resistor 10k 1:C1 2:B2\nR4 resistor 10k 1:B2 2:GND\nR5 resistor 470R 1:E 2:GND\n"
        "Q1 npn I_S=0.01pA beta_F=100 beta_R=1 B:IN C:C1 E:E\nQ2 npn I_S=0.01pA beta_F=100 beta_R=1 B:B2 C:C2 E:E\n"
    )
    message = said(text)
    assert "Q2 off, Q1 4.89 mA, reached with PS1 last" in message
    assert "Q2 7.86 mA, Q1 off, reached with all supplies together or PS2 last" in message


def test_one_point_is_no_finding() -> None:
    assert said("PS1 supply 5V +:V -:GND\nR1 resistor 1k 1:V 2:GND\n") == ""
