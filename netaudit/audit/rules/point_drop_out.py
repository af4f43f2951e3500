"""A regulator without its headroom.

The input voltage of a regulator is below what it needs to hold its output, and the output falls with the input:

    v_IN - v_GND < V_set + V_drop

or the input of a converter is below V_I_min.  One whose input has no power at nominal values (below 0.3 V) is off and
not reported, unless its input is left open (``IN:nc``).

Mend: more input voltage, or a regulator with less drop-out.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 5.5V +:V -:GND
        U1 regulator 5V V_drop=2V IN:V OUT:W GND:GND
        R1 resistor 1k 1:W 2:GND

    passes:
        PS1 supply 9V +:V -:GND
        U1 regulator 5V V_drop=2V IN:V OUT:W GND:GND
        R1 resistor 1k 1:W 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/drop-out", "error", "point", "a regulator without its headroom")
