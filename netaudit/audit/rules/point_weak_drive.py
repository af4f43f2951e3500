"""A switch that is not fully on.

A bipolar transistor used as a switch (V_CE below 1 V, more than 10 uA) with

    I_C / I_B > h_FE / 2

h_FE the least one stated (else the low end of beta_F); one connected as a diode is no switch.  Or a MOSFET that carries
more than 10 uA from drain to source with V_GS below the value at which R_DS_on is stated.

Mend: a lower base resistance; a higher gate voltage or a lower threshold.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 220k 1:V 2:B
        R2 resistor 2k2 1:V 2:C
        Q1 npn I_S=1e-14A beta_F=150 beta_R=4 B:B C:C E:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 22k 1:V 2:B
        R2 resistor 2k2 1:V 2:C
        Q1 npn I_S=1e-14A beta_F=150 beta_R=4 B:B C:C E:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/weak-drive", "warning", "point", "a switch that is not fully on")
