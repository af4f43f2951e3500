"""Current pushed into a supply.

More current is pushed into a supply than its ``sinks`` allows (10 uA unless stated), or the net of a supply that is
off stands above 0.3 V and is fed more than 10 uA.  The path is named.  The mode is solved once more with that supply
open, and the stresses of both solutions count.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/back-feed", "error", "point", "current pushed into a supply")
