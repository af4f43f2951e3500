"""``current-source``: j = I leaves +, up to a compliance voltage across it.

With a compliance V_c the source holds I while v_+ - v_- < V_c, any current between 0 and I at V_c, and none beyond:
y = max(V_c - v, -rho j) and min(rho (I - j), y) = 0, each written with one ramp.  Negative I: mirrored.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array, Assembly, Device, Growth, Key, Kind, Values, ValueSpec, View
from netaudit.devices.families import RAMP


@dataclass(frozen=True)
class CurrentSource(Kind):
    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        p, q = a.pin("+"), a.pin("-")
        current = np.asarray(values["value"])
        if not values.has("compliance"):
            a.source(p, current)
            a.source(q, -current)
            return
        j, y = a.unknown("j"), a.unknown("y")
        v_c = np.asarray(values["compliance"])
        s = -1.0 if device.nominal("value") < 0 else 1.0
        rho = max(device.nominal("compliance"), 1.0) / max(abs(device.nominal("value")), 1e-12)
        a.add(p, j, -s)
        a.add(q, j, s)
        # y - (V_c - s v) - max(0, s v - V_c - rho j) = 0, j counted in the source's own direction
        a.add(y, y, 1.0)
        a.add(y, p, s)
        a.add(y, q, -s)
        a.source(y, v_c)
        a.branch(RAMP, [(y, -1.0)], [(p, s), (q, -s), (j, -rho)], offset=v_c)
        # rho (I - j) - max(0, rho (I - j) - y) = 0
        size = rho * np.abs(current)
        a.add(j, j, -rho)
        a.source(j, -size)
        a.branch(RAMP, [(j, -1.0)], [(j, -rho), (y, -1.0)], offset=-size)

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("+", "-"),) if "compliance" in device.values else ()

    def growth(self, device: Device) -> Growth:
        return "nondecreasing" if "compliance" in device.values else "increasing"

    def requirement(self, view: View, device: Device) -> Array:
        return -view.i("+")


KIND = CurrentSource(
    "current-source",
    (("+", "-"),),
    value=ValueSpec(("A",)),
    keys={"compliance": Key("V", positive=True)},
    heats=False,
)
