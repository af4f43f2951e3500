"""``pjfet``: see ``field_effect``."""

from __future__ import annotations

from netaudit.devices.field_effect import JUNCTION_KEYS, RATINGS, FieldEffect

KIND = FieldEffect("pjfet", (("G", "D", "S"),), keys=JUNCTION_KEYS, ratings=RATINGS, sign=-1.0, junction=True)
