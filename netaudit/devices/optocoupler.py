"""``optocoupler``: an LED and a phototransistor; i_C = CTR i_F until the transistor saturates.

The LED's current, times CTR / (beta + 1), flows from the collector into the base of an Ebers-Moll transistor (beta 200,
I_S 1e-14 A), so that the output saturates as a transistor does.  Left out: CTR's dependence on current and temperature,
dark current.  The base has no pin: V_CBO limits v_CE, V_EBO limits v_EC, and I_B is taken but compared with nothing.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Key, Kind, Value, Values, View, conductance
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.diode import FORWARD_KEYS
from netaudit.devices.families import EXPONENTIAL
from netaudit.devices.junction import LEAK, log_saturation, thermal_voltage, with_junction

_BETA, _LOG_I = 200.0, float(np.log(1e-14))


@dataclass(frozen=True)
class Optocoupler(Kind):
    def resolve(self, device: Device) -> Device:
        if "CTR" not in device.values:
            return replace(device, missing="an optocoupler needs its CTR")
        words = {"material": "infrared", **device.words} if "I_S" not in device.values else dict(device.words)
        return with_junction(replace(device, words=words))

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        p, q, c, e, b = a.pin("A"), a.pin("K"), a.pin("C"), a.pin("E"), a.node("base")
        vt = np.asarray(thermal_voltage(values.temperature))
        share = np.asarray(values["CTR"]) / (_BETA + 1.0)
        a.branch(
            EXPONENTIAL,
            [(p, 1.0), (q, -1.0), (c, share), (b, -share)],
            [(p, 1.0), (q, -1.0)],
            log_I=log_saturation(values, values["n"]),
            V=np.asarray(values["n"]) * vt,
            R=values["R_S"],
        )
        conductance(a, p, q, LEAK)
        law: dict[str, Value] = {"log_I": _LOG_I, "V": vt, "R": 0.0}
        a.branch(EXPONENTIAL, [(c, 1.0), (b, 1 / _BETA), (e, -1 - 1 / _BETA)], [(b, 1.0), (e, -1.0)], **law)
        a.branch(EXPONENTIAL, [(e, 1.0), (b, 1.0), (c, -2.0)], [(b, 1.0), (c, -1.0)], **law)
        conductance(a, b, e, LEAK)
        conductance(a, b, c, LEAK)

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("A", "K"), ("C", "E"))

    def checks(self, device: Device) -> tuple[Check, ...]:
        return (
            Check("forward-current", "A", ("I_F",), lambda v: v.i("A"), required=True),
            Check("reverse-voltage", "V", ("V_R", "V_RRM"), lambda v: v.v("K") - v.v("A"), required=True),
            Check("collector-current", "A", ("I_C",), lambda v: v.i("C"), both=True),
            Check("collector-emitter-voltage", "V", ("V_CEO", "V_CBO"), lambda v: v.v("C") - v.v("E")),
            *self._backwards(device),
            power(),
            junction_temperature(),
        )

    @staticmethod
    def _backwards(device: Device) -> tuple[Check, ...]:
        """The emitter above the collector, where the part states what it stands."""
        if "V_EBO" not in device.ratings:
            return ()
        return (Check("emitter-base-voltage", "V", ("V_EBO",), lambda v: v.v("E") - v.v("C")),)

    def requirement(self, view: View, device: Device) -> Array:
        return view.i("A")


KIND = Optocoupler(
    "optocoupler",
    (("A", "K", "C", "E"),),
    keys={**FORWARD_KEYS, "CTR": Key("1", positive=True, at="A")},
    ratings=("I_F", "V_R", "V_RRM", "I_C", "I_B", "V_CEO", "V_CBO", "V_EBO", *POWER_RATINGS),
)
