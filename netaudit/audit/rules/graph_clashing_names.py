"""Names of a schematic export that clash.

An error where two parts have one designator and share a pin that is on different nets: one of them would vanish.  A
warning where two nets have one name, or where nets or designators differ only in letter case: they are kept apart, and
a reader of the drawing takes them for one.  Units of one package have one designator and are no clash.

Mend: give each part a designator and each net a name of its own; a net that was meant to be one is drawn as one.

Source: common practice; exports seen give one identifier to two nets of a pair.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("graph/clashing-names", "error", "structure", "parts or nets of an export with one name")
