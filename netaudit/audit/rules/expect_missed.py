"""A requirement of an expect line that is not met.

Every ``expect`` line is looked at over all ranges and tolerances, at both ends.  The finding names the corner at
which the quantity leaves the range, and stands at the line of the requirement.

Mend: the circuit, or the requirement.

Source: the netlist itself.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V 9V..15V +:V -:GND
        R1 resistor 1k 1:V 2:M
        R2 resistor 1k 1:M 2:GND
        expect voltage M 5.2V..6.8V

    passes:
        PS1 supply 12V 9V..15V +:V -:GND
        R1 resistor 1k 1:V 2:M
        R2 resistor 1k 1:M 2:GND
        expect voltage M 4V..8V
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("expect/missed", "error", "expect", "a requirement of an expect line that is not met")
