"""Pin voltage of an unmodelled part against its limits.

The voltage of a pin against the part's ground pin, with the absolute limits of the part's row (pins = { IO3 =
"-0.3V..3.6V" }).
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/pin-voltage", "error", "stress", "pin voltage of an unmodelled part against its limits")
