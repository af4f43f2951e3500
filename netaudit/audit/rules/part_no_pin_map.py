"""A polarised part of an export without a pin map.

A schematic export knows package pins, not anode and cathode.  The part's row must say which pin is which; it is never guessed.

    passes: pins = { "1" = "A", "2" = "K" } in the part's row
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("part/no-pin-map", "error", "structure", "a polarised part of an export without a pin map")
