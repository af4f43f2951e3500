"""An LED or series diode that never conducts.

An LED or optocoupler input that conducts (above 10 uA) in no mode and at no corner, or a diode that conducts in no mode
though other parts get current through it alone.  Clamps, flyback diodes and suppressors are meant to stay off.  Not
judged when only some modes are looked at.

Mend: turn it round, or add the mode in which it conducts.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 10k 1:V 2:A
        D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V K:A A:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 10k 1:V 2:A
        D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V A:A K:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/never-conducts", "warning", "point", "an LED or series diode that never conducts")
