"""``curve``: current into + against the voltage from + to -, as measured; see ``table``."""

from __future__ import annotations

from dataclasses import dataclass, replace

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Key, Kind, Values, View, conductance, two_pin
from netaudit.devices.common import current, power, voltage
from netaudit.devices.junction import LEAK
from netaudit.devices.measured import curve_of


@dataclass(frozen=True)
class CurveKind(Kind):
    def resolve(self, device: Device) -> Device:
        if not device.points:
            return replace(device, missing="it has no curve: neither points of its part nor a file")
        curve_of(device)
        return device

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        p, q = a.pin("+"), a.pin("-")
        two_pin(a, curve_of(device), p, q)
        conductance(a, p, q, LEAK)

    def growth(self, device: Device) -> Growth:
        return curve_of(device).shape

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (power(), voltage("+", "-"), current("+"))

    def requirement(self, view: View, device: Device) -> Array:
        return view.i("+")


KIND = CurveKind(
    "curve",
    (("+", "-"),),
    keys={"points": Key()},
    ratings=("P_tot", "T_ref", "T_j", "T_max", "R_th_ja", "R_th_jc", "V_max", "I_max"),
)
