"""A part used as another kind than its table says.

The row of the part states another kind than the device line.  One of the two is wrong, and the model would be too, so
that the row is not used.

Mend: another part, or the kind that the part has.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        parts common
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:A
        D1 zener part=LED-RED A:A K:GND

    passes:
        parts common
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k 1:VIN 2:A
        D1 led part=LED-RED A:A K:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("part/kind", "error", "structure", "a part used as another kind than its table says")
