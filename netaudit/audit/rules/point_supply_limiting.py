"""A supply in its current limit.

At 99.9 % of its limit a supply no longer holds its voltage; a shorted rail would leave every other part unstressed,
so it must not pass.  ``limiting=ok`` says that it is meant.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/supply-limiting", "error", "point", "a supply in its current limit")
