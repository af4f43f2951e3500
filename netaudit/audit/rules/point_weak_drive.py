"""A switch that is not fully on.

A transistor used as a switch (V_CE below 1 V) with I_C/I_B above half the least h_FE, or a MOSFET that carries
current with V_GS below the value at which R_DS(on) is stated.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/weak-drive", "warning", "point", "a switch that is not fully on")
