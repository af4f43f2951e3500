"""Gate-source voltage against V_GS, both signs.

|v_GS| against V_GS.

Mend: a divider or a zener clamp at the gate.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/gate-source-voltage", "error", "stress", "gate-source voltage against V_GS, both signs")
