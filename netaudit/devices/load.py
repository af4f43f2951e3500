"""``load``: a constant current, power or resistance, told apart by the unit of its value.

Below V_min the current falls in a straight line to 0 at 0 V (and goes on below, so that a load never delivers power).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import (
    Array,
    Assembly,
    Check,
    Device,
    Growth,
    Key,
    Kind,
    Value,
    Values,
    ValueSpec,
    View,
    conductance,
)
from netaudit.devices.common import power
from netaudit.devices.families import RAMP
from netaudit.devices.power import FADING_POWER
from netaudit.failure import InputError
from netaudit.quantities.quantity import exact


@dataclass(frozen=True)
class Load(Kind):
    def resolve(self, device: Device) -> Device:
        value = device.values["value"]
        if value.unit == "A" and "V_min" not in device.values:
            return replace(device, values={**device.values, "V_min": exact(1.0, "V")})
        if value.unit == "W" and "V_min" not in device.values:
            raise InputError(
                f"{device.name}: a load of constant power needs V_min",
                place=device.place,
                mend="below it the current falls to 0 at 0 V: V_min=3V",
            )
        if value.unit == "ohm" and value.low <= 0:
            raise InputError(f"{device.name}: a load of 0 ohm", place=device.place, mend="use a link")
        return device

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        p, q = a.pin("+"), a.pin("-")
        unit = device.values["value"].unit
        value = np.asarray(values["value"])
        if unit == "ohm":
            conductance(a, p, q, 1.0 / value)
        elif unit == "W":
            ends: list[tuple[int, Value]] = [(p, 1.0), (q, -1.0)]
            least = device.nominal("V_min")
            a.branch(FADING_POWER, ends, ends, start=4 * least, P=value, V_min=values["V_min"])
        else:
            slope = value / np.asarray(values["V_min"])
            conductance(a, p, q, slope)
            sense: list[tuple[int, Value]] = [(p, 1.0), (q, -1.0)]
            least = device.nominal("V_min")
            a.branch(RAMP, [(p, -slope), (q, slope)], sense, start=2 * least, offset=values["V_min"])

    def growth(self, device: Device) -> Growth:
        return {"ohm": "increasing", "A": "nondecreasing"}.get(device.values["value"].unit, "other")  # type: ignore[return-value]

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (power(),) if "P_tot" in device.ratings else ()

    def requirement(self, view: View, device: Device) -> Array:
        return np.abs(view.i("+"))


KIND = Load(
    "load",
    (("+", "-"),),
    value=ValueSpec(("A", "W", "ohm"), least=0.0),
    keys={"V_min": Key("V", positive=True)},
    ratings=("P_tot", "T_ref", "T_j", "T_max", "R_th_ja"),
)
