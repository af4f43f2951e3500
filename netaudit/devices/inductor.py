"""``inductor``: a short at DC but for its winding, v = R i (1 + alpha (T - 25 degC))."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Assembly, Check, Device, Growth, Key, Kind, Values, ValueSpec, resistance
from netaudit.devices.common import POSITIVE_OHM, current, power


@dataclass(frozen=True)
class Inductor(Kind):
    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        rise = np.asarray(values.temperature) - 25.0
        r = np.asarray(values.get("R", 0.0)) * (1.0 + np.asarray(values.get("alpha", 0.0)) * rise)
        resistance(a, a.pin("1"), a.pin("2"), r)

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        heat = (power(),) if "P_tot" in device.ratings else ()
        return (current("1", required=True), *heat)


KIND = Inductor(
    "inductor",
    (("1", "2"),),
    value=ValueSpec(("H",), required=False, least=0.0),
    keys={"R": POSITIVE_OHM, "alpha": Key("1/K")},
    ratings=("I_max", "P_tot", "T_ref", "T_max", "R_th_ja"),
    polarised=False,
)
