"""A relay whose coil does not fit its contacts.

The coil's voltage does not fit the contact state that the netlist gives.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/coil-state", "warning", "point", "a relay whose coil does not fit its contacts")
