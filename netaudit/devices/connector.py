"""``connector`` and ``testpoint``: no current; they mark nets that leave the board or are probed."""

from __future__ import annotations

from dataclasses import dataclass

from netaudit.devices.base import Device, Growth, Kind


@dataclass(frozen=True)
class Marker(Kind):
    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return ()

    def growth(self, device: Device) -> Growth:
        return "increasing"


KIND = Marker("connector", (), polarised=False, heats=False)
