"""Values held at nominal.

A value that decides a stress (a resistance, V_F, V_Z, h_FE, V_GS(th), CTR) has no tolerance and is held at its
nominal in the worst case.  One note a board, with the list.

    fails:  R1 resistor 1k 1:A 2:B
    passes: R1 resistor 1k 1% 1:A 2:B
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("part/no-spread", "note", "structure", "values held at nominal")
