"""Base current against I_B.

|i_B| against I_B, at the worst corner of every mode.

Mend: a larger base resistance.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 5V +:V -:GND
        R1 resistor 47R 1:V 2:B
        R2 resistor 100R 1:V 2:C
        Q1 npn I_S=1e-14A beta_F=100 beta_R=1 I_B=50mA B:B C:C E:GND

    passes:
        PS1 supply 5V +:V -:GND
        R1 resistor 1k 1:V 2:B
        R2 resistor 100R 1:V 2:C
        Q1 npn I_S=1e-14A beta_F=100 beta_R=1 I_B=50mA B:B C:C E:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/base-current", "error", "stress", "base current against I_B")
