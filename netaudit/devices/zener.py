"""``zener``: breakdown through (V_Z, I_Z) from cathode to anode, a silicon junction the other way.

    v_KA = V_Z + V_k ln(i / I_Z) + R_z (i - I_Z),  slope r_Z at I_Z;  V_Z moves with alpha_VZ (T - 25 degC)

V_k and R_z from r_ZK at I_ZK where given, else half of r_Z each.  I_Z (5 mA) and r_Z of the voltage's class where the part
gives neither, which is a rough model.  Left out: noise, the leakage before the knee (I_R adds it).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Key, Kind, Values, View, two_pin
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.diode import JUNCTION_KEYS
from netaudit.devices.junction import breakdown, curve_of, forward, with_breakdown, with_junction


@dataclass(frozen=True)
class Zener(Kind):
    def resolve(self, device: Device) -> Device:
        if device.points:
            return device
        if "V_Z" not in device.values:
            return replace(device, missing="it has no model: no V_Z")
        return with_breakdown(with_junction(device, default="silicon"))

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        p, q = a.pin("A"), a.pin("K")
        if device.points:
            two_pin(a, curve_of(device), p, q)
            return
        forward(a, values, p, q)
        breakdown(a, values, q, p)

    def growth(self, device: Device) -> Growth:
        return curve_of(device).shape if device.points else "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("zener-current", "A", ("I_ZM",), lambda view: view.i("K")),
            power(required=True),
            junction_temperature(),
        )

    def requirement(self, view: View, device: Device) -> Array:
        return view.i("K")


KIND = Zener(
    "zener",
    (("A", "K"),),
    keys={**JUNCTION_KEYS, "I_ZK": Key("A", positive=True), "use": Key(words=("clamp",))},
    ratings=("I_ZM", "I_ZK", "I_F", *POWER_RATINGS),
)
