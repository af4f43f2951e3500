"""``opamp``: finite gain, swing to the rails, output current limit, offset, bias and quiescent current.

    y = clamp(middle + gain (v_IN+ - v_IN- + V_OS), V- + swing, V+ - swing),  v_OUT = y while |j| <= limit

middle is half way between the rails.  The output's current comes from V+ or goes to V-, I_Q flows between the rails and
fades below 1 V, I_B flows into both inputs and back to V-.  Left out: common-mode and supply rejection, phase reversal.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Key, Kind, Values, View
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.families import RAMP
from netaudit.devices.rows import bounded_output, quiescent
from netaudit.quantities.quantity import exact

_DEFAULTS = {"gain": (1e5, "1"), "swing": (0.0, "V"), "V_OS": (0.0, "V"), "I_B": (0.0, "A"), "I_Q": (0.0, "A")}


@dataclass(frozen=True)
class OpAmp(Kind):
    def resolve(self, device: Device) -> Device:
        defaults = {name: exact(value, unit) for name, (value, unit) in _DEFAULTS.items()}
        return replace(device, values={**defaults, **device.values})

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        p, n, o, top, bottom = (a.pin(pin) for pin in ("IN+", "IN-", "OUT", "V+", "V-"))
        x, y, z, j, w = (a.unknown(name) for name in "xyzjw")
        gain, swing = np.asarray(values["gain"]), np.asarray(values["swing"])
        # x = (V+ + V-)/2 + gain (v_IN+ - v_IN- + V_OS), scaled by the gain so that the row has the size of the input
        a.add(x, x, 1.0 / gain)
        a.add(x, top, -0.5 / gain)
        a.add(x, bottom, -0.5 / gain)
        a.add(x, p, -1.0)
        a.add(x, n, 1.0)
        a.source(x, values["V_OS"])
        # w = min(swing, half the supply): without supply the output lies between its rails, not beyond them
        a.add(w, w, 1.0)
        a.source(w, swing)
        a.branch(RAMP, [(w, 1.0)], [(top, -0.5), (bottom, 0.5)], offset=-swing)
        # y = min(x, V+ - w)
        a.add(y, y, 1.0)
        a.add(y, x, -1.0)
        a.branch(RAMP, [(y, 1.0)], [(x, 1.0), (top, -1.0), (w, 1.0)], offset=0.0)
        # z = max(y, V- + w)
        a.add(z, z, 1.0)
        a.add(z, y, -1.0)
        a.branch(RAMP, [(z, -1.0)], [(bottom, 1.0), (w, 1.0), (y, -1.0)], offset=0.0)
        limit = np.asarray(values["limit"]) if values.has("limit") else None
        rho = 1.0 / device.nominal("limit", 1.0)
        bounded_output(a, j, [(z, 1.0)], [(o, 1.0)], None if limit is None else -limit, limit, rho)
        # j leaves OUT; what is positive of it enters V+, what is negative leaves V-
        a.add(o, j, -1.0)
        a.branch(RAMP, [(top, 1.0)], [(j, 1.0)], offset=0.0)
        a.branch(RAMP, [(bottom, -1.0)], [(j, -1.0)], offset=0.0)
        quiescent(a, top, bottom, values["I_Q"])
        bias = np.asarray(values["I_B"])
        for pin in (p, n):
            a.source(pin, -bias)
            a.source(bottom, bias)

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("OUT", "V+", "V-"),)

    def controls(self, device: Device) -> tuple[str, ...]:
        return ("IN+", "IN-")

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("input-voltage", "V", ("V_I",), lambda v: v.v("V+") - v.v("V-")),
            Check("output-current", "A", ("I_O",), lambda v: v.i("OUT"), both=True),
            power(),
            junction_temperature(),
        )


def at_limit(view: View, device: Device) -> Array:
    """How far the op amp is beyond a limit: output at its swing, output current at 99.9 % of its limit, or an input
    outside the rails (positive: at a limit; scaled so that 0 is the threshold)."""
    ideal, output = view.inner("x"), view.v("OUT")
    top, bottom = view.v("V+") - view.value("swing"), view.v("V-") + view.value("swing")
    beyond = np.maximum(ideal - top, bottom - ideal) - 1e-6
    for pin in ("IN+", "IN-"):
        beyond = np.maximum(beyond, np.maximum(view.v(pin) - view.v("V+"), view.v("V-") - view.v(pin)) - 1e-6)
    if "limit" in device.values:
        beyond = np.maximum(beyond, np.abs(view.i("OUT")) / view.value("limit") - 0.999)
    return np.asarray(beyond + 0.0 * output)


KIND = OpAmp(
    "opamp",
    (("IN+", "IN-", "OUT", "V+", "V-"),),
    keys={
        "gain": Key("1", positive=True),
        "swing": Key("V", least=0.0),
        "limit": Key("A", positive=True),
        "V_OS": Key("V"),
        "I_B": Key("A"),
        "I_Q": Key("A", least=0.0),
    },
    ratings=("V_I", "I_O", *POWER_RATINGS),
)
