"""``driver``: a logic output between its rails V and G: R_high to V, R_low to G, or off; clamp junctions to both.

V_max limits the voltage between the rails.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Assembly, Check, Device, Growth, Key, Kind, Values, conductance, resistance
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power, stated_voltage
from netaudit.devices.rows import clamp


@dataclass(frozen=True)
class Driver(Kind):
    def resolve(self, device: Device) -> Device:
        needed = {"high": "R_high", "low": "R_low"}.get(device.words["state"])
        if needed is not None and needed not in device.values:
            return replace(device, missing=f"a driver that is {device.words['state']} needs {needed}")
        return device

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        o, v, g = a.pin("OUT"), a.pin("V"), a.pin("G")
        clamp(a, o, v, values.temperature)
        clamp(a, g, o, values.temperature)
        state = device.words["state"]
        if state == "off":
            return
        rail, name = (v, "R_high") if state == "high" else (g, "R_low")
        if device.values[name].low < 1.0:
            resistance(a, o, rail, values[name])
        else:
            conductance(a, o, rail, 1.0 / np.asarray(values[name]))

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("current", "A", ("I_max",), lambda view: view.i("OUT"), both=True, required=True),
            *stated_voltage(device, "V", "G"),
            power(),
            junction_temperature(),
        )


KIND = Driver(
    "driver",
    (("OUT", "V", "G"),),
    states=("high", "low", "off"),
    keys={"R_high": Key("ohm", least=0.0), "R_low": Key("ohm", least=0.0)},
    ratings=("I_max", "V_max", *POWER_RATINGS),
)
