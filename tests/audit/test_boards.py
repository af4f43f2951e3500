"""Small boards and what an audit has to say about each; every figure by the hand calculation beside it."""

from __future__ import annotations

import pytest

from tests.audit.helper import DIODE, LED, NMOS, NPN, ZENER, audited, loud

CLEAN = {
    # (12 - 2) / 1k = 10 mA on 25 mA, 20 mW on 75 mW, 0.1 W on 0.5 W
    "lit led": f"PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=500mW 1:V 2:A\nD1 {LED} A:A K:GND\n",
    # 22 mA through 330 ohm, 16 mA in the zener: 82 mW on 500 mW
    "zener": f"PS1 supply 12V +:V -:GND\nR1 resistor 330R P_tot=500mW 1:V 2:Z\nZ1 {ZENER} K:Z A:GND\n"
    "R2 resistor 1k P_tot=250mW 1:Z 2:GND\n",
    # the zener is without power in one mode: off, not starved
    "zener without power": f"PS1 supply 12V +:V -:GND\nS1 switch closed I_max=1A 1:V 2:W\n"
    f'R1 resistor 330R P_tot=500mW 1:W 2:Z\nZ1 {ZENER} K:Z A:GND\nmode "off"\n  set S1 open\nend\n',
    # a clamp above the rail carries nothing
    "clamp": f"PS1 supply 3.3V +:V -:GND\nR1 resistor 1k P_tot=250mW 1:V 2:Z\nZ1 {ZENER} use=clamp K:Z A:GND\n"
    "R2 resistor 1k P_tot=250mW 1:Z 2:GND\n",
    # a flyback diode is meant to stay off
    "flyback": f"PS1 supply 12V +:V -:GND\nL1 inductor R=100ohm I_max=200mA 1:V 2:C\nD1 {DIODE} A:C K:V\n"
    "S1 switch closed I_max=1A 1:C 2:GND\n",
    # a supply that absorbs what is pushed into it
    "sinking supply": f"PS1 supply 12V +:V -:GND\nPS2 supply 5V sinks=yes +:W -:GND\nR1 resistor 100R P_tot=2W 1:V 2:A\n"
    f"D1 {DIODE} A:A K:W\n",
    # base 4.3 V / 1k = 4.3 mA for 12 mA: ratio 2.8 below 75
    "hard driven switch": f"PS1 supply 12V +:V -:GND\nPS2 supply 5V +:W -:GND\nR1 resistor 1k P_tot=250mW 1:W 2:B\n"
    f"R2 resistor 1k P_tot=250mW 1:V 2:C\nQ1 {NPN} B:B C:C E:GND\n",
    # a transistor connected as a diode is no switch, though V_CE is 0.65 V at full gain
    "diode connected": f"PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=250mW 1:V 2:B\nQ1 {NPN} B:B C:B E:GND\n",
    # 8 V on a 5 V regulator with 2 V drop-out
    "regulator": "PS1 supply 8V +:V -:GND\nU1 regulator 5V V_drop=2V V_I=20V I_O=1A P_tot=2W IN:V OUT:W GND:GND\n"
    "R1 resistor 100R P_tot=1W 1:W 2:GND\n",
    # exactly the headroom it needs: 7 V = 5 V + 2 V
    "regulator at its headroom": "PS1 supply 7V +:V -:GND\nU1 regulator 5V V_drop=2V V_I=20V I_O=1A P_tot=2W "
    "IN:V OUT:W GND:GND\nR1 resistor 100R P_tot=1W 1:W 2:GND\n",
    # exactly at its rating: 10 V on 100 ohm is 1 W
    "at the rating": "PS1 supply 10V +:V -:GND\nR1 resistor 100R P_tot=1W 1:V 2:GND\n",
    # 12 V across the coil of a relay that is on
    "relay on": "PS1 supply 12V +:V -:GND\nK1 relay on R=500ohm I_max=2A C1:V C2:GND COM:V NO:L NC:nc\n"
    "R1 resistor 1k P_tot=250mW 1:L 2:GND\n",
    # 2.5 V follower between rails of 0 V and 5 V
    "follower": "PS1 supply 5V +:V -:GND\nR1 resistor 10k P_tot=0.1W 1:V 2:M\nR2 resistor 10k P_tot=0.1W 1:M 2:GND\n"
    "U1 opamp swing=0.2V limit=20mA IN+:M IN-:O OUT:O V+:V V-:GND\nR3 resistor 10k P_tot=0.1W 1:O 2:GND\n",
}

