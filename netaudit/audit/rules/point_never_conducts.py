"""An LED or series diode that never conducts.

An LED or optocoupler input that conducts (above 10 uA) in no mode, or a diode that conducts in no mode though other
parts get current through it alone.  Clamps, flyback diodes and suppressors are meant to stay off.
"""

from __future__ import annotations

from netaudit.audit.rule import Rule

RULE = Rule("point/never-conducts", "warning", "point", "an LED or series diode that never conducts")
