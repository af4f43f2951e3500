"""Collector-emitter voltage against V_CEO.

v_CE (pnp: v_EC) against V_CEO; where only V_CBO is stated, the collector-base voltage against that.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/collector-emitter-voltage", "error", "stress", "collector-emitter voltage against V_CEO")
