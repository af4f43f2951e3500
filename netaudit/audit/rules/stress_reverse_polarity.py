"""Reverse voltage on a polarised capacitor.

More than 10 mV beyond the reverse voltage V_rev that a capacitor written with + and - allows (0 unless stated).

Mend: turn it round.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/reverse-polarity", "error", "stress", "reverse voltage on a polarised capacitor")
