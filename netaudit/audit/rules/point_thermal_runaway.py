"""Self-heating without an equilibrium on the way from cold.

The solution is followed as all thermal resistances rise together from zero.  Where the loop gain

    R_th dP/dT_j

reaches 1 the point folds: runaway, whether or not a hotter equilibrium exists.  Warning above a gain of 0.5.

Mend: better cooling, less power, or a series resistance that takes the power away as the part heats.

Source: thermal stability criterion of electrothermal feedback, common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 20V +:V -:GND
        R1 resistor 100R 1:V 2:T
        R2 thermistor 10k B=3950K R_th_ja=250K/W 1:T 2:GND

    passes:
        PS1 supply 12V +:V -:GND
        R1 resistor 100R 1:V 2:T
        R2 thermistor 10k B=3950K R_th_ja=250K/W 1:T 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/thermal-runaway", "error", "point", "self-heating without an equilibrium on the way from cold")
