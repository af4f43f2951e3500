"""``converter``: a switching converter by its DC balance, v_IN i_IN = v_OUT j / efficiency.

The output holds V_set while 0 <= j <= limit.  Below V_I_min it draws nothing: the output voltage it aims at falls to zero
in a straight line over the tenth below V_I_min.  The product of input voltage and current is written with parabolas, the
voltage kept from zero by a ramp.  Left out: quiescent power, ripple, current mode limits, everything dynamic.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Key, Kind, Values, ValueSpec, View
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.families import RAMP
from netaudit.devices.power import product
from netaudit.devices.rows import bounded_output
from netaudit.quantities.quantity import exact

_DEFAULT_LEAST = 1.0


@dataclass(frozen=True)
class Converter(Kind):
    def resolve(self, device: Device) -> Device:
        if device.words.get("state") == "off":
            return device
        if "efficiency" not in device.values:
            return replace(device, missing="a converter needs its efficiency")
        return replace(device, values={"V_I_min": exact(_DEFAULT_LEAST, "V"), **device.values})

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        if device.words.get("state") == "off":
            return
        i, o, g = a.pin("IN"), a.pin("OUT"), a.pin("GND")
        j, k, y, q = a.unknown("j"), a.unknown("k"), a.unknown("y"), a.unknown("q")
        v_set, least = np.asarray(values["value"]), np.asarray(values["V_I_min"])
        a.add(o, j, -1.0)
        a.add(g, j, 1.0)
        a.add(i, k, 1.0)
        a.add(g, k, -1.0)
        # y = V_set clamp((v_IN - 0.9 V_I_min) / (0.1 V_I_min), 0, 1)
        slope = v_set / (0.1 * least)
        a.add(y, y, 1.0)
        a.branch(RAMP, [(y, -slope)], [(i, 1.0), (g, -1.0)], offset=0.9 * least)
        a.branch(RAMP, [(y, slope)], [(i, 1.0), (g, -1.0)], offset=least)
        most = values["limit"] if values.has("limit") else None
        rho = device.nominal("value") / device.nominal("limit", 1.0)
        bounded_output(a, j, [(y, 1.0)], [(o, 1.0), (g, -1.0)], 0.0, most, rho)
        # q = max(v_IN, V_I_min / 2); q k - v_OUT j / efficiency = 0
        a.add(q, q, 1.0)
        a.source(q, 0.5 * least)
        a.branch(RAMP, [(q, -1.0)], [(i, 1.0), (g, -1.0)], offset=0.5 * least)
        scale = device.nominal("value") / device.nominal("limit", 1.0)
        product(a, k, 1.0, k, [(q, 1.0)], scale, device.nominal("V_I_min"))
        product(a, k, -1.0 / np.asarray(values["efficiency"]), j, [(o, 1.0), (g, -1.0)], scale, device.nominal("value"))

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return () if device.words.get("state") == "off" else (("IN", "OUT", "GND"),)

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("input-voltage", "V", ("V_I",), lambda v: v.v("IN") - v.v("GND"), required=True),
            Check("output-current", "A", ("I_O",), lambda v: -v.i("OUT"), required=True),
            power(),
            junction_temperature(),
        )


def starved(view: View, device: Device) -> Array:
    """Volts by which the input is below V_I_min (positive: it draws nothing)."""
    return np.asarray(view.value("V_I_min") - (view.v("IN") - view.v("GND")))


KIND = Converter(
    "converter",
    (("IN", "OUT", "GND"),),
    value=ValueSpec(("V",), positive=True),
    states=("off",),
    keys={
        "efficiency": Key("1", least=0.01, most=1.0),
        "V_I_min": Key("V", positive=True),
        "limit": Key("A", positive=True),
    },
    ratings=("V_I", "I_O", *POWER_RATINGS),
)
