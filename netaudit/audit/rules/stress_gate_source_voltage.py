"""Gate-source voltage against V_GS, both signs.

|v_GS| against V_GS.  Beyond it the gate oxide breaks, at once and for good.

Mend: a divider or a zener clamp at the gate.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 30V +:V -:GND
        R1 resistor 1k 1:V 2:D
        M1 nmos V_th=2V K=1 V_GS=20V G:V D:D S:GND

    passes:
        PS1 supply 15V +:V -:GND
        R1 resistor 1k 1:V 2:D
        M1 nmos V_th=2V K=1 V_GS=20V G:V D:D S:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/gate-source-voltage", "error", "stress", "gate-source voltage against V_GS, both signs")
