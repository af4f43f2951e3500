"""A part name that stands in no table.

The name after part= is in none of the part tables that the netlist names.  Ratings and model are then unknown.

    fails:  D1 diode part=DIODE-1AA A:A K:K
    passes: a row [DIODE-1AA] in a table named by a parts statement
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("part/unknown", "error", "structure", "a part name that stands in no table")
