"""Zener current against I_ZM.

The current from cathode to anode against I_ZM.

Mend: a larger series resistance.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 20V +:V -:GND
        R1 resistor 150R 1:V 2:K
        D1 zener V_Z=5.1V I_Z=5mA r_Z=20ohm I_ZM=90mA K:K A:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 150R 1:V 2:K
        D1 zener V_Z=5.1V I_Z=5mA r_Z=20ohm I_ZM=90mA K:K A:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/zener-current", "error", "stress", "zener current against I_ZM")
