"""A regulator without its headroom.

v_IN - v_OUT is below the drop-out voltage: the output is no longer regulated.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/drop-out", "error", "point", "a regulator without its headroom")
