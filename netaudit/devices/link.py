"""``link``: a trace, contact, bead or jumper: v = R i, R 0 by default."""

from __future__ import annotations

from dataclasses import dataclass

from netaudit.devices.base import Assembly, Check, Device, Growth, Kind, Values, resistance
from netaudit.devices.common import POSITIVE_OHM, current, stated_voltage


@dataclass(frozen=True)
class Link(Kind):
    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        resistance(a, a.pin("1"), a.pin("2"), values.get("R", 0.0))

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (current("1"), *stated_voltage(device, "1", "2"))


KIND = Link("link", (("1", "2"),), keys={"R": POSITIVE_OHM}, ratings=("I_max", "V_max"), polarised=False)
