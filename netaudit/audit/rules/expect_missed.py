"""A requirement of an expect line that is not met.

Every ``expect`` line is looked at over all ranges and tolerances, at both ends.  The finding names the corner at
which the quantity leaves the range.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("expect/missed", "error", "expect", "a requirement of an expect line that is not met")
