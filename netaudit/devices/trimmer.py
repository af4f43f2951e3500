"""``trimmer``: a track with a wiper; at R from pin 1 to W, (1 - at) R from W to pin 2."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Key, Kind, Values, ValueSpec, View, resistance
from netaudit.devices.common import voltage
from netaudit.quantities.quantity import exact


def _heat(view: View) -> Array:
    """The power that the whole track would take at the heat per length of its hotter part: P_tot holds for the track."""
    at = np.clip(view.value("at"), 1e-6, 1 - 1e-6)
    left = (view.v("1") - view.v("W")) * view.i("1")
    right = (view.v("2") - view.v("W")) * view.i("2")
    return np.maximum(left / at, right / (1 - at))


@dataclass(frozen=True)
class Trimmer(Kind):
    def resolve(self, device: Device) -> Device:
        return replace(device, values={"at": exact(0.5, "1"), **device.values})

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        r, at = np.asarray(values["value"]), np.asarray(values["at"])
        resistance(a, a.pin("1"), a.pin("W"), r * at, "i1")
        resistance(a, a.pin("W"), a.pin("2"), r * (1 - at), "i2")

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        wiper = Check("current", "A", ("I_max",), lambda view: view.i("W"), both=True)
        track = Check("power", "W", ("P_tot",), _heat, required=True, derated=True)
        return (track, voltage("1", "2"), wiper)


KIND = Trimmer(
    "trimmer",
    (("1", "W", "2"),),
    value=ValueSpec(("ohm",), positive=True),
    keys={"at": Key("1", 0.5, least=0.0, most=1.0)},
    ratings=("P_tot", "T_ref", "T_max", "V_max", "I_max"),
)
