"""The limit of a check at a corner: the rating at the actual temperature and the policy's share of it."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array, Check, Device, View
from netaudit.parts.part import Rating
from netaudit.parts.policy import Policy, Row, diode_class

#: kinds whose P_tot refers to 70 degC and falls to zero at 155 degC unless stated otherwise
RESISTIVE = frozenset({"resistor", "trimmer", "thermistor", "inductor"})
_TEMPERATURES = {True: (70.0, 155.0), False: (25.0, math.nan)}


@dataclass(frozen=True)
class Limit:
    """The rating of one check of one device; ``missing`` names the symbol that is not known when it cannot be made."""

    device: Device
    check: Check
    policy: Policy
    heated: bool
    on_path: bool

    @property
    def symbols(self) -> tuple[str, ...]:
        return tuple(s for s in self.check.symbols if s in self.device.ratings)

    @property
    def missing(self) -> str:
        """The symbol that is missing, empty when the check can be made."""
        symbols = self.symbols
        if self.check.quantity == "reverse-polarity":
            return ""
        if not symbols:
            return " or ".join(self.check.symbols)
        if self.check.quantity == "junction-temperature" and not self.heated:
            return "R_th_ja"
        if self.check.derated and self._by_case and not self.on_path:
            return "R_th_ja (P_tot refers to the case, and no heat path is given)"
        return ""

    @property
    def _by_case(self) -> bool:
        """Whether P_tot refers to the case: R_th_jc is stated and R_th_ja is not."""
        return "R_th_jc" in self.device.ratings and "R_th_ja" not in self.device.ratings

    def rating(self, view: View) -> Array:
        """The maker's value at this temperature: the lowest of the symbols given."""
        if self.check.quantity == "reverse-polarity":
            allowed = self.device.ratings.get("V_rev")
            base = np.asarray(0.0 if allowed is None else allowed.nominal)
            return np.broadcast_to(base, np.shape(view.v("+")))
        every = [self._at(self.device.ratings[s], view) for s in self.symbols]
        return np.asarray(np.min(np.stack(np.broadcast_arrays(*every)), axis=0))

    def _at(self, rating: Rating, view: View) -> Array:
        ambient = np.broadcast_to(view.ambient, np.shape(view.temperature))
        if self.check.derated and len(rating.points) == 1:
            return self._derated(rating.nominal, view, ambient)
        return rating.at(ambient)

    def _derated(self, power: float, view: View, ambient: Array) -> Array:
        """Linear from T_ref down to zero at T_j (semiconductors) or T_max (resistive parts)."""
        ratings = self.device.ratings
        resistive = self.device.kind in RESISTIVE
        start, end = _TEMPERATURES[resistive]
        if "T_ref" in ratings:
            start = ratings["T_ref"].nominal
        for symbol in ("T_max", "T_j") if resistive else ("T_j",):
            if symbol in ratings:
                end = ratings[symbol].nominal
                break
        if math.isnan(end) or end <= start:
            return np.full(np.shape(ambient), power)
        t = ambient
        if self._by_case:
            t = view.temperature - ratings["R_th_jc"].nominal * view.power
        return np.asarray(power * np.clip((end - t) / (end - start), 0.0, 1.0))

    def limit(self, view: View) -> Array:
        """The rating times the policy's share (or its cap or offset), whichever is lowest."""
        row = self.row
        rating = self.rating(view)
        return rating if row is None else row.limit(rating)

    @property
    def row(self) -> Row | None:
        """The policy's row for this check, None where it has none."""
        return self.policy.row(owners(self.device), self.check.symbols)


#: pins that a part's absolute limits refer to, if it has one of them; else the reference net
GROUND_PINS = ("GND", "VSS", "V-", "-", "G")


@dataclass(frozen=True)
class PinLimit:
    """An absolute limit of one pin: ``bound`` volts in the direction that is measured; no policy speaks of it."""

    bound: float
    missing: str = ""
    symbols: tuple[str, ...] = ()
    row: Row | None = None

    def rating(self, view: View) -> Array:
        """The bound, whatever the temperature."""
        return np.broadcast_to(np.asarray(self.bound), np.shape(view.ambient))

    def limit(self, view: View) -> Array:
        """The same."""
        return self.rating(view)


def pin_checks(device: Device) -> Iterator[tuple[Check, PinLimit, str, float]]:
    """The two checks of every pin with limits, each with its pin and direction (1 up, -1 down)."""
    limits = device.part.pin_limits if device.part is not None else {}
    ground = next((p for p in GROUND_PINS if p in device.pins), None)
    for pin, (low, high) in limits.items():
        if pin in device.pins and pin not in device.open_pins:
            for direction, bound in ((1.0, high), (-1.0, -low)):
                measure = _pin_measure(pin, ground, direction)
                yield Check("pin-voltage", "V", (), measure), PinLimit(bound), pin, direction


def _pin_measure(pin: str, ground: str | None, direction: float) -> Callable[[View], Array]:
    return lambda view: np.asarray(direction * (view.v(pin) - (view.v(ground) if ground is not None else 0.0)))


def value(check: Check, view: View) -> Array:
    """The stress: positive in the direction that the rating limits."""
    measured = check.measure(view)
    return np.abs(measured) if check.both else measured


def owners(device: Device) -> tuple[str, ...]:
    """Under which names a policy may speak of a device: its part, its class (polarised, rectifier, Schottky), its kind."""
    part = (device.part.name,) if device.part is not None else ()
    if "+" in device.pins and device.kind == "capacitor":
        return (*part, "capacitor-polarised", device.kind)
    amperes = device.ratings["I_F"].nominal if "I_F" in device.ratings else None
    found = diode_class(device.kind, device.words.get("material", "").casefold() == "schottky", amperes)
    return (*part, *([found] if found else []), device.kind)
