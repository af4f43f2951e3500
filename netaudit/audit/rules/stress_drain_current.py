"""Drain current against I_D.

|i_D| against I_D.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/drain-current", "error", "stress", "drain current against I_D")
