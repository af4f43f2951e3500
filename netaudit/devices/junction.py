"""Junctions: how I_S, leakage and breakdown enter a branch, and how they move with temperature.

Forward: i = I_S (exp(w / n V_T) - 1), v = w + R_S i.  I_S(T) = I_S(T_0) (T/T_0)^(x/n) exp[E_g/(n k) (1/T_0 - 1/T)], x = 3
(pn) or 2 (Schottky); a measured alpha_VF at a current wins.  Leakage I_R at V_R is a conductance I_R/V_R that doubles
each 10 K: it is exact at the stated point and zero at zero volts.  Breakdown: v = V_Z + V_k ln(i/I_Z) + R_z (i - I_Z).
Left out: the voltage dependence of leakage, high injection, avalanche noise.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from netaudit.devices.base import Array, Assembly, Device, Value, Values, conductance, two_pin
from netaudit.devices.families import EXPONENTIAL
from netaudit.failure import InputError
from netaudit.parts.materials import Material, material, zener_class
from netaudit.quantities.quantity import Quantity, exact

#: Boltzmann constant in J/K and elementary charge in C (SI 2019, exact)
BOLTZMANN, CHARGE = 1.380649e-23, 1.602176634e-19
#: every junction leaks this besides its law, so that strings of blocking junctions are not singular
LEAK = 1e-19
KELVIN = 273.15
#: saturation current of a forward junction of which nothing is stated: about 0.7 V at 5 mA
_PLAIN_I_S = 1e-14


def thermal_voltage(temperature: Value) -> Value:
    """V_T = k T / q in volts, temperature in degC."""
    return np.asarray(BOLTZMANN * (np.asarray(temperature) + KELVIN) / CHARGE, dtype=float)


def log_saturation(values: Values, n: Value) -> Value:
    """ln I_S at the device's temperature, the specimens' shift V_F included."""
    t = np.asarray(values.temperature) + KELVIN
    t0 = np.asarray(values["T_0"]) + KELVIN
    log = np.log(values["I_S"])
    vt = BOLTZMANN * t / CHARGE
    if values.has("alpha_VF"):
        at = values["alpha_VF.at"]
        cold = np.asarray(n) * BOLTZMANN * t0 / CHARGE * (np.log(at) - log)
        log = np.log(at) - (cold + np.asarray(values["alpha_VF"]) * (t - t0)) / (np.asarray(n) * vt)
    else:
        growth = np.asarray(values["E_g"]) * CHARGE / (np.asarray(n) * BOLTZMANN)
        log = log + np.asarray(values["exponent"]) / np.asarray(n) * np.log(t / t0) + growth * (1 / t0 - 1 / t)
    return np.asarray(log - np.asarray(values.get("V_F", 0.0)) / (np.asarray(n) * vt), dtype=float)


def forward(a: Assembly, values: Values, p: int, q: int) -> None:
    """The junction from p (anode) to q (cathode) with leakage."""
    n = values["n"]
    voltage = np.asarray(n) * np.asarray(thermal_voltage(values.temperature))
    two_pin(a, EXPONENTIAL, p, q, log_I=log_saturation(values, n), V=voltage, R=values["R_S"])
    leak: Value = LEAK
    if values.has("I_R"):
        doubling = 2.0 ** ((np.asarray(values.temperature) - 25.0) / 10.0)
        leak = leak + np.asarray(values["I_R"]) / np.asarray(values["I_R.at"]) * doubling
    conductance(a, p, q, leak)


def breakdown(a: Assembly, values: Values, p: int, q: int) -> None:
    """The breakdown branch: current from p to q once v_p - v_q reaches V_Z (cathode to anode).

    i = I_0 (exp(w/V_k) - 1), v = w + R_z i, with I_0 such that the curve passes through (V_Z, I_Z) and zero.
    """
    v_z: Value = values["V_Z"]
    if values.has("alpha_VZ"):
        rise = np.asarray(values["alpha_VZ"]) * (np.asarray(values.temperature) - 25.0)
        v_z = v_z + rise if values.has("alpha_VZ.volts") else v_z * (1.0 + rise)
    i_z = np.asarray(values["I_Z"])
    v_k, r = knee(values)
    # resolved values keep this positive at every specimen; a drift beyond all sense must not make it negative
    x = np.maximum((np.asarray(v_z) - r * i_z) / v_k, 1e-6)
    log_i = np.log(i_z) - x - np.log(-np.expm1(-x))
    two_pin(a, EXPONENTIAL, p, q, log_I=log_i, V=v_k, R=r)


def knee(values: Values) -> tuple[Array, Array]:
    """V_k in volts and R_z in ohms of a breakdown whose slope is r_Z at I_Z: V_k/I_Z + R_z = r_Z.

    With r_ZK at I_ZK also V_k/I_ZK + R_z = r_ZK, as far as that leaves R_z >= 0; else half of r_Z each.
    """
    i_z, r_z = np.asarray(values["I_Z"]), np.asarray(values["r_Z"])
    if values.has("r_ZK"):
        v_k = (np.asarray(values["r_ZK"]) - r_z) / (1.0 / np.asarray(values["I_ZK"]) - 1.0 / i_z)
        v_k = np.minimum(v_k, i_z * r_z)
    else:
        v_k = 0.5 * i_z * r_z
    return np.asarray(v_k, dtype=float), np.asarray(np.maximum(r_z - v_k / i_z, 0.0), dtype=float)


def known_material(device: Device) -> Material | None:
    name = device.words.get("material", "")
    return material(name, device.place) if name else None


def with_junction(device: Device, default: str = "") -> Device:
    """The device with I_S, n, R_S, T_0, E_g and the exponent filled in; ``missing`` or ``rough`` where it lacks them.

    ``default`` names a material to fall back on without a word (the forward branch of a zener).
    """
    values = dict(device.values)
    known = known_material(device)
    rough = device.rough
    if "I_S" not in values:
        if "n" in values:
            raise InputError(f"{device.name}: n without I_S", place=device.place, mend="state both, or neither")
        source = known or (material(default, device.place) if default else None)
        if source is None:
            return replace(device, missing="it has no model: neither I_S, forward points, a curve nor a material")
        if known is not None and not default:
            rough = rough or f"its model is the default of {known.name}"
        # the forward branch of a zener is seldom used: a plain junction whose leakage does not disturb V_Z
        plain = known is None and bool(default)
        values["I_S"] = exact(_PLAIN_I_S if plain else source.I_S, "A")
        values.setdefault("n", exact(1.0 if plain else source.n, "1"))
        values.setdefault("R_S", exact(0.0 if plain else source.R_S, "ohm"))
    for name in ("I_S", "n"):
        if name in values and values[name].low <= 0.0:
            raise InputError(f"{device.name}: {name} must be above zero", place=device.place)
    values.setdefault("n", exact(1.0, "1"))
    values.setdefault("R_S", exact(0.0, "ohm"))
    values.setdefault("T_0", exact(25.0, "degC"))
    gap = known or material(default or "silicon", device.place)
    values.setdefault("E_g", exact(gap.E_g, "eV"))
    values["exponent"] = exact(gap.exponent, "1")
    _check_conditions(device, values)
    return replace(device, values=values, rough=rough)


def _check_conditions(device: Device, values: dict[str, Quantity]) -> None:
    for name, unit in (("I_R", "40V"), ("alpha_VF", "1mA")):
        if name in values and (f"{name}.at" not in values or values[f"{name}.at"].nominal <= 0):
            raise InputError(
                f"{device.name}: {name} needs its condition", place=device.place, mend=f'write "... @ {unit}" in quotes'
            )
    if "alpha_VF" in values and values["alpha_VF"].high > 0:
        raise InputError(
            f"{device.name}: the forward voltage of a junction falls with temperature",
            place=device.place,
            mend='write alpha_VF with its sign: "-2mV/K @ 1mA"',
        )


def with_breakdown(device: Device) -> Device:
    """The device with I_Z, r_Z and (beside r_ZK) I_ZK of its breakdown; see ``breakdown``."""
    values = dict(device.values)
    if "V_Z" not in values:
        return device
    class_i, class_r = zener_class(max(values["V_Z"].nominal, 0.0))
    lacking = [name for name in ("I_Z", "r_Z") if name not in values]
    rough = device.rough
    if lacking:
        rough = (
            rough
            or f"its {' and '.join(lacking)} {'are those' if lacking[1:] else 'is that'} of a typical {values['V_Z'].nominal:g} V part"
        )
    values.setdefault("I_Z", exact(class_i, "A"))
    values.setdefault("r_Z", exact(class_r, "ohm"))
    if "r_ZK" in values and "I_ZK" not in values and "I_ZK" in device.ratings:
        values["I_ZK"] = exact(device.ratings["I_ZK"].nominal, "A")
    _check_breakdown(device, values)
    if "alpha_VZ" in values and values["alpha_VZ"].unit == "V/K":
        values["alpha_VZ.volts"] = exact(1.0, "1")
    return replace(device, values=values, rough=rough)


def _check_breakdown(device: Device, values: dict[str, Quantity]) -> None:
    """Raises InputError for a breakdown that no specimen can have."""
    name, place = device.name, device.place
    if min(values[key].low for key in ("V_Z", "I_Z", "r_Z")) <= 0:
        raise InputError(f"{name}: V_Z, I_Z and r_Z must be above zero", place=place)
    if values["r_Z"].high * values["I_Z"].high >= values["V_Z"].low:
        raise InputError(
            f"{name}: r_Z I_Z is not below V_Z, so that the breakdown would begin below 0 V",
            place=place,
            mend="correct r_Z or the current I_Z that it is stated at",
        )
    if "r_ZK" in values:
        low = "I_ZK" in values and values["I_ZK"].low > 0 and values["I_ZK"].high < values["I_Z"].low
        if not low or values["r_ZK"].low <= values["r_Z"].high:
            raise InputError(f"{name}: r_ZK must be above r_Z, at an I_ZK below I_Z", place=place)
