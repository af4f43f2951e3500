"""Voltage of a suppressor against its stand-off voltage.

A suppressor must stay off in operation: the voltage across it against V_RWM (both signs for a two-way part).

Mend: the next higher stand-off voltage.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 100R 1:V 2:W
        D1 suppressor V_Z=13.3V I_Z=1mA r_Z=2ohm V_RWM=10V K:W A:GND

    passes:
        PS1 supply 9V +:V -:GND
        R1 resistor 100R 1:V 2:W
        D1 suppressor V_Z=13.3V I_Z=1mA r_Z=2ohm V_RWM=10V K:W A:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/stand-off-voltage", "error", "stress", "voltage of a suppressor against its stand-off voltage")
