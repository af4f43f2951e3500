"""Input voltage against V_I.

The input voltage of a regulator or converter, or the supply voltage of an op amp, against V_I.

Mend: a part for more input voltage, or a drop before it.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 36V +:V -:GND
        U1 regulator 5V V_drop=2V V_I=30V IN:V OUT:W GND:GND
        R1 resistor 1k 1:W 2:GND

    passes:
        PS1 supply 24V +:V -:GND
        U1 regulator 5V V_drop=2V V_I=30V IN:V OUT:W GND:GND
        R1 resistor 1k 1:W 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/input-voltage", "error", "stress", "input voltage against V_I")
