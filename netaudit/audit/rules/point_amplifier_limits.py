"""An amplifier at a limit.

An op amp's output at the end of its swing (its supply rails less ``swing``) or at 99.9 % of its current limit, or an
input beyond the supply rails.  The feedback no longer holds, and what follows is not what was designed.

Mend: more supply, less gain, a lighter load.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 5V +:V -:GND
        U1 opamp swing=0.5V IN+:V IN-:O OUT:O V+:V V-:GND
        R1 resistor 10k 1:O 2:GND

    passes:
        PS1 supply 5V +:V -:GND
        R2 resistor 10k 1:V 2:M
        R3 resistor 10k 1:M 2:GND
        U1 opamp swing=0.5V IN+:M IN-:O OUT:O V+:V V-:GND
        R1 resistor 10k 1:O 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/amplifier-limits", "warning", "point", "an amplifier at a limit")
