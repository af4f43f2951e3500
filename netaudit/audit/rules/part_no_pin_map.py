"""A polarised part of an export without a pin map.

A schematic export knows package pins 1 and 2, not anode and cathode.  The row of the part must say which pin is which
terminal; it is never guessed, since half of the guesses would turn a diode round.  The finding names the line to add.

Mend: ``pins = { "1" = "K", "2" = "A" }`` in the part's row, by its data sheet.

Source: common practice; board exports seen call all pins by number.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("part/no-pin-map", "error", "structure", "a polarised part of an export without a pin map")
