"""Drain current against I_D.

|i_D| against I_D, in both directions, the body diode's share included.

Mend: a larger load resistance, or a transistor for more current.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 10R 1:V 2:D
        M1 nmos V_th=2V K=5 I_D=1A G:V D:D S:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 22R 1:V 2:D
        M1 nmos V_th=2V K=5 I_D=1A G:V D:D S:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/drain-current", "error", "stress", "drain current against I_D")
