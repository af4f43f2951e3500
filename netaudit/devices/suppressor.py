"""``suppressor``: a zener meant to stay off; with pins 1 and 2 it breaks down the same way in both directions.

The two-way form has one breakdown branch each way and no forward junction (its data sheet's V_Z includes that drop); a
measured curve of one direction stands for both.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Kind, Values, View, conductance
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.junction import LEAK, breakdown, with_breakdown
from netaudit.devices.measured import check_measured, measured_growth, stamp_two_way
from netaudit.devices.zener import BREAKDOWN_KEYS, stamp_zener, with_zener


def _breakdown_current(device: Device) -> tuple[Check, ...]:
    """The breakdown current, where a rating for it is stated."""
    if "I_ZM" not in device.ratings:
        return ()
    one_way = "A" in device.pins
    return (Check("zener-current", "A", ("I_ZM",), lambda view: view.i("K" if one_way else "1"), both=not one_way),)


@dataclass(frozen=True)
class Suppressor(Kind):
    def resolve(self, device: Device) -> Device:
        if "A" in device.pins:
            return with_zener(device)
        if device.points:
            check_measured(device)
            return device
        if "V_Z" not in device.values:
            return replace(device, missing="it has no model: no V_Z")
        return with_breakdown(device)

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        if "A" in device.pins:
            stamp_zener(a, device, values)
            return
        p, q = a.pin("1"), a.pin("2")
        if device.points:
            stamp_two_way(a, device, values, p, q)
            return
        breakdown(a, values, p, q)
        breakdown(a, values, q, p)
        conductance(a, p, q, LEAK)

    def growth(self, device: Device) -> Growth:
        return measured_growth(device) if device.points else "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        if "A" in device.pins:
            off = Check("stand-off-voltage", "V", ("V_RWM",), lambda view: view.v("K") - view.v("A"), required=True)
        else:
            off = Check(
                "stand-off-voltage", "V", ("V_RWM",), lambda view: view.v("1") - view.v("2"), both=True, required=True
            )
        return (off, power(), junction_temperature(), *_breakdown_current(device))

    def requirement(self, view: View, device: Device) -> Array:
        return view.i("K") if "A" in device.pins else np.abs(view.i("1"))


KIND = Suppressor(
    "suppressor",
    (("A", "K"), ("1", "2")),
    keys=BREAKDOWN_KEYS,
    ratings=("V_RWM", "I_ZM", "I_ZK", *POWER_RATINGS),
)
