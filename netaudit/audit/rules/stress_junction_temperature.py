"""Junction temperature against T_j.

T_j of the electrothermal solution: T_j = T_ambient + R_th P(T_j), solved together with the circuit.

Mend: lower power or a lower thermal resistance.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/junction-temperature", "error", "stress", "junction temperature against T_j")
