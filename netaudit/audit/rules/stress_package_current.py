"""Sum of pin currents over a rail.

The sum of the currents that a package's parts draw from one rail, against the package's I_max.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/package-current", "error", "stress", "sum of pin currents over a rail")
