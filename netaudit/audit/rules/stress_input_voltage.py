"""Input voltage against V_I.

Input voltage of a regulator, converter or amplifier against V_I.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/input-voltage", "error", "stress", "input voltage against V_I")
