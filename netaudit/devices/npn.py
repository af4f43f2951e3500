"""``npn``: see ``bipolar``."""

from __future__ import annotations

from netaudit.devices.bipolar import KEYS, RATINGS, Bipolar

KIND = Bipolar("npn", (("B", "C", "E"),), keys=KEYS, ratings=RATINGS, sign=1.0)
