"""Self-heating without an equilibrium on the way from cold.

The solution is followed as all thermal resistances rise together from zero.  Where the loop gain R_th dP/dT_j reaches
1 the point folds: runaway, whether or not a hotter equilibrium exists.  Warning above a gain of 0.5.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/thermal-runaway", "error", "point", "self-heating without an equilibrium on the way from cold")
