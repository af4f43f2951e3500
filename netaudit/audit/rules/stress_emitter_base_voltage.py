"""Reverse emitter-base voltage against V_EBO.

The reverse voltage of the base-emitter junction against V_EBO.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/emitter-base-voltage", "error", "stress", "reverse emitter-base voltage against V_EBO")
