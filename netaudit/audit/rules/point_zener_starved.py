"""A reference below its knee current.

A zener or shunt reference that regulates falls below I_ZK (I_K_min) and no longer holds its voltage.  It regulates
when it is at its knee or above in some mode, or an ``expect`` stands across it; one that is below it in every mode and
carries more than 10 uA is reported as well.  A reference that a mode leaves without power is off.  ``use=clamp`` says
that it is meant to stay off.

Mend: a lower series resistance, or less load.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        R1 resistor 22k 1:V 2:K
        D1 zener V_Z=5.1V I_Z=5mA r_Z=20ohm I_ZK=1mA K:K A:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 1k 1:V 2:K
        D1 zener V_Z=5.1V I_Z=5mA r_Z=20ohm I_ZK=1mA K:K A:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/zener-starved", "warning", "point", "a reference below its knee current")
