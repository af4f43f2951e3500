"""A reference below its knee current.

A zener or shunt reference that regulates falls below I_ZK (I_K_min) and no longer holds its voltage.  ``use=clamp``
says that it is meant to stay off.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/zener-starved", "warning", "point", "a reference below its knee current")
