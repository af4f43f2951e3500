"""Voltage of a suppressor against its stand-off voltage.

A suppressor must stay off in operation: the voltage across it against V_RWM (both signs for a two-way part).

Mend: the next higher stand-off voltage.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/stand-off-voltage", "error", "stress", "voltage of a suppressor against its stand-off voltage")
