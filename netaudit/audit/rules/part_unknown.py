"""A part name that stands in no table.

The name after ``part=`` is in none of the part tables that the netlist names.  Ratings and model are then unknown: what
stands on the device line still counts, the rest is missing.

Mend: correct the name, add a row to a part table, or name the table by a ``parts`` statement.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        parts common
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k part=CHIP-12060 1:VIN 2:GND

    passes:
        parts common
        PS1 supply 12V +:VIN -:GND
        R1 resistor 1k part=CHIP-1206 1:VIN 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("part/unknown", "error", "structure", "a part name that stands in no table")
