"""Voltage against the rated or element voltage.

The voltage across a capacitor against V_R, and across every part with a V_max (element voltage of a resistor) against
that.

Mend: a part with a higher rated voltage, or several in series.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/voltage", "error", "stress", "voltage against the rated or element voltage")
