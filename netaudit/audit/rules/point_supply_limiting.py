"""A supply in its current limit.

At 99.9 % of its limit a supply no longer holds its voltage; a shorted rail would leave every other part unstressed,
so it must not pass.  ``limiting=ok`` says that it is meant.  A regulator or converter at its ``limit`` is reported too.

Mend: less load, or a stronger supply.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V limit=100mA +:V -:GND
        R1 resistor 10R 1:V 2:GND

    passes:
        PS1 supply 12V limit=100mA limiting=ok +:V -:GND
        R1 resistor 10R 1:V 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/supply-limiting", "error", "point", "a supply in its current limit")
