"""Zener current against I_ZM.

The current from cathode to anode against I_ZM.

Mend: a larger series resistance.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/zener-current", "error", "stress", "zener current against I_ZM")
