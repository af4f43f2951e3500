"""``nmos``: see ``field_effect``."""

from __future__ import annotations

from netaudit.devices.field_effect import MOS_KEYS, RATINGS, FieldEffect

KIND = FieldEffect("nmos", (("G", "D", "S"),), keys=MOS_KEYS, ratings=RATINGS, sign=1.0, junction=False)
