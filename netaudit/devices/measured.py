"""Measured curves as branches: joined to the origin where the data does not reach it, moved by V_F and temperature.

A ``curve`` goes straight on with its end slopes, as its data says.  A junction cannot deliver power, whatever range was
measured: data that begins above 0 V is led on to the origin, and blocks below it (but for the leak of every junction).
V_F moves the curve by that voltage at its highest point, alpha_VF by its drift at its current, each in proportion to the
voltage elsewhere, so that the curve still passes through the origin.
"""

from __future__ import annotations

from dataclasses import replace
from functools import lru_cache
from itertools import pairwise

import numpy as np

from netaudit.devices.base import Assembly, Device, Growth, Value, Values, conductance
from netaudit.devices.junction import LEAK
from netaudit.devices.table import Table
from netaudit.failure import InputError

#: model values that a whole measured curve leaves no room for
_SECOND_MODEL = ("I_S", "n", "R_S", "V_Z", "I_Z", "r_Z")
#: a forward junction ends below this, a breakdown above it, V
FORWARD = 1.5
#: the least share of its voltages that a curve keeps, however far its shifts would move it
_LEAST = 0.05

Points = tuple[tuple[float, float], ...]


def curve_of(device: Device) -> Table:
    """The points as they are.  Raises InputError for points that are no curve."""
    points = tuple(sorted(device.points))
    if len(points) < 2:
        raise InputError(f"{device.name}: a curve needs two points at least", place=device.place)
    for (v0, i0), (v1, i1) in pairwise(points):
        if v0 == v1:
            raise InputError(
                f"{device.name}: two currents, {i0:g} A and {i1:g} A, at one voltage {v0:g} V", place=device.place
            )
    return _table(points)


def junction_curve(device: Device) -> Table:
    """The points of a part that cannot deliver, led on to the origin and blocking below it where the data ends there."""
    points = curve_of(device).points
    low, at_low = points[0]
    if low > 0.0:
        return _table(((-1.0, 0.0), (0.0, 0.0), *points))
    return _table(((-1.0, 0.0), *points)) if low == 0.0 == at_low else curve_of(device)


def two_way_curve(device: Device) -> Table:
    """The points of a part that is the same both ways: data of one direction stands for both."""
    points = curve_of(device).points
    if points[0][0] < 0.0:
        return _table(points)
    beyond = tuple(point for point in points if point[0] > 0.0)
    return _table((*((-v, -i) for v, i in reversed(beyond)), (0.0, 0.0), *beyond))


def check_measured(device: Device) -> None:
    """Raises InputError for a curve beside another model, or one that is none."""
    second = next((name for name in _SECOND_MODEL if name in device.values), None)
    if second is not None:
        raise InputError(
            f"{device.name}: a measured curve and {second} are two models", place=device.place, mend="keep one of them"
        )
    curve_of(device)


def from_cathode(device: Device) -> Device:
    """The device with its points from K to A: a curve without anything above ``FORWARD`` was taken from A to K."""
    points = junction_curve(device).points
    if points[-1][0] < FORWARD:
        points = tuple((0.0 - v, 0.0 - i) for v, i in reversed(points))
    return replace(device, points=points)


def stamp_measured(a: Assembly, device: Device, values: Values, p: int, q: int) -> None:
    """The measured junction from p to q, with the leak of every junction."""
    _stamp(a, junction_curve(device), values, p, q)


def stamp_two_way(a: Assembly, device: Device, values: Values, p: int, q: int) -> None:
    """The measured two-way part from p to q, with the leak."""
    _stamp(a, two_way_curve(device), values, p, q)


def _stamp(a: Assembly, curve: Table, values: Values, p: int, q: int) -> None:
    share = 1.0 / np.asarray(_stretch(curve, values))
    a.branch(curve, [(p, 1.0), (q, -1.0)], [(p, share), (q, -share)])
    conductance(a, p, q, LEAK)


def _stretch(curve: Table, values: Values) -> Value:
    """By what factor specimen and temperature stretch the voltages of the curve."""
    volts, amperes = np.array(curve.points).T
    factor: Value = 1.0
    if values.has("V_F") and volts[-1] > 0.0:
        factor = factor + np.asarray(values["V_F"]) / volts[-1]
    if values.has("alpha_VF"):
        rise = np.asarray(values["alpha_VF"]) * (np.asarray(values.temperature) - 25.0)
        factor = factor + rise / np.interp(values["alpha_VF.at"], amperes, volts)
    return np.asarray(np.maximum(factor, _LEAST), dtype=float)


def measured_growth(device: Device) -> Growth:
    """Strictly increasing with the leak beside it, unless the data falls somewhere."""
    return "other" if junction_curve(device).shape == "other" else "increasing"


@lru_cache(maxsize=256)
def _table(points: Points) -> Table:
    return Table(points)
