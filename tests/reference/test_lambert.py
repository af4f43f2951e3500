"""Diode with series resistance in closed form: Banwell and Jayakumar, Electronics Letters 36(4) 291-292 (2000).

I = (n V_T / R) W((I_S R / (n V_T)) exp((V + I_S R) / (n V_T))) - I_S, in 50-digit arithmetic (mpmath).
"""

from __future__ import annotations

import mpmath as mp
import pytest

import netaudit

mp.mp.dps = 50
VT = mp.mpf("1.380649e-23") * mp.mpf("298.15") / mp.mpf("1.602176634e-19")

VOLTS = (1.0, 3.3, 12.0, 48.0, 1000.0)
OHMS = ("1mohm", "1ohm", "470ohm", "22kohm", "1Mohm", "1Gohm")
JUNCTIONS = (("1uA", 1.0, "0ohm"), ("2.52nA", 1.752, "0ohm"), ("0.01pA", 1.0, "568mohm"), ("1fA", 2.0, "10ohm"))
SI = {"m": "1e-3", "u": "1e-6", "n": "1e-9", "p": "1e-12", "f": "1e-15", "k": "1e3", "M": "1e6", "G": "1e9"}


def number(text: str) -> mp.mpf:
    body = text.removesuffix("ohm").removesuffix("A")
    return mp.mpf(body[:-1]) * mp.mpf(SI[body[-1]]) if body[-1] in SI else mp.mpf(body)


def closed_form(v: float, r: mp.mpf, i_s: mp.mpf, n: float) -> mp.mpf:
    scale = n * VT
    argument = mp.log(i_s * r / scale) + (v + i_s * r) / scale
    # W(exp(x)) for large x: solve w + ln w = x
    w = mp.findroot(lambda w: w + mp.log(w) - argument, argument if argument > 1 else mp.exp(argument))
    return scale / r * w - i_s


@pytest.mark.parametrize("volts", VOLTS)
@pytest.mark.parametrize("junction", JUNCTIONS)
def test_forward_and_reverse_currents_agree_with_the_closed_form(
    volts: float, junction: tuple[str, float, str]
) -> None:
    i_s, n, r_s = junction
    for ohms in OHMS:
        total = number(ohms) + number(r_s)
        forward = closed_form(volts, total, number(i_s), n)
        for anode, cathode, expected in (("X", "GND", forward), ("GND", "X", None)):
            board = netaudit.loads(
                f"netlist 1\nground GND\nPS1 supply {volts!r}V +:IN -:GND\nR1 resistor {ohms} 1:IN 2:X\n"
                f"D1 diode I_S={i_s} n={n} R_S={r_s} A:{anode} K:{cathode}\n"
            )
            result = board.solve()[0]
            assert result.points, (volts, ohms, junction, result.failure)
            assert result.uniqueness == "proven"
            view = result.points[0].view
            if expected is None:
                expected = -blocked(volts, total, number(i_s), n)
            for device, pin in (("R1", "1"), ("D1", "A"), ("PS1", "+")):
                found = float(view(device).i(pin)) * (-1.0 if device == "PS1" else 1.0)
                wanted = expected if device == "D1" else abs(expected)
                # the leak of 1e-19 S that every junction has belongs to the model, not to the closed form
                rounding = mp.mpf(volts) * mp.mpf(2) ** -52 / total + mp.mpf("1e-19") * volts
                assert abs(found - wanted) <= max(mp.mpf("1e-9") * abs(wanted), mp.mpf("1e-15"), rounding), (
                    device,
                    volts,
                    ohms,
                    junction,
                    anode,
                )


def blocked(volts: float, r: mp.mpf, i_s: mp.mpf, n: float) -> mp.mpf:
    """The magnitude of the reverse current: i = I_S (1 - exp(-(V - i R) / n V_T)), by bisection."""
    low, high = mp.mpf(0), min(i_s, mp.mpf(volts) / r)
    for _ in range(220):
        middle = (low + high) / 2
        if i_s * (1 - mp.exp(-(volts - middle * r) / (n * VT))) > middle:
            low = middle
        else:
            high = middle
    return low


def test_a_shunt_of_a_milliohm_shows_a_microampere_at_48_volts() -> None:
    board = netaudit.loads(
        "netlist 1\nground GND\nPS1 supply 48V +:IN -:GND\nR1 resistor 1mohm 1:IN 2:M\nR2 resistor 48Mohm 1:M 2:GND\n"
    )
    point = board.solve()[0].points[0]
    exact = 48.0 / (48e6 + 1e-3)
    assert float(point.view("R1").i("1")) == pytest.approx(exact, rel=1e-12)


def test_a_milliohm_between_legs_of_a_gigaohm() -> None:
    board = netaudit.loads(
        "netlist 1\nground GND\nPS1 supply 10V +:IN -:GND\nR1 resistor 1Gohm 1:IN 2:A\nR2 resistor 1Gohm 1:A 2:GND\n"
        "R3 resistor 1mohm 1:A 2:B\nR4 resistor 1Gohm 1:IN 2:B\nR5 resistor 3Gohm 1:B 2:GND\n"
    )
    point = board.solve()[0].points[0]
    # Thevenin: 5 V behind 0.5 Gohm on A, 7.5 V behind 0.75 Gohm on B
    exact = (5.0 - 7.5) / (0.5e9 + 0.75e9 + 1e-3)
    assert float(point.view("R3").i("1")) == pytest.approx(exact, rel=1e-9)
