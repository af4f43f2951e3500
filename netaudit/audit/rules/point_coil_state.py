"""A relay whose coil does not fit its contacts.

The coil's voltage does not fit the contact state that the netlist gives.  A relay that is on needs V_on at its coil,
one that is off has V_off at most.  Where these are not stated, on needs half of the largest voltage that the coil gets
in any mode, off has a tenth of it at most, and neither limit is below 1 V.

Mend: the state that fits, or the drive of the coil.

Source: common practice.

A board that fails and one that passes, below ``netlist 1`` and ``ground GND``:

    fails:
        PS1 supply 12V +:V -:GND
        K1 relay off R=500ohm C1:V C2:GND COM:V NO:L NC:nc
        R1 resistor 1k 1:L 2:GND

    passes:
        PS1 supply 12V +:V -:GND
        K1 relay on R=500ohm C1:V C2:GND COM:V NO:L NC:nc
        R1 resistor 1k 1:L 2:GND
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/coil-state", "warning", "point", "a relay whose coil does not fit its contacts")
