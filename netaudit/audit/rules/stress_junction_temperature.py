"""Junction temperature against T_j.

T_j of the electrothermal solution:

    T_j = T_ambient + R_th P(T_j)

solved together with the circuit, so that the heat changes the current and the current the heat.

Mend: less power, or a lower thermal resistance.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 10R 1:V 2:A
        D1 diode I_S=1nA n=1.8 T_j=125degC R_th_ja=150K/W A:A K:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 47R 1:V 2:A
        D1 diode I_S=1nA n=1.8 T_j=125degC R_th_ja=150K/W A:A K:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/junction-temperature", "error", "stress", "junction temperature against T_j")
