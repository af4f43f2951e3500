"""Checks and keys that several kinds share."""

from __future__ import annotations

from netaudit.devices.base import Check, Device, Key

POWER_RATINGS = ("P_tot", "T_ref", "T_j", "R_th_ja", "R_th_jc")
POSITIVE_OHM = Key("ohm", least=0.0)


def power(required: bool = False) -> Check:
    """P with P_tot, derated linearly with the ambient."""
    return Check("power", "W", ("P_tot",), lambda view: view.power, required=required, derated=True)


def junction_temperature() -> Check:
    """T_j of the electrothermal solution with its rating."""
    return Check("junction-temperature", "degC", ("T_j",), lambda view: view.temperature)


def voltage(p: str, q: str, symbol: str = "V_max", required: bool = False) -> Check:
    """|v_p - v_q| with a rated voltage."""
    return Check("voltage", "V", (symbol,), lambda view: view.v(p) - view.v(q), both=True, required=required)


def stated_voltage(device: Device, p: str, q: str) -> tuple[Check, ...]:
    """|v_p - v_q| with V_max where that is stated: a part that seldom has one is not asked for it."""
    return (voltage(p, q),) if "V_max" in device.ratings else ()


def current(pin: str, symbol: str = "I_max", required: bool = False) -> Check:
    """|i| into a pin with a rated current."""
    return Check("current", "A", (symbol,), lambda view: view.i(pin), both=True, required=required)
