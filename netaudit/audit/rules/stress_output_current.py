"""Output current against I_O.

Output current of a regulator, converter or amplifier against I_O.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/output-current", "error", "stress", "output current against I_O")
