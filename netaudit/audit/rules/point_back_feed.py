"""Current pushed into a supply.

More current is pushed into a supply than its ``sinks`` allows (10 uA unless stated), or the net of a supply that is
off stands above 0.3 V and is fed more than 10 uA.  The path is named.  The mode is solved once more with that supply
neither delivering nor absorbing, and the stresses of both solutions count.

Mend: a diode or a switch in the path; ``sinks`` where the supply is made for it.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        PS2 supply 5V +:W -:GND
        R1 resistor 100R 1:V 2:W

    passes:
        PS1 supply 12V +:V -:GND
        PS2 supply 5V sinks=100mA +:W -:GND
        R1 resistor 100R 1:V 2:W
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/back-feed", "error", "point", "current pushed into a supply")
