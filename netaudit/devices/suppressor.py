"""``suppressor``: a zener meant to stay off; with pins 1 and 2 it breaks down the same way in both directions.

The two-way form has one breakdown branch each way and no forward junction (its data sheet's V_Z includes that drop).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Key, Kind, Values, View, conductance, two_pin
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.diode import JUNCTION_KEYS
from netaudit.devices.junction import LEAK, breakdown, curve_of, forward, with_breakdown, with_junction


@dataclass(frozen=True)
class Suppressor(Kind):
    def resolve(self, device: Device) -> Device:
        if device.points:
            return device
        if "V_Z" not in device.values:
            return replace(device, missing="it has no model: no V_Z")
        return with_breakdown(with_junction(device, default="silicon"))

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        if device.points:
            p, q = tuple(device.pins)
            two_pin(a, curve_of(device), a.pin(p), a.pin(q))
        elif "A" in device.pins:
            forward(a, values, a.pin("A"), a.pin("K"))
            breakdown(a, values, a.pin("K"), a.pin("A"))
        else:
            breakdown(a, values, a.pin("1"), a.pin("2"))
            breakdown(a, values, a.pin("2"), a.pin("1"))
            conductance(a, a.pin("1"), a.pin("2"), LEAK)

    def growth(self, device: Device) -> Growth:
        return curve_of(device).shape if device.points else "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        if "A" in device.pins:
            off = Check("stand-off-voltage", "V", ("V_RWM",), lambda view: view.v("K") - view.v("A"), required=True)
        else:
            off = Check(
                "stand-off-voltage", "V", ("V_RWM",), lambda view: view.v("1") - view.v("2"), both=True, required=True
            )
        return (off, power(), junction_temperature())

    def requirement(self, view: View, device: Device) -> Array:
        return view.i("K") if "A" in device.pins else np.abs(view.i("1"))


KIND = Suppressor(
    "suppressor",
    (("A", "K"), ("1", "2")),
    keys={**JUNCTION_KEYS, "I_ZK": Key("A", positive=True), "use": Key(words=("clamp",))},
    ratings=("V_RWM", "I_ZM", "I_ZK", *POWER_RATINGS),
)