WRONG = {
    # 44 mA on 25 mA; 100 mW on 75 mW; 25 + 45 = 70 degC is below 100
    "led without enough resistance": (
        f"PS1 supply 12V +:V -:GND\nR1 resistor 220R P_tot=2W 1:V 2:A\nD1 {LED} A:A K:GND\n",
        {("stress/forward-current", "D1", "error"), ("stress/power", "D1", "error")},
    ),
    # 12 V reverse on 5 V, never lit
    "led backwards": (
        f"PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=500mW 1:V 2:A\nD1 {LED} K:A A:GND\n",
        {("stress/reverse-voltage", "D1", "error"), ("point/never-conducts", "D1", "warning")},
    ),
    # the load gets its current through D1 alone, and D1 blocks
    "series diode backwards": (
        f"PS1 supply 12V +:V -:GND\nD1 {DIODE} K:V A:W\nR1 resistor 1k P_tot=500mW 1:W 2:GND\n",
        {("point/never-conducts", "D1", "warning")},
    ),
    # (20 - 5.1) / 150 = 99 mA on 90 mA; 0.51 W on 0.5 W
    "zener overloaded": (
        f"PS1 supply 20V +:V -:GND\nR1 resistor 150R P_tot=3W 1:V 2:Z\nZ1 {ZENER} K:Z A:GND\n",
        {("stress/zener-current", "Z1", "error"), ("stress/power", "Z1", "error")},
    ),
    # normal 21 mA; with S1 open (12 - 5) / 22k = 0.3 mA below the knee of 1 mA
    "zener starved in a mode": (
        f"PS1 supply 12V +:V -:GND\nR1 resistor 330R P_tot=500mW 1:V 2:Y\nS1 switch closed I_max=1A 1:Y 2:Z\n"
        f'R2 resistor 22k P_tot=250mW 1:V 2:Z\nZ1 {ZENER} K:Z A:GND\nmode "low"\n  set S1 open\nend\n',
        {("point/zener-starved", "Z1", "warning")},
    ),
    # it carries 0.3 mA in every mode: no clamp
    "zener starved always": (
        f"PS1 supply 12V +:V -:GND\nR1 resistor 22k P_tot=250mW 1:V 2:Z\nZ1 {ZENER} K:Z A:GND\n",
        {("point/zener-starved", "Z1", "warning")},
    ),
    # the load takes all: 12 * 220 / 1220 = 2.2 V at the zener, which an expect line wants to hold
    "zener without current but expected": (
        f"PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=250mW 1:V 2:Z\nZ1 {ZENER} K:Z A:GND\n"
        "R2 resistor 220R P_tot=250mW 1:Z 2:GND\nexpect voltage Z 2V..5.5V\n",
        {("point/zener-starved", "Z1", "warning")},
    ),
    # 12 V pushes (12 - 0.8 - 5) / 100 = 62 mA into a rail that takes 5 mA
    "back-feed": (
        f"PS1 supply 12V +:V -:GND\nPS2 supply 5V +:W -:GND\nR1 resistor 100R P_tot=2W 1:V 2:A\nD1 {DIODE} A:A K:W\n"
        "R2 resistor 1k P_tot=500mW 1:W 2:GND\n",
        {("point/back-feed", "PS2", "error")},
    ),
    # the rail of a supply that is off is fed to 11 V through 1k
    "off supply fed": (
        "PS1 supply 12V +:V -:GND\nPS2 supply 5V +:W -:GND\nR1 resistor 1k P_tot=500mW 1:V 2:W\n"
        'R2 resistor 100R P_tot=500mW 1:W 2:GND\nmode "alone"\n  set PS2 off\nend\n',
        {("point/back-feed", "PS2", "error")},
    ),
    # 1.2 A wanted of 0.1 A
    "supply limiting": (
        "PS1 supply 12V limit=100mA +:V -:GND\nR1 resistor 10R P_tot=5W 1:V 2:GND\n",
        {("point/supply-limiting", "PS1", "error")},
    ),
    # 5 V on 10 ohm wants 0.5 A of 0.2 A
    "regulator limiting": (
        "PS1 supply 12V +:V -:GND\nU1 regulator 5V V_drop=2V limit=200mA V_I=20V I_O=1A P_tot=5W IN:V OUT:W GND:GND\n"
        "R1 resistor 10R P_tot=5W 1:W 2:GND\n",
        {("point/supply-limiting", "U1", "error")},
    ),
    # 6.5 V at the low end, 7 V needed
    "regulator drops out at a corner": (
        "PS1 supply 8V 6.5V..9V +:V -:GND\nU1 regulator 5V V_drop=2V V_I=20V I_O=1A P_tot=2W IN:V OUT:W GND:GND\n"
        "R1 resistor 100R P_tot=1W 1:W 2:GND\n",
        {("point/drop-out", "U1", "error")},
    ),
    # base 4.3 V / 100k = 43 uA, 12 mA wanted: gain 150 gives 6.5 mA, V_CE 5.5 V: not saturated at 1k; at 2k2 it is, with
    # 5.3 mA / 43 uA = 123 above 75
    "weak base drive": (
        f"PS1 supply 12V +:V -:GND\nPS2 supply 5V +:W -:GND\nR1 resistor 100k P_tot=250mW 1:W 2:B\n"
        f"R2 resistor 2k2 P_tot=250mW 1:V 2:C\nQ1 {NPN} B:B C:C E:GND\n",
        {("point/weak-drive", "Q1", "warning")},
    ),
    # 5 V on a gate whose R_DS_on is stated at 10 V
    "weak gate drive": (
        f"PS1 supply 12V +:V -:GND\nPS2 supply 5V +:W -:GND\nR1 resistor 100R P_tot=2W 1:V 2:D\n"
        f'R2 resistor 10k P_tot=250mW 1:W 2:G\nM1 {NMOS} R_DS_on="50mohm @ 10V" G:G D:D S:GND\n',
        {("point/weak-drive", "M1", "warning")},
    ),
    # 30 V on a gate that takes 20 V
    "gate voltage": (
        f"PS1 supply 30V +:V -:GND\nR1 resistor 1k P_tot=2W 1:V 2:D\nM1 {NMOS} G:V D:D S:GND\n",
        {("stress/gate-source-voltage", "M1", "error")},
    ),
    # 10 V reverse across base and emitter that take 6 V
    "emitter-base voltage": (
        f"PS1 supply 5V +:V -:GND\nPS2 supply -10V sinks=yes +:N -:GND\nR1 resistor 1k P_tot=250mW 1:N 2:B\n"
        f"R2 resistor 1k P_tot=250mW 1:V 2:C\nQ1 {NPN} B:B C:C E:GND\n",
        {("stress/emitter-base-voltage", "Q1", "error")},
    ),
    # a follower of 4.9 V whose output reaches 4.5 V at most
    "amplifier at its rail": (
        "PS1 supply 5V +:V -:GND\nR1 resistor 200R P_tot=0.1W 1:V 2:M\nR2 resistor 10k P_tot=0.1W 1:M 2:GND\n"
        "U1 opamp swing=0.5V limit=20mA IN+:M IN-:O OUT:O V+:V V-:GND\nR3 resistor 10k P_tot=0.1W 1:O 2:GND\n",
        {("point/amplifier-limits", "U1", "warning")},
    ),
    # 12 V across the coil of a relay that is said to be off
    "relay state": (
        "PS1 supply 12V +:V -:GND\nK1 relay off R=500ohm I_max=2A C1:V C2:GND COM:V NO:L NC:nc\n"
        "R1 resistor 1k P_tot=250mW 1:L 2:GND\n",
        {("point/coil-state", "K1", "warning")},
    ),
    # -11.9 V on a polarised capacitor
    "capacitor reversed": (
        "PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=500mW 1:V 2:M\nC1 capacitor 10u V_R=25V +:GND -:M\n"
        "R2 resistor 100k P_tot=250mW 1:M 2:GND\n",
        {("stress/reverse-polarity", "C1", "error")},
    ),
    # 2 A on 1 A
    "fuse": (
        "PS1 supply 12V +:V -:GND\nF1 fuse 1A R=10mohm 1:V 2:W\nR1 resistor 6R P_tot=50W 1:W 2:GND\n",
        {("stress/current", "F1", "error")},
    ),
    # nominal 6 V; 4.5..7.5 V over the range
    "expectation": (
        "PS1 supply 12V 9V..15V +:V -:GND\nR1 resistor 1k P_tot=500mW 1:V 2:M\nR2 resistor 1k P_tot=500mW 1:M 2:GND\n"
        "expect voltage M 5.2V..6.8V\n",
        {("expect/missed", "M", "error")},
    ),
}


@pytest.mark.parametrize("name", CLEAN)
def test_clean_board_is_silent(name: str) -> None:
    audit = audited(CLEAN[name])
    assert loud(audit) == set()
    assert not audit.fails()


@pytest.mark.parametrize("name", WRONG)
def test_wrong_board_is_told(name: str) -> None:
    text, expected = WRONG[name]
    audit = audited(text)
    assert loud(audit) == expected
    assert audit.fails() == any(level == "error" for _, _, level in expected)
    for finding in audit.findings:
        assert finding.file == "netlist"
        assert finding.line is not None
        assert len(finding.message) > 20
