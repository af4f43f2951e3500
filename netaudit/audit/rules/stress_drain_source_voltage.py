"""Drain-source voltage against V_DS.

|v_DS| against V_DS.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/drain-source-voltage", "error", "stress", "drain-source voltage against V_DS")
