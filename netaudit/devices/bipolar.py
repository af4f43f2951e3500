"""``npn`` and ``pnp``: Ebers-Moll in transport form (Ebers and Moll, Proc. IRE 42, 1761-1772, 1954).

    I_CC = I_S (exp(v_BE / n V_T) - 1),  I_EC = I_S (exp(v_BC / n V_T) - 1)
    i_C = I_CC - I_EC (1 + 1/beta_R),  i_B = I_CC / beta_F + I_EC / beta_R,  i_E = -(i_B + i_C)

pnp: all voltages and currents reversed.  R_B, R_C, R_E are ohmic and bring inner nodes only where given.  Where the part
states V_EBO, the base-emitter junction breaks down at 1.1 times that (a maker guarantees less than the part stands).
From a data sheet: beta_F from h_FE, I_S from V_BE at a collector current, R_C from V_CE(sat) at a collector current less
50 mV of the junctions.  Left out: Early effect, high injection, fall of h_FE at the ends of the current range.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Check, Device, Key, Kind, Value, Values, View, conductance, two_pin
from netaudit.devices.common import POWER_RATINGS, junction_temperature, power
from netaudit.devices.families import EXPONENTIAL
from netaudit.devices.junction import LEAK, log_saturation, thermal_voltage
from netaudit.failure import InputError
from netaudit.parts.materials import material
from netaudit.quantities.quantity import exact

_DEFAULT_I_S = 1e-14
_BREAKDOWN, _BREAKDOWN_I, _BREAKDOWN_R = 1.1, 1e-3, 20.0
_SATURATION = 0.05


@dataclass(frozen=True)
class Bipolar(Kind):
    """``sign`` is +1 for npn, -1 for pnp."""

    sign: float = 1.0

    def resolve(self, device: Device) -> Device:
        values = dict(device.values)
        rough = device.rough
        if not {"I_S", "V_BE", "h_FE", "beta_F"} & set(values):
            return replace(device, missing="it has no model: neither I_S, V_BE nor h_FE")
        for name in ("I_S", "h_FE", "beta_F", "beta_R", "n"):
            if name in values and values[name].low <= 0:
                raise InputError(f"{device.name}: {name} must be above zero", place=device.place)
        if not {"h_FE", "beta_F"} & set(values):
            return replace(device, missing="its current gain is unknown: neither h_FE nor beta_F")
        if "beta_F" in values:
            values.pop("h_FE", None)
        values.setdefault("n", exact(1.0, "1"))
        values.setdefault("beta_R", exact(1.0, "1"))
        values.setdefault("T_0", exact(25.0, "degC"))
        silicon = material(device.words.get("material", "silicon"), device.place)
        values.setdefault("E_g", exact(silicon.E_g, "eV"))
        values["exponent"] = exact(silicon.exponent, "1")
        if "I_S" not in values:
            if "V_BE" in values and "V_BE.at" in values:
                n_vt = values["n"].nominal * float(thermal_voltage(25.0))
                i_s = values["V_BE.at"].nominal / float(np.expm1(values["V_BE"].nominal / n_vt))
            else:
                i_s = _DEFAULT_I_S
                rough = rough or "its I_S is that of a typical small transistor"
            values["I_S"] = exact(i_s, "A")
        values.pop("V_BE", None)
        if "V_CE_sat" in values and "V_CE_sat.at" in values and "R_C" not in values:
            r = (values["V_CE_sat"].nominal - _SATURATION) / values["V_CE_sat.at"].nominal
            if r > 0:
                values["R_C"] = exact(r, "ohm")
        values.pop("V_CE_sat", None)
        if "V_EBO" in device.ratings:
            values["V_break"] = exact(_BREAKDOWN * device.ratings["V_EBO"].nominal, "V")
        return replace(device, values=values, rough=rough)

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        s = self.sign
        b, c, e = (self._inside(device, values, a, pin) for pin in ("B", "C", "E"))
        forward, reverse = np.asarray(gain(values)), np.asarray(values["beta_R"])
        law = {
            "log_I": log_saturation(values, values["n"]),
            "V": np.asarray(values["n"]) * np.asarray(thermal_voltage(values.temperature)),
            "R": 0.0,
        }
        a.branch(
            EXPONENTIAL,
            [(c, s), (b, s / forward), (e, -s * (1.0 + 1.0 / forward))],
            [(b, s), (e, -s)],
            **law,
        )
        a.branch(
            EXPONENTIAL,
            [(e, s), (b, s / reverse), (c, -s * (1.0 + 1.0 / reverse))],
            [(b, s), (c, -s)],
            **law,
        )
        conductance(a, b, e, LEAK)
        conductance(a, b, c, LEAK)
        if values.has("V_break"):
            knee = _BREAKDOWN_I * _BREAKDOWN_R / 2
            log_i = np.log(_BREAKDOWN_I) - np.asarray(values["V_break"]) / knee
            p, q = (e, b) if s > 0 else (b, e)
            two_pin(a, EXPONENTIAL, p, q, log_I=log_i, V=knee, R=_BREAKDOWN_R / 2)

    @staticmethod
    def _inside(device: Device, values: Values, a: Assembly, pin: str) -> int:
        name = f"R_{pin}"
        if device.nominal(name, 0.0) <= 0.0:
            return a.pin(pin)
        inner = a.node(f"inside {pin}")
        conductance(a, a.pin(pin), inner, 1.0 / np.asarray(values[name]))
        return inner

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        return (("B", "C", "E"),)

    def controls(self, device: Device) -> tuple[str, ...]:
        return ("B",)

    def checks(self, device: Device) -> tuple[Check, ...]:
        s = self.sign
        both = "V_CEO" in device.ratings and "V_CBO" in device.ratings
        to_emitter = Check(
            "collector-emitter-voltage", "V", ("V_CEO",), lambda v: s * (v.v("C") - v.v("E")), required=True
        )
        to_base = Check(
            "collector-emitter-voltage", "V", ("V_CBO",), lambda v: s * (v.v("C") - v.v("B")), required=not both,
            pin="B" if both else None,
        )  # fmt: skip
        blocking = (to_emitter, to_base) if both else (to_base if "V_CBO" in device.ratings else to_emitter,)
        return (
            Check("collector-current", "A", ("I_C",), lambda v: s * v.i("C"), both=True, required=True),
            Check("base-current", "A", ("I_B",), lambda v: s * v.i("B"), both=True),
            *blocking,
            Check("emitter-base-voltage", "V", ("V_EBO",), lambda v: s * (v.v("E") - v.v("B"))),
            power(required=True),
            junction_temperature(),
        )


def gain(values: Values) -> Value:
    """The forward current gain, by whichever name it was given."""
    return values["beta_F"] if values.has("beta_F") else values["h_FE"]


def weak_drive(view: View, device: Device, sign: float) -> Array:
    """How far I_C / I_B is above half the least h_FE while V_CE is below 1 V and current flows (positive: weak)."""
    name = "beta_F" if "beta_F" in device.values else "h_FE"
    least = device.values[name].low
    i_c, i_b = sign * view.i("C"), sign * view.i("B")
    v_ce = sign * (view.v("C") - view.v("E"))
    switched = (v_ce < 1.0) & (v_ce > -1e-3) & (i_c > 10e-6)
    return np.where(switched, i_c / np.maximum(i_b, 1e-15) / (0.5 * least) - 1.0, -1.0)


def _keys() -> Iterator[tuple[str, Key]]:
    for name, unit in (("I_S", "A"), ("beta_F", "1"), ("beta_R", "1"), ("n", "1"), ("E_g", "eV")):
        yield name, Key(unit, positive=True)
    yield "h_FE", Key("1", at="A")
    yield "V_BE", Key("V", at="A")
    yield "V_CE_sat", Key("V", at="A")
    yield "T_0", Key("degC")
    for name in ("R_B", "R_C", "R_E"):
        yield name, Key("ohm", least=0.0)
    yield "material", Key()


KEYS = dict(_keys())
RATINGS = ("I_C", "I_B", "V_CEO", "V_CBO", "V_EBO", *POWER_RATINGS)
