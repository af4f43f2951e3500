"""Reverse voltage against V_R or V_RRM.

The voltage from cathode to anode against the lower of V_R and V_RRM.

    v_K - v_A <= min(V_R, V_RRM)

Mend: a part with a higher rating; an LED in reverse needs a diode beside it.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 1k 1:V 2:A
        D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V K:A A:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 1k 1:V 2:A
        D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V A:A K:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/reverse-voltage", "error", "stress", "reverse voltage against V_R or V_RRM")
