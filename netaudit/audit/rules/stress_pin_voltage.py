"""Pin voltage of an unmodelled part against its limits.

The voltage of a pin with absolute limits in the part's row, against the part's own ground pin (GND, VSS, V-, -, G; the
reference net when it has none of them):

    [LOGIC.ratings]
    pins = { IO3 = "-0.3V..3.6V" }

Value and limit keep their sign.  No policy speaks of such limits.

Mend: a divider, a series resistance with a clamp, or another level.

Source: absolute maximum ratings by the letter symbols of IEC 60747; that they hold at every corner is common practice.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/pin-voltage", "error", "stress", "pin voltage of an unmodelled part against its limits")
