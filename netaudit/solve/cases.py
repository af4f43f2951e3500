"""The box in which a group's operating points lie: the span of its nets, carried through its equations, case by case.

Some devices guarantee more of their own currents than their rows show one by one:

- a regulator's output current j is 0 wherever its output stands above its input (then y - v_OUT < 0 in its row), so that
  its reverse junction and j never circulate a current: either v_OUT <= v_IN, or j = 0;
- a converter takes k = v_OUT j / (efficiency q) with q >= V_I_min / 2.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product

import numpy as np

from netaudit.devices.base import Array, Device
from netaudit.solve.interval import Interval
from netaudit.solve.passive import Span
from netaudit.solve.system import Numbers, System
from netaudit.solve.tighten import Bounds, Dense, tighten

#: regulators that are told apart into both of their cases
_MOST = 3


@dataclass(frozen=True)
class Region:
    """Boxes of branch values that together hold every operating point, and |x| <= ``x_max`` for all of them."""

    boxes: tuple[Interval, ...]
    x_max: Array

    @property
    def bounded(self) -> bool:
        return bool(np.isfinite(self.x_max).all())


def region(system: System, num: Numbers, circuit: Dense, limits: Span, u: Interval | None = None) -> Region:
    """The region of a group; ``u`` restricts its branch values further."""
    node = system.is_node
    x = Interval(np.where(node, limits.low, -np.inf), np.where(node, limits.high, np.inf))
    u = u or Interval(np.full(circuit.m, -np.inf), np.full(circuit.m, np.inf))
    parts = [_carried(system, circuit, *case) for case in _cases(system, x, u)]
    parts = [part for part in parts if not part.empty]
    x_max = np.max([part.x.magnitude() for part in parts], axis=0) if parts else np.zeros(system.n)
    return Region(tuple(part.u for part in parts), x_max)


def _cases(system: System, x: Interval, u: Interval) -> list[tuple[Interval, Interval]]:
    regulators = [k for k, d in enumerate(system.devices) if d.kind == "regulator" and d.words.get("state") != "off"]
    out = []
    for above in product((False, True), repeat=len(regulators[:_MOST])):
        low, high, u_low, u_high = x.low.copy(), x.high.copy(), u.low.copy(), u.high.copy()
        for k, over in zip(regulators, above, strict=False):
            # the reverse junction is the first branch of a regulator, from OUT to IN
            reverse = int(np.flatnonzero(system.branch_device == k)[0])
            if over:
                j = system.position[system.inner[(k, "j")]]
                low[j], high[j] = 0.0, 0.0
                u_low[reverse] = max(u_low[reverse], 0.0)
            else:
                u_high[reverse] = min(u_high[reverse], 0.0)
        out.append((Interval(low, high), Interval(u_low, u_high)))
    return out


def _carried(system: System, circuit: Dense, x: Interval, u: Interval) -> Bounds:
    bounds = tighten(circuit, x, u)
    converters = [k for k, d in enumerate(system.devices) if d.kind == "converter" and d.words.get("state") != "off"]
    if bounds.empty or not converters:
        return bounds
    low, high = bounds.x.low.copy(), bounds.x.high.copy()
    for k in converters:
        drawn = _drawn(system, k, system.devices[k], bounds.x)
        at = system.position[system.inner[(k, "k")]]
        low[at], high[at] = max(low[at], -drawn), min(high[at], drawn)
    return tighten(circuit, Interval(low, high), bounds.u)


def _drawn(system: System, k: int, device: Device, x: Interval) -> float:
    """The most that a converter's input current can be, in magnitude (A)."""

    def most(position: int) -> float:
        return 0.0 if position < 0 else float(x.magnitude()[position])

    pins = system.pin_numbers[k]
    volts = sum(most(int(system.position[pins[pin]])) for pin in ("OUT", "GND"))
    amperes = most(int(system.position[system.inner[(k, "j")]]))
    least = 0.5 * device.nominal("V_I_min") * device.nominal("efficiency")
    return volts * amperes / least * (1 + 1e-9) + 1e-300
