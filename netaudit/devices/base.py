"""What a device kind is: pins, keys, the equations it stamps and the stresses it exposes.

A kind knows only its own pins.  Its ``stamp`` writes the same arithmetic for one operating point and for ten thousand
samples: every value it receives may carry leading batch axes.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Literal, Protocol

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.families import Family
from netaudit.parts.part import Part, Rating
from netaudit.place import Place
from netaudit.quantities.quantity import Quantity

Array = NDArray[np.float64]
Value = float | Array
Terms = Sequence[tuple[int, Value]]

#: how a device's law counts in the proof of uniqueness by structure (Duffin 1947, Desoer and Wu 1974)
Growth = Literal["increasing", "nondecreasing", "other"]


@dataclass(frozen=True)
class Device:
    """A device of one mode, resolved: names to quantities in SI units, words as texts, ratings, its part and its place.

    ``values`` holds the value under ``"value"`` and every key and model parameter under its own name (conditions under
    ``name.at``); ``words`` the state under ``"state"`` and keys with words (``use``, ``limiting``, ``body``, ``material``).
    ``pins`` maps each pin to its net.  ``missing`` says in words what the model lacks (the device then stamps nothing
    and is ``part/no-model``), empty when it can be solved.
    """

    name: str
    kind: str
    pins: Mapping[str, str]
    values: Mapping[str, Quantity]
    words: Mapping[str, str]
    ratings: Mapping[str, Rating]
    place: Place
    part: Part | None = None
    points: tuple[tuple[float, float], ...] = ()
    draws: tuple[tuple[str, str, Quantity], ...] = ()
    covered: str = ""
    open_pins: frozenset[str] = frozenset()
    missing: str = ""
    rough: str = ""

    def nominal(self, name: str, default: float = float("nan")) -> float:
        """The nominal of a value by name, or the default when it is not given."""
        q = self.values.get(name)
        return default if q is None else q.nominal


@dataclass(frozen=True)
class Values:
    """The numbers of one evaluation: ``numbers[name]`` with leading batch axes, temperatures in degC."""

    numbers: Mapping[str, Value]
    temperature: Value
    ambient: Value

    def __getitem__(self, name: str) -> Value:
        return self.numbers[name]

    def get(self, name: str, default: Value) -> Value:
        return self.numbers.get(name, default)

    def has(self, name: str) -> bool:
        return name in self.numbers


class Assembly(Protocol):
    """Where a device writes its equations.

    Handles are integers local to the device: a pin or inner node stands for its voltage (as a column) and for its
    current balance (as a row); an extra unknown stands for itself (column) and for the equation it brings (row).
    Row of a pin: sum of currents that flow from the net INTO the device.  Every row reads

        sum(G * x) + sum(A * phi(B x)) - s = 0
    """

    def pin(self, name: str) -> int: ...

    def node(self, name: str) -> int: ...

    def unknown(self, name: str) -> int: ...

    def add(self, row: int, column: int, value: Value) -> None:
        """G[row, column] += value."""

    def source(self, row: int, value: Value) -> None:
        """s[row] += value (for a pin: a current that the device pushes out of itself into the net)."""

    def branch(self, family: Family, inject: Terms, sense: Terms, *, start: Value = 0.0, **parameters: Value) -> None:
        """A nonlinear branch: phi of the sum of ``sense`` terms, times each ``inject`` coefficient into its row.

        ``start`` is the sum that an iteration sets out from: the side of a corner on which the part usually works.
        """

    @property
    def carry_current(self) -> bool:
        """True where a resistance of this device must be solved with its current as an unknown (it is low against its
        neighbours, so that a difference of two node voltages would not carry its current)."""

    @property
    def least_ohms(self) -> float:
        """The least resistance to stamp: above 0 in loops of shorts, in which nothing else would say how current shares."""


def conductance(a: Assembly, p: int, q: int, g: Value) -> None:
    """A linear conductance g (siemens) between two nodes."""
    a.add(p, p, g)
    a.add(p, q, -np.asarray(g))
    a.add(q, q, g)
    a.add(q, p, -np.asarray(g))


def resistance(a: Assembly, p: int, q: int, r: Value, name: str = "i") -> int:
    """A resistance r (ohm, 0 allowed) from p to q with its current (into p) as an unknown: v_p - v_q - r i = 0."""
    if a.least_ohms:
        r = np.maximum(r, a.least_ohms)
    i = a.unknown(name)
    a.add(p, i, 1.0)
    a.add(q, i, -1.0)
    a.add(i, p, 1.0)
    a.add(i, q, -1.0)
    a.add(i, i, -np.asarray(r))
    return i


def two_pin(a: Assembly, family: Family, p: int, q: int, **parameters: Value) -> None:
    """A nonlinear branch that carries phi(v_p - v_q) from p to q."""
    a.branch(family, [(p, 1.0), (q, -1.0)], [(p, 1.0), (q, -1.0)], **parameters)


class View(Protocol):
    """What a device shows of itself at a solved point; every result has the batch's leading axes.

    ``v(pin)`` volts against the reference, ``i(pin)`` amperes into the pin, ``power`` watts turned into heat,
    ``temperature`` degC of the junction, ``ambient`` degC, ``value(name)`` the numbers of the evaluation, ``branch(k)``
    the (controlling sum, phi) of the device's k-th nonlinear branch in the order stamped, ``inner(name)`` an inner
    node's voltage or an extra unknown, ``measure(name)`` rated value of ``name`` at this temperature (nan: not rated).
    """

    def v(self, pin: str) -> Array: ...

    def i(self, pin: str) -> Array: ...

    @property
    def power(self) -> Array: ...

    @property
    def temperature(self) -> Array: ...

    @property
    def ambient(self) -> Array: ...

    def value(self, name: str) -> Array: ...

    def branch(self, k: int) -> tuple[Array, Array]: ...

    def inner(self, name: str) -> Array: ...


@dataclass(frozen=True)
class Check:
    """A stress of a kind: what is measured and against which ratings (the lowest of those given counts).

    ``measure`` returns the stress, positive in the direction that the rating limits (signed: a value below zero means
    the part is stressed the other way and counts as zero).  ``both`` takes its magnitude (both directions count).
    ``required``: without the rating the part counts as not audited.  ``derated``: linear power derating applies
    (``P_tot`` at ``T_ref`` down to zero at ``T_j`` or ``T_max``).  ``pin`` tells it from another check of one quantity.
    """

    quantity: str
    unit: str
    symbols: tuple[str, ...]
    measure: Callable[[View], Array]
    both: bool = False
    required: bool = False
    derated: bool = False
    pin: str | None = None


@dataclass(frozen=True)
class Key:
    """A key of a kind.  ``unit`` is the canonical unit, empty for words; ``words`` the words it takes (also beside a
    unit: ``sinks`` takes yes, no or a current); ``default`` in SI units, None when there is none.  ``least``/``most``
    bound what is physical; ``at`` is the unit of the condition in ``"value @ condition"`` (empty: takes none)."""

    unit: str = ""
    default: float | None = None
    words: tuple[str, ...] = ()
    default_word: str = ""
    least: float = float("-inf")
    most: float = float("inf")
    positive: bool = False
    at: str = ""


@dataclass(frozen=True)
class ValueSpec:
    """The value of a kind: its canonical units (several where the unit tells which is meant, as for a load), whether
    an IEC 60062 code is expected, whether it must be given, and what is physical."""

    units: tuple[str, ...]
    required: bool = True
    least: float = float("-inf")
    positive: bool = False


@dataclass(frozen=True)
class Kind:
    """The static side of a device kind.  Behaviour is given by the functions below; a kind is one file of this room.

    ``pin_sets``: the alternatives of pins (a capacitor: ("+", "-") or ("1", "2")); empty: any pins (connector).
    ``states``: words that may stand in the place of the value; ``default_state`` may be empty (must be given).
    ``ratings``: symbols allowed inline and in a table row.  ``parameters``: model parameters that a part row gives.
    ``polarised``: pins are not interchangeable (a pin map is needed for exports).
    """

    name: str
    pin_sets: tuple[tuple[str, ...], ...]
    value: ValueSpec | None = None
    states: tuple[str, ...] = ()
    default_state: str = ""
    keys: Mapping[str, Key] = field(default_factory=dict)
    ratings: tuple[str, ...] = ()
    polarised: bool = True
    heats: bool = True

    def pins_for(self, given: Sequence[str]) -> tuple[str, ...]:
        """The pin set that fits the given pins best (the one with most of them)."""
        if not self.pin_sets:
            return tuple(given)
        return max(self.pin_sets, key=lambda pins: len(set(pins) & set(given)))

    def resolve(self, device: Device) -> Device:
        """The device with its model complete: defaults filled in, data-sheet values turned into parameters, ``missing``
        or ``rough`` set.  Raises InputError for values that contradict each other."""
        return device

    def stamp(self, device: Device, values: Values, a: Assembly) -> None:
        """Writes the equations; structure may depend on the device (its words, its nominals), never on ``values``."""

    def conducts(self, device: Device) -> tuple[tuple[str, ...], ...]:
        """Groups of pins joined by something that conducts at DC (a gate, a capacitor, an open contact: none)."""
        return (tuple(device.pins),)

    def controls(self, device: Device) -> tuple[str, ...]:
        """Pins that must be driven or biased from outside: gates, bases, amplifier inputs."""
        return ()

    def growth(self, device: Device) -> Growth:
        """``increasing``: two-pin branches, strictly increasing with growth to both sides, or passive linear, or an
        ideal source of voltage or current; ``nondecreasing``: the same with a flat or vertical piece; else ``other``."""
        return "other"

    def checks(self, device: Device) -> tuple[Check, ...]:
        """The stresses this device exposes."""
        return ()

    def requirement(self, view: View, device: Device) -> Array:
        """The current that ``expect current D`` speaks of for a kind with two pins."""
        return np.abs(view.i(next(iter(device.pins))))
