"""More than one operating point that can persist.

The circuit can settle in several ways (a latch, a Schmitt trigger, a constant-power load behind a cable).  Each point that
is not proven unstable is audited.  The finding names the currents that tell the points apart and says which of them the
board reaches as its supplies rise from zero, together or one after the others, and whether these are all.

Mend: make sure that it starts in the right one.

Source: L. Trajkovic, DC operating points of transistor circuits, NOLTA (IEICE), 2012, a survey; that every stable point
counts is common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 5V +:V -:GND
        R1 resistor 1k 1:V 2:C1
        R2 resistor 1k 1:V 2:C2
        R3 resistor 10k 1:C1 2:B2
        R4 resistor 10k 1:C2 2:B1
        Q1 npn I_S=1e-14A beta_F=100 beta_R=1 B:B1 C:C1 E:GND
        Q2 npn I_S=1e-14A beta_F=100 beta_R=1 B:B2 C:C2 E:GND

    passes:
        PS1 supply 5V +:V -:GND
        R1 resistor 1k 1:V 2:C1
        R4 resistor 10k 1:V 2:B1
        Q1 npn I_S=1e-14A beta_F=100 beta_R=1 B:B1 C:C1 E:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/several", "warning", "point", "more than one operating point that can persist")
