"""``supply``: v = V_0 - R j with j the current it delivers out of +, down to constant current at its limit.

With a limit the row is min(s (V_0 - R j - v), rho (I_lim - s j)) = 0, s the sign of V_0: constant voltage while s j stays
below the limit, constant current there.  The minimum is written with one ramp, min(a, b) = a - max(0, a - b); rho scales
amperes to volts.  It holds its voltage against current pushed into it as well; that is judged afterwards (``sinks``).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Growth, Key, Kind, Value, Values, ValueSpec, View
from netaudit.devices.common import stated_voltage
from netaudit.devices.families import RAMP
from netaudit.quantities.quantity import exact

#: current that a supply without ``sinks`` may be asked to absorb
SINKS = 10e-6


@dataclass(frozen=True)
class Supply(Kind):
    def resolve(self, device: Device) -> Device:
        values = dict(device.values)
        word = device.words.get("sinks", "")
        if word == "no":
            values["sinks"] = exact(0.0, "A")
        elif word != "yes":
            values.setdefault("sinks", exact(SINKS, "A"))
        return replace(device, values=values)

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        if device.words.get("state") == "off":
            return
        p, q, j = a.pin("+"), a.pin("-"), a.unknown("j")
        v0, r = np.asarray(values["value"]), np.asarray(values.get("R", 0.0))
        s = -1.0 if device.nominal("value") < 0 else 1.0
        a.add(p, j, -1.0)
        a.add(q, j, 1.0)
        a.add(j, p, -s)
        a.add(j, q, s)
        a.add(j, j, -s * r)
        a.source(j, -s * v0)
        if values.has("limit"):
            limit = np.asarray(values["limit"])
            rho = max(abs(device.nominal("value")), 1.0) / device.nominal("limit")
            sense: list[tuple[int, Value]] = [(p, -s), (q, s), (j, s * rho - s * r)]
            a.branch(RAMP, [(j, -1.0)], sense, offset=rho * limit - s * v0)

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return () if device.words.get("state") == "off" else (("+", "-"),)

    def growth(self, device: Device) -> Growth:
        return "nondecreasing" if "limit" in device.values else "increasing"

    def checks(self, device: Device) -> tuple[Check, ...]:
        if device.words.get("state") == "off":
            return ()
        return (Check("current", "A", ("I_max",), delivered, both=True), *stated_voltage(device, "+", "-"))

    def requirement(self, view: View, device: Device) -> Array:
        return delivered(view)


def delivered(view: View) -> Array:
    """Amperes that leave the + pin."""
    return -view.i("+")


def limiting(view: View, device: Device) -> Array:
    """Whether the supply stands at its current limit (at 99.9 % of it)."""
    if "limit" not in device.values or device.words.get("state") == "off":
        return np.zeros(view.i("+").shape, dtype=bool)
    s = np.sign(view.value("value")) + (view.value("value") == 0)
    return np.asarray(s * delivered(view) >= 0.999 * view.value("limit"))


KIND = Supply(
    "supply",
    (("+", "-"),),
    value=ValueSpec(("V",)),
    states=("off",),
    keys={
        "limit": Key("A", positive=True),
        "limiting": Key(words=("ok",)),
        "R": Key("ohm", least=0.0),
        "sinks": Key("A", words=("no", "yes"), least=0.0),
    },
    ratings=("I_max", "V_max"),
    heats=False,
)
