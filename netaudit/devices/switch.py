"""``switch``: closed, v = R_on i; open, nothing."""

from __future__ import annotations

from dataclasses import dataclass

from netaudit.devices.base import Assembly, Check, Device, Growth, Kind, Values, resistance
from netaudit.devices.common import POSITIVE_OHM, current, stated_voltage


@dataclass(frozen=True)
class Switch(Kind):
    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        if device.words["state"] == "closed":
            resistance(a, a.pin("1"), a.pin("2"), values.get("R_on", 0.0))

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("1", "2"),) if device.words["state"] == "closed" else ()

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (current("1", required=True), *stated_voltage(device, "1", "2"))


KIND = Switch(
    "switch",
    (("1", "2"),),
    states=("open", "closed"),
    keys={"R_on": POSITIVE_OHM},
    ratings=("I_max", "V_max"),
    polarised=False,
    heats=False,
)
