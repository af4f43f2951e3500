"""Collector-emitter voltage against V_CEO.

v_CE (pnp: v_EC) against V_CEO, which holds for an open base and so for any drive; where V_CBO is stated, the
collector-base voltage against that as well (an optocoupler, whose base has no pin: v_CE against the lower of the two).

Mend: a transistor for more voltage, or a clamp at the collector.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 60V +:V -:GND
        R1 resistor 1k 1:V 2:C
        Q1 npn I_S=1e-14A beta_F=100 beta_R=1 V_CEO=40V B:GND C:C E:GND

    passes:
        PS1 supply 30V +:V -:GND
        R1 resistor 1k 1:V 2:C
        Q1 npn I_S=1e-14A beta_F=100 beta_R=1 V_CEO=40V B:GND C:C E:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/collector-emitter-voltage", "error", "stress", "collector-emitter voltage against V_CEO")
