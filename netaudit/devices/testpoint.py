"""``testpoint``: see ``connector``."""

from __future__ import annotations

from netaudit.devices.connector import Marker

KIND = Marker("testpoint", (), polarised=False, heats=False)
