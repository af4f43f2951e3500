"""Forward current against its continuous rating.

I_F of a diode, LED, bridge or optocoupler against its continuous rating at the ambient temperature (pairs such as
"25mA @ 25degC" are followed).

    I_F <= rating;  above the policy's share: warning

Mend: a larger series resistance, or a part with a higher I_F.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 220R 1:V 2:A
        D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V A:A K:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 1k 1:V 2:A
        D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V A:A K:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/forward-current", "error", "stress", "forward current against its continuous rating")
