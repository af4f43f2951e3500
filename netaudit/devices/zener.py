"""``zener``: breakdown through (V_Z, I_Z) from cathode to anode, a silicon junction the other way.

    v_KA = V_Z + V_k ln(i / I_Z) + R_z (i - I_Z),  slope r_Z at I_Z;  V_Z moves with alpha_VZ (T - 25 degC)

V_k and R_z from r_ZK at I_ZK where given, else half of r_Z each.  I_Z (5 mA) and r_Z of the voltage's class where the part
gives neither, which is a rough model.  A measured curve shows its breakdown at positive voltages (taken from K to A) or at
negative ones (from A to K); where it ends at 0 V the silicon junction stands in for the rest.  Left out: noise, the leakage before the knee (I_R adds it).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Key, Kind, Values, View
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.diode import JUNCTION_KEYS, USE
from netaudit.devices.junction import breakdown, forward, with_breakdown, with_junction
from netaudit.devices.measured import (
    FORWARD,
    check_measured,
    from_cathode,
    junction_curve,
    measured_growth,
    stamp_measured,
)

BREAKDOWN_KEYS = {**JUNCTION_KEYS, "I_ZK": Key("A", positive=True), "use": USE}


def with_zener(device: Device) -> Device:
    """The device with its breakdown and the junction the other way, or with its measured curve."""
    if not device.points:
        if "V_Z" not in device.values:
            return replace(device, missing="it has no model: no V_Z")
        return with_breakdown(with_junction(device, default="silicon"))
    check_measured(device)
    device = from_cathode(device)
    if device.points[-1][0] < FORWARD:
        return replace(device, missing="it has no model: its measured curve does not reach the breakdown")
    ends_at_zero = junction_curve(device).points[0] == (-1.0, 0.0)
    return with_junction(device, default="silicon") if ends_at_zero else device


def stamp_zener(a: Assembly, device: Device, values: Values) -> None:
    """Breakdown from K to A and what the other direction carries."""
    p, q = a.pin("A"), a.pin("K")
    if device.points:
        stamp_measured(a, device, values, q, p)
    else:
        breakdown(a, values, q, p)
    if values.has("I_S"):
        forward(a, values, p, q)


def _forward(device: Device) -> tuple[Check, ...]:
    """The forward current, where a rating for it is stated."""
    return (Check("forward-current", "A", ("I_F",), lambda view: view.i("A")),) if "I_F" in device.ratings else ()


@dataclass(frozen=True)
class Zener(Kind):
    def resolve(self, device: Device) -> Device:
        return with_zener(device)

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        stamp_zener(a, device, values)

    def growth(self, device: Device) -> Growth:
        return measured_growth(device) if device.points else "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("zener-current", "A", ("I_ZM",), lambda view: view.i("K")),
            power(required=True),
            junction_temperature(),
            *_forward(device),
        )

    def requirement(self, view: View, device: Device) -> Array:
        return view.i("K")


KIND = Zener("zener", (("A", "K"),), keys=BREAKDOWN_KEYS, ratings=("I_ZM", "I_ZK", "I_F", *POWER_RATINGS))
