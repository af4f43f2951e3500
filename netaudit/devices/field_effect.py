"""Field-effect transistors by the square law, symmetric in drain and source (Shichman and Hodges, IEEE JSSC 3, 1968).

    i_D = K/2 [max(0, v_GS - V_th)^2 - max(0, v_GD - V_th)^2]        p-channel: all signs reversed

MOS: body diode from source to drain (n-channel) unless body=no.  K from R_DS(on) at a gate voltage: in the linear region
R = 1 / (K (V_GS - V_th)).  Junction FETs: K = 2 I_DSS / V_P^2, V_th = V_P, with gate junctions to source and drain.
Left out: channel-length modulation, subthreshold current, temperature drift of V_th and K.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Key, Kind, Values, View, conductance, two_pin
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.families import EXPONENTIAL, SQUARE
from netaudit.devices.junction import LEAK, log_saturation, thermal_voltage
from netaudit.failure import InputError
from netaudit.parts.materials import material
from netaudit.quantities.quantity import Quantity, exact

_BODY_I_S, _GATE_I_S = 1e-12, 1e-14


@dataclass(frozen=True)
class FieldEffect(Kind):
    """``sign`` +1 for an n-channel, -1 for a p-channel; ``junction`` for a junction FET."""

    sign: float = 1.0
    junction: bool = False

    def resolve(self, device: Device) -> Device:
        values = dict(device.values)
        found = self._junction(device, values) if self.junction else self._mos(device, values)
        if found:
            return replace(device, missing=found)
        values.setdefault("I_S", exact(_GATE_I_S if self.junction else _BODY_I_S, "A"))
        values["T_0"] = exact(25.0, "degC")
        silicon = material("silicon", device.place)
        values["E_g"], values["exponent"] = exact(silicon.E_g, "eV"), exact(silicon.exponent, "1")
        return replace(device, values=values)

    def _mos(self, device: Device, values: dict[str, Quantity]) -> str:
        if "V_th" not in values and "V_GS_th" in values:
            values["V_th"] = values.pop("V_GS_th")
        values.pop("V_GS_th", None)
        if "V_th" not in values:
            return "it has no model: no V_th or V_GS_th"
        if "K" not in values:
            if "R_DS_on" not in values or "R_DS_on.at" not in values:
                return "it has no model: neither K nor R_DS_on at a gate voltage"
            drive = self.sign * (values["R_DS_on.at"].nominal - values["V_th"].nominal)
            if drive <= 0:
                raise InputError(
                    f"{device.name}: V_th of {values['V_th'].nominal:g} V lies beyond the gate voltage at which R_DS_on "
                    "is stated",
                    place=device.place,
                    mend="check V_GS_th and R_DS_on",
                )
            r = values["R_DS_on"]
            if r.low <= 0:
                raise InputError(f"{device.name}: R_DS_on must be above zero", place=device.place)
            values["K"] = Quantity(1 / (r.nominal * drive), "A/V2", 1 / (r.high * drive), 1 / (r.low * drive), r.spread)
        if values["K"].low <= 0:
            raise InputError(f"{device.name}: K must be above zero", place=device.place)
        values.pop("R_DS_on", None)
        return ""

    def _junction(self, device: Device, values: dict[str, Quantity]) -> str:
        if "I_DSS" not in values or "V_P" not in values:
            return "it has no model: I_DSS and V_P are needed"
        if values["I_DSS"].low <= 0 or self.sign * values["V_P"].nominal >= 0:
            side = "negative" if self.sign > 0 else "positive"
            raise InputError(f"{device.name}: I_DSS must be above zero and V_P {side}", place=device.place)
        return ""

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        s = self.sign
        g, d, q = a.pin("G"), a.pin("D"), a.pin("S")
        if self.junction:
            threshold = np.asarray(values["V_P"])
            k = 2.0 * np.asarray(values["I_DSS"]) / threshold**2
        else:
            threshold, k = np.asarray(values["V_th"]), np.asarray(values["K"])
        a.branch(SQUARE, [(d, s * k), (q, -s * k)], [(g, s), (q, -s)], offset=s * threshold)
        a.branch(SQUARE, [(d, -s * k), (q, s * k)], [(g, s), (d, -s)], offset=s * threshold)
        conductance(a, d, q, LEAK)
        law = {"log_I": log_saturation(values, 1.0), "V": thermal_voltage(values.temperature), "R": 0.0}
        if self.junction:
            for channel in (q, d):
                p, n = (g, channel) if s > 0 else (channel, g)
                two_pin(a, EXPONENTIAL, p, n, **law)
                conductance(a, g, channel, LEAK)
        elif device.words.get("body") != "no":
            p, n = (q, d) if s > 0 else (d, q)
            two_pin(a, EXPONENTIAL, p, n, **law)

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("G", "D", "S"),) if self.junction else (("D", "S"),)

    def controls(self, device: Device) -> tuple[str, ...]:
        return ("G",)

    def checks(self, device: Device) -> tuple[Check, ...]:
        s = self.sign
        return (
            Check("drain-current", "A", ("I_D",), lambda v: s * v.i("D"), both=True, required=True),
            Check(
                "drain-source-voltage", "V", ("V_DS",), lambda v: s * (v.v("D") - v.v("S")), both=True, required=True
            ),
            Check("gate-source-voltage", "V", ("V_GS",), lambda v: s * (v.v("G") - v.v("S")), both=True, required=True),
            power(required=True),
            junction_temperature(),
        )


def weak_drive(view: View, device: Device, sign: float) -> Array:
    """How far V_GS is below the value at which R_DS_on is stated, while current flows with V_DS below 1 V (volts,
    positive: weak); -1 where that value is unknown."""
    wanted = device.nominal("R_DS_on.at")
    i_d, v_gs = np.abs(view.i("D")), sign * (view.v("G") - view.v("S"))
    v_ds = sign * (view.v("D") - view.v("S"))
    threshold = sign * view.value("V_th")
    channel = (i_d > 10e-6) & (v_gs > threshold) & (v_ds > 0)
    if np.isnan(wanted):
        return np.full(np.shape(v_gs), -1.0)
    return np.where(channel, sign * wanted - v_gs, -1.0)


MOS_KEYS = {
    "V_th": Key("V"),
    "K": Key("A/V2", positive=True),
    "V_GS_th": Key("V", at="A"),
    "R_DS_on": Key("ohm", at="V", positive=True),
    "I_S": Key("A", positive=True),
    "body": Key(words=("yes", "no")),
}
JUNCTION_KEYS = {"I_DSS": Key("A"), "V_P": Key("V"), "I_S": Key("A", positive=True)}
RATINGS = ("I_D", "V_DS", "V_GS", *POWER_RATINGS)
