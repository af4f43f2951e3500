"""Families of parts that hold a power: the fading constant-power load and the parabola from which products are made."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Assembly, Terms, Value
from netaudit.devices.families import Array, Convex, Family, Parameters, Shape, widen


@dataclass(frozen=True)
class FadingPower(Family):
    """phi(u) = P / u above V_min, P u / V_min^2 below (amperes, P in watts): falls to 0 at 0 V in a straight line."""

    parameters = ("P", "V_min")
    shape: Shape = "other"

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        power, least = p["P"], p["V_min"]
        above = np.maximum(u, least)
        on = u >= least
        return (
            np.where(on, power / above, power * u / least**2),
            np.where(on, -power / above**2, power / least**2),
        )

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        at_low, at_high = self.value(low, p)[0], self.value(high, p)[0]
        hump = (low <= p["V_min"]) & (high >= p["V_min"])
        top = np.where(hump, p["P"] / p["V_min"], np.maximum(at_low, at_high))
        return widen(np.minimum(at_low, at_high), np.maximum(top, np.maximum(at_low, at_high)))

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        steep = p["P"] / p["V_min"] ** 2
        above = np.maximum(low, p["V_min"])
        least = np.where(high >= p["V_min"], -p["P"] / above**2, steep)
        most = np.where(low <= p["V_min"], steep, -p["P"] / np.maximum(high, p["V_min"]) ** 2)
        return widen(least, most)


@dataclass(frozen=True)
class Parabola(Convex):
    """phi(u) = u^2 / 2; a product is a b = (phi(r a + b) - phi(r a - b)) / (2 r)."""

    shape: Shape = "other"

    def value(self, u: Array, p: Parameters) -> tuple[Array, Array]:
        return 0.5 * u * u, np.asarray(u, dtype=float)

    def bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        a, b = 0.5 * low * low, 0.5 * high * high
        around = (low <= 0) & (high >= 0)
        return widen(np.where(around, 0.0, np.minimum(a, b)), np.maximum(a, b))

    def slope_bounds(self, low: Array, high: Array, p: Parameters) -> tuple[Array, Array]:
        return low, high

    def touch(self, slope: Array, p: Parameters) -> Array:
        return slope


FADING_POWER = FadingPower()
PARABOLA = Parabola()


def product(a: Assembly, row: int, factor: Value, first: int, second: Terms, r: float, typical: float) -> None:
    """Adds factor * x_first * (sum of second) to a row; ``r`` scales x_first to the size of the second, whose typical
    value an iteration sets out from (at zero the product has no slope at all)."""
    inject = np.asarray(factor) / (2.0 * r)
    turned = [(c, -np.asarray(k)) for c, k in second]
    a.branch(PARABOLA, [(row, inject)], [(first, r), *second], start=typical)
    a.branch(PARABOLA, [(row, -inject)], [(first, r), *turned], start=-typical)
