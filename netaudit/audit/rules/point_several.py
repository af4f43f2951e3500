"""More than one operating point that can persist.

The circuit can settle in several ways (a latch, a Schmitt trigger).  Each point is audited.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/several", "warning", "point", "more than one operating point that can persist")
