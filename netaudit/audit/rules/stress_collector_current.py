"""Collector current against I_C.

|i_C| against I_C.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/collector-current", "error", "stress", "collector current against I_C")
