"""A check that could not be made.

The part does not state the rating that a check compares with.  Nothing is guessed: the check is counted as missing.

    fails:  R1 resistor 100R 1:A 2:B
    passes: R1 resistor 100R P_tot=250mW 1:A 2:B
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("part/no-rating", "note", "structure", "a check that could not be made")
