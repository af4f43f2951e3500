"""``capacitor``: open at DC, but for a leakage resistance; polarised when written with + and -."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Assembly, Check, Device, Growth, Key, Kind, Values, ValueSpec, conductance


@dataclass(frozen=True)
class Capacitor(Kind):
    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        if values.has("leakage"):
            p, q = tuple(device.pins)[:2]
            conductance(a, a.pin(p), a.pin(q), 1.0 / np.asarray(values["leakage"]))

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (tuple(device.pins),) if "leakage" in device.values else ()

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        if "+" not in device.pins:
            return (Check("voltage", "V", ("V_R",), lambda view: view.v("1") - view.v("2"), both=True, required=True),)
        return (
            Check("voltage", "V", ("V_R",), lambda view: view.v("+") - view.v("-"), required=True),
            Check("reverse-polarity", "V", ("V_rev",), lambda view: view.v("-") - view.v("+")),
        )


KIND = Capacitor(
    "capacitor",
    (("+", "-"), ("1", "2")),
    value=ValueSpec(("F",), required=False, least=0.0),
    keys={"leakage": Key("ohm", positive=True)},
    ratings=("V_R", "V_rev"),
    heats=False,
)
