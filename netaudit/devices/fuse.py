"""``fuse``: a cold resistance that carries its rated current, or ``open``."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

from netaudit.devices.base import Assembly, Check, Device, Growth, Kind, Values, ValueSpec, resistance
from netaudit.devices.common import POSITIVE_OHM, current
from netaudit.parts.part import Rating


@dataclass(frozen=True)
class Fuse(Kind):
    def resolve(self, device: Device) -> Device:
        if "value" not in device.values:
            return device
        rated = Rating("value", ((math.nan, device.values["value"].nominal),), "the fuse's own value")
        return replace(device, ratings={**device.ratings, "value": rated})

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        if device.words.get("state") != "open":
            resistance(a, a.pin("1"), a.pin("2"), values.get("R", 0.0))

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return () if device.words.get("state") == "open" else (("1", "2"),)

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        if device.words.get("state") == "open":
            return ()
        return (current("1", "value", required=True),)


KIND = Fuse(
    "fuse",
    (("1", "2"),),
    value=ValueSpec(("A",), positive=True),
    states=("open",),
    keys={"R": POSITIVE_OHM},
    polarised=False,
    heats=False,
)
