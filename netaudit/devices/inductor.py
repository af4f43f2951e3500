"""``inductor``: a short at DC but for its winding, v = R i (1 + alpha (T - 25 degC))."""

from __future__ import annotations

from dataclasses import dataclass, replace

from netaudit.devices.base import Assembly, Check, Device, Growth, Key, Kind, Values, ValueSpec, resistance
from netaudit.devices.common import POSITIVE_OHM, current, power, stated_voltage
from netaudit.devices.resistor import at_temperature
from netaudit.quantities.quantity import exact


@dataclass(frozen=True)
class Inductor(Kind):
    def resolve(self, device: Device) -> Device:
        return replace(device, values={"T_0": exact(25.0, "degC"), **device.values})

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        resistance(a, a.pin("1"), a.pin("2"), at_temperature(values, "R") if values.has("R") else 0.0)

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        heat = (power(),) if "P_tot" in device.ratings else ()
        return (current("1", required=True), *stated_voltage(device, "1", "2"), *heat)


KIND = Inductor(
    "inductor",
    (("1", "2"),),
    value=ValueSpec(("H",), required=False, least=0.0),
    keys={"R": POSITIVE_OHM, "alpha": Key("1/K")},
    ratings=("I_max", "V_max", "P_tot", "T_ref", "T_max", "R_th_ja"),
    polarised=False,
)
