"""Current against the rated current.

The current through an inductor, fuse, link, switch, relay contact, supply, driver or wiper against I_max (a fuse: its
own value).

Mend: a part for more current.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/current", "error", "stress", "current against the rated current")
