"""Current against the rated current.

The current through an inductor, link, switch, relay contact, supply, driver output or wiper against I_max; of a fuse
against its own value.

Mend: a part for more current, or less load.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        F1 fuse 1A 1:V 2:W
        R1 resistor 6R 1:W 2:GND

    passes:
        PS1 supply 12V +:V -:GND
        F1 fuse 1A 1:V 2:W
        R1 resistor 24R 1:W 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/current", "error", "stress", "current against the rated current")
