"""Voltage against the rated or element voltage.

The voltage across a capacitor against V_R, and across every part with a V_max (the element voltage of a resistor)
against that, whatever its power.

Mend: a part with a higher rated voltage, or several in series.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        C1 capacitor 10u V_R=10V 1:V 2:GND

    passes:
        PS1 supply 12V +:V -:GND
        C1 capacitor 10u V_R=25V 1:V 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/voltage", "error", "stress", "voltage against the rated or element voltage")
