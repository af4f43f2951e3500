"""``relay``: a coil of resistance R between C1 and C2; COM to NO when on, to NC when off.

The contact state is given; whether the coil's voltage fits it is judged afterwards: on needs V_on (default 1 V) at
least, off V_off (default 1 V) at most.  V_max limits the voltage across the open contact.
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
    Values,
    View,
    conductance,
    resistance,
)
from netaudit.devices.common import POSITIVE_OHM, stated_voltage

_THRESHOLD = 1.0


@dataclass(frozen=True)
class Relay(Kind):
    def resolve(self, device: Device) -> Device:
        if "R" not in device.values:
            return replace(device, missing="a relay needs the resistance R of its coil")
        return device

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        conductance(a, a.pin("C1"), a.pin("C2"), 1.0 / np.asarray(values["R"]))
        contact = a.pin("NO" if device.words["state"] == "on" else "NC")
        resistance(a, a.pin("COM"), contact, values.get("R_on", 0.0))

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("C1", "C2"), ("COM", "NO" if device.words["state"] == "on" else "NC"))

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        carried = Check("current", "A", ("I_max",), lambda view: view.i("COM"), both=True, required=True)
        return (carried, *stated_voltage(device, "COM", "NC" if device.words["state"] == "on" else "NO"))


def coil_misfit(view: View, device: Device) -> Array:
    """Volts by which the coil's voltage misses what the given contact state needs (positive: it does not fit)."""
    volts = np.abs(view.v("C1") - view.v("C2"))
    if device.words["state"] == "on":
        return np.asarray(device.nominal("V_on", _THRESHOLD) - volts)
    return np.asarray(volts - device.nominal("V_off", _THRESHOLD))


KIND = Relay(
    "relay",
    (("C1", "C2", "COM", "NO", "NC"),),
    states=("off", "on"),
    keys={
        "R": Key("ohm", positive=True),
        "R_on": POSITIVE_OHM,
        "V_on": Key("V", positive=True),
        "V_off": Key("V", positive=True),
    },
    ratings=("I_max", "V_max"),
)
