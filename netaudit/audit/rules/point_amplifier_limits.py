"""An amplifier at a limit.

An op amp's output at its swing or current limit, or its inputs beyond their common-mode range.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/amplifier-limits", "warning", "point", "an amplifier at a limit")
