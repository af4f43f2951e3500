"""A waiver that has expired or that matches nothing.

A waiver covers one rule on named parts or nets of one board, as far as its ratio (or value) and as long as its date.  One
that no finding needs any more, or whose date has passed, would hide the next mistake at the same place.

Mend: remove the waiver, or review it and give it a new date.

Source: common practice of reviewed exceptions.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("gate/stale-waiver", "warning", "gate", "a waiver that has expired or matches nothing")
