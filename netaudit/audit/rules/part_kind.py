"""A part used as another kind than its table says.

The row of the part states another kind than the device line.  One of the two is wrong, and the model would be too.

    fails:  D1 diode part=NPN-A A:A K:K
    passes: Q1 npn part=NPN-A B:B C:C E:E
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("part/kind", "error", "structure", "a part used as another kind than its table says")
