"""Reverse voltage against V_R or V_RRM.

The voltage from cathode to anode against the lower of V_R and V_RRM.

    v_K - v_A <= min(V_R, V_RRM)

Mend: a part with a higher rating; an LED in reverse needs a diode beside it.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/reverse-voltage", "error", "stress", "reverse voltage against V_R or V_RRM")
