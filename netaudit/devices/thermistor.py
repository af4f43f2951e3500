"""``thermistor``: R(T) = R_25 exp(B (1/T - 1/298.15 K)), T the part's own temperature."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Assembly, Check, Device, Growth, Key, Kind, Values, ValueSpec
from netaudit.devices.common import power, voltage
from netaudit.devices.junction import KELVIN
from netaudit.devices.resistor import stamp_resistance


@dataclass(frozen=True)
class Thermistor(Kind):
    def resolve(self, device: Device) -> Device:
        if "B" not in device.values:
            return replace(device, missing="a thermistor needs its B value")
        return device

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        t = np.asarray(values.temperature) + KELVIN
        r = np.asarray(values["value"]) * np.exp(np.asarray(values["B"]) * (1 / t - 1 / (25.0 + KELVIN)))
        stamp_resistance(a, a.pin("1"), a.pin("2"), r, device.values["value"].low < 1.0)

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (power(required=True), voltage("1", "2"))


KIND = Thermistor(
    "thermistor",
    (("1", "2"),),
    value=ValueSpec(("ohm",), positive=True),
    keys={"B": Key("K")},
    ratings=("P_tot", "T_ref", "T_max", "V_max", "R_th_ja", "R_th_jc", "T_j"),
    polarised=False,
)
