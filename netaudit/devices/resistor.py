"""``resistor``: i = v / R(T), R(T) = R (1 + alpha (T - T_0) + alpha_2 (T - T_0)^2), T in degC, IEC 60751 for a Pt100."""

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
    resistance,
)
from netaudit.devices.common import power, voltage
from netaudit.quantities.quantity import exact

#: the least share of its resistance that a part keeps: its polynomial is no law where it would fall below
LEAST_SHARE = 1e-3


def at_temperature(values: Values, name: str = "value") -> Value:
    """The resistance at the device's temperature in ohms, never below LEAST_SHARE of that at T_0."""
    r = np.asarray(values[name])
    if not (values.has("alpha") or values.has("alpha_2")):
        return r
    rise = np.asarray(values.temperature) - np.asarray(values["T_0"])
    first, second = np.asarray(values.get("alpha", 0.0)), np.asarray(values.get("alpha_2", 0.0))
    return np.asarray(r * np.maximum(1.0 + first * rise + second * rise**2, LEAST_SHARE), dtype=float)


def stamp_resistance(a: Assembly, p: int, q: int, r: Value, low: bool, name: str = "i") -> None:
    """As a conductance, or with the current as an unknown where that carries more digits (or R may be zero)."""
    if low or a.carry_current:
        resistance(a, p, q, r, name)
    else:
        conductance(a, p, q, 1.0 / np.asarray(r))


@dataclass(frozen=True)
class Resistor(Kind):
    def resolve(self, device: Device) -> Device:
        values = {**device.values}
        if "alpha" in values or "alpha_2" in values:
            values.setdefault("T_0", exact(25.0, "degC"))
        return replace(device, values=values)

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        low = device.values["value"].low < 1.0
        stamp_resistance(a, a.pin("1"), a.pin("2"), at_temperature(values), low)

    def growth(self, device: Device) -> Growth:
        return "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        # 0R is a link: it never heats, so that nothing is left open without its P_tot
        return (power(required=device.values["value"].high > 0.0), voltage("1", "2"))

    def requirement(self, view: View, device: Device) -> Array:
        return np.abs(view.i("1"))


KIND = Resistor(
    "resistor",
    (("1", "2"),),
    value=ValueSpec(("ohm",), least=0.0),
    keys={
        "alpha": Key("1/K"),
        "alpha_2": Key("1/K2"),
        "T_0": Key("degC"),
    },
    ratings=("P_tot", "T_ref", "T_max", "V_max", "R_th_ja", "R_th_jc", "T_j"),
    polarised=False,
)
