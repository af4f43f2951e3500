"""``regulator``: a linear regulator, IN OUT GND.

    v_OUT = min(V_set, v_IN - V_drop) against GND while 0 <= j <= limit, j the output current; i_IN = j + I_Q

I_Q flows from IN to GND and fades below 1 V; a junction from OUT to IN is the reverse path of the pass transistor.
``off``: the pass transistor blocks, the reverse path stays.  Left out: load and line regulation, fold-back, thermal
shut-down, the drop-out's dependence on current (V_drop holds for the current at which it is stated).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Key, Kind, Values, ValueSpec, View
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.families import RAMP
from netaudit.devices.rows import bounded_output, clamp, quiescent
from netaudit.failure import InputError
from netaudit.quantities.quantity import exact


@dataclass(frozen=True)
class Regulator(Kind):
    def resolve(self, device: Device) -> Device:
        if device.words.get("state") == "off":
            return device
        if "value" in device.values and device.values["value"].low <= 0:
            raise InputError(f"{device.name}: the output voltage must be above zero", place=device.place)
        return replace(device, values={"V_drop": exact(0.0, "V"), **device.values})

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        i, o, g = a.pin("IN"), a.pin("OUT"), a.pin("GND")
        clamp(a, o, i, values.temperature)
        if device.words.get("state") == "off":
            return
        j, y = a.unknown("j"), a.unknown("y")
        a.add(i, j, 1.0)
        a.add(o, j, -1.0)
        # y = min(V_set, v_IN - V_drop), both against GND
        v_set = np.asarray(values["value"])
        a.add(y, y, 1.0)
        a.source(y, v_set)
        a.branch(RAMP, [(y, 1.0)], [(i, -1.0), (g, 1.0)], offset=-(v_set + np.asarray(values["V_drop"])))
        most = values["limit"] if values.has("limit") else None
        rho = device.nominal("value") / device.nominal("limit", 1.0)
        bounded_output(a, j, [(y, 1.0)], [(o, 1.0), (g, -1.0)], 0.0, most, rho)
        if values.has("I_Q"):
            quiescent(a, i, g, values["I_Q"])

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("IN", "OUT"),) if device.words.get("state") == "off" else (("IN", "OUT", "GND"),)

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("input-voltage", "V", ("V_I",), lambda v: v.v("IN") - v.v("GND"), required=True),
            Check("output-current", "A", ("I_O",), lambda v: -v.i("OUT"), required=True),
            power(),
            junction_temperature(),
        )


def drop_out(view: View, device: Device) -> Array:
    """Volts of headroom that are missing (positive: the output is no longer regulated)."""
    head = view.v("IN") - view.v("GND")
    return np.asarray(view.value("value") + view.value("V_drop") - head)


def limiting(view: View, device: Device) -> Array:
    """Output current over its limit, less 99.9 % (positive: the limit is reached); -1 without a limit."""
    if "limit" not in device.values:
        return np.full(np.shape(view.i("OUT")), -1.0)
    return np.asarray(-view.i("OUT") / view.value("limit") - 0.999)


KIND = Regulator(
    "regulator",
    (("IN", "OUT", "GND"),),
    value=ValueSpec(("V",), positive=True),
    states=("off",),
    keys={
        "V_drop": Key("V", least=0.0, at="A"),
        "limit": Key("A", positive=True),
        "I_Q": Key("A", least=0.0),
    },
    ratings=("V_I", "I_O", *POWER_RATINGS),
)
