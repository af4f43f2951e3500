"""Base current against I_B.

|i_B| against I_B.

Mend: a larger base resistance.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/base-current", "error", "stress", "base current against I_B")
