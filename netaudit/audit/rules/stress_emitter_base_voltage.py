"""Reverse emitter-base voltage against V_EBO.

The reverse voltage of the base-emitter junction against V_EBO.  It breaks down at a few volts, and its gain suffers.

Mend: a diode across the junction, or one in series with the base.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 1k 1:V 2:E
        R2 resistor 1k 1:E 2:GND
        Q1 npn I_S=1e-14A beta_F=100 beta_R=1 V_EBO=5V B:GND C:V E:E

    passes:
        PS1 supply 8V +:V -:GND
        R1 resistor 1k 1:V 2:E
        R2 resistor 1k 1:E 2:GND
        Q1 npn I_S=1e-14A beta_F=100 beta_R=1 V_EBO=5V B:GND C:V E:E
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/emitter-base-voltage", "error", "stress", "reverse emitter-base voltage against V_EBO")
