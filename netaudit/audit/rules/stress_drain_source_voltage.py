"""Drain-source voltage against V_DS.

|v_DS| against V_DS, at the worst corner of every mode.

Mend: a transistor for more voltage, or a clamp at the drain.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 80V +:V -:GND
        R1 resistor 1k 1:V 2:D
        M1 nmos V_th=2V K=5 V_DS=60V G:GND D:D S:GND

    passes:
        PS1 supply 48V +:V -:GND
        R1 resistor 1k 1:V 2:D
        M1 nmos V_th=2V K=5 V_DS=60V G:GND D:D S:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/drain-source-voltage", "error", "stress", "drain-source voltage against V_DS")
