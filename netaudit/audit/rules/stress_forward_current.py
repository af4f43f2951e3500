"""Forward current against its continuous rating.

I_F of a diode, LED, bridge or optocoupler against its continuous rating at the ambient temperature (pairs such as
"25mA @ 25degC" are followed).

    I_F <= rating;  above the policy's share: warning

Mend: a larger series resistance, or a part with a higher I_F.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("stress/forward-current", "error", "stress", "forward current against its continuous rating")
