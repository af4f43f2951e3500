"""Output current against I_O.

The output current of a regulator, converter or op amp (there in both directions) against I_O.

Mend: less load, or a stronger part.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        U1 regulator 5V V_drop=2V I_O=100mA IN:V OUT:W GND:GND
        R1 resistor 33R 1:W 2:GND

    passes:
        PS1 supply 12V +:V -:GND
        U1 regulator 5V V_drop=2V I_O=100mA IN:V OUT:W GND:GND
        R1 resistor 100R 1:W 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/output-current", "error", "stress", "output current against I_O")
