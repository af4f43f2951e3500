"""``led``: a diode whose material is worth knowing; see ``diode``."""

from __future__ import annotations

from netaudit.devices.common import POWER_RATINGS
from netaudit.devices.diode import JUNCTION_KEYS, USE, Diode

KIND = Diode("led", (("A", "K"),), keys={**JUNCTION_KEYS, "use": USE}, ratings=("I_F", "V_R", "V_RRM", *POWER_RATINGS))
