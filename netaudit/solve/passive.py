"""Between which voltages every net of a circuit must lie, from its sources alone.

A no-gain device (Willson, IEEE Trans. CAS 22, 1975): for every level, the currents into its pins above that level sum to
at least zero.  In a circuit of such devices and sources, take a level that no source's own span crosses: the pins above it
take current, nothing gives it, so no net stands above (Kirchhoff's law; every device leaks a little, so that not all
currents are zero).  Hence every net lies within the span of the held nets, widened by the spans of all floating sources;
a current source spans what its current drops along the resistances that join its ends to a held net.

Two-pin branches with v i >= 0, positive resistances, Ebers-Moll and square-law transistors and loads that fade are no-gain;
so are regulators and shunt references as they are modelled here.  An op amp is as long as its rails are held the right way
round, a converter is one with a source of its output voltage if its ground is the lowest held net.
"""

from __future__ import annotations

import heapq
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from itertools import pairwise

from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import Device
from netaudit.devices.measured import curve_of, junction_curve
from netaudit.solve.groups import is_stiff

#: kinds that are no-gain whatever surrounds them
_NO_GAIN = frozenset({
    "resistor", "link", "trimmer", "thermistor", "capacitor", "inductor", "fuse", "switch", "relay", "load", "driver",
    "diode", "led", "zener", "suppressor", "bridge", "shunt-reference", "npn", "pnp", "nmos", "pmos", "njfet", "pjfet",
    "regulator", "connector", "testpoint",
})  # fmt: skip


@dataclass(frozen=True)
class Span:
    """No net lies below ``low`` or above ``high`` (V), or ``why`` says what keeps that from being derived."""

    low: float
    high: float
    why: str = ""


def span(circuit: Circuit) -> Span:
    """The span of a group as ``groups.alone`` gives it."""
    held = held_nets(circuit)
    low, high = min(held.values(), default=0.0), max(held.values(), default=0.0)
    low, high = min(low, 0.0), max(high, 0.0)
    floating, current = 0.0, 0.0
    ends: list[str] = []
    tops = [high]
    for device in circuit.devices:
        if device.missing or (is_stiff(device) and set(device.pins.values()) <= set(held)):
            continue
        found = _own(device, held)
        if found is None:
            return Span(low, high, f"{device.name} can lift a net beyond its supplies")
        floating += found.floating
        if found.top is not None:
            tops.append(found.top)
        if found.current:
            current += found.current
            ends += [net for net in device.pins.values() if net not in held]
    drop = 0.0
    if current:
        reached = _resistances(circuit, held)
        missing = next((net for net in ends if net not in reached), None)
        if missing is not None:
            return Span(low, high, f"no resistance holds net {missing}, into which a current is forced")
        drop = current * max((reached[net] for net in ends), default=0.0)
    edge = (floating + drop) * (1 + 1e-9) + 1e-9 * (1 + max(abs(low), *map(abs, tops)))
    return Span(low - edge, max(tops) + edge)


@dataclass(frozen=True)
class _Own:
    """What a device adds: the span of a floating source (V), a current that it forces (A), the height of its output."""

    floating: float = 0.0
    current: float = 0.0
    top: float | None = None


def _own(device: Device, held: Mapping[str, float]) -> _Own | None:
    if device.kind in _NO_GAIN:
        # a measured junction is no-gain where its points have the sign of their voltage and its end goes on rising
        wrong = device.points and (
            any(v * i < 0.0 for v, i in device.points) or junction_curve(device).end_slopes[1] < 0
        )
        return None if wrong else _Own()
    return _OTHERS[device.kind](device, held) if device.kind in _OTHERS else None


def _supply(device: Device, held: Mapping[str, float]) -> _Own:
    return _Own() if device.words.get("state") == "off" else _Own(floating=abs(device.nominal("value")))


def _current_source(device: Device, held: Mapping[str, float]) -> _Own:
    if "compliance" in device.values:
        return _Own(floating=device.nominal("compliance"))
    return _Own(current=abs(device.nominal("value")))


def _unmodelled(device: Device, held: Mapping[str, float]) -> _Own:
    return _Own(current=sum(abs(q.nominal) for _, _, q in device.draws if q.nominal <= 0.0))


def _opamp(device: Device, held: Mapping[str, float]) -> _Own | None:
    top, bottom = (held.get(device.pins[pin]) for pin in ("V+", "V-"))
    if top is None or bottom is None or top < bottom:
        return None
    return _Own(current=2.0 * abs(device.nominal("I_B")))


def _converter(device: Device, held: Mapping[str, float]) -> _Own | None:
    if device.words.get("state") == "off":
        return _Own()
    ground = held.get(device.pins["GND"])
    if ground is None or ground > min(held.values()):
        return None
    return _Own(top=ground + device.nominal("value"))


def _curve(device: Device, held: Mapping[str, float]) -> _Own | None:
    """A measured curve delivers power where v i < 0: it spans at most the voltages up to which it does."""
    curve = curve_of(device)
    points = [(v, i) for v, i in curve.points]
    (v0, i0), (v1, i1) = points[0], points[-1]
    left, right = curve.end_slopes
    if left < 0.0 or right < 0.0:
        return None
    reach = 0.0
    for (a, ia), (b, ib) in pairwise(points):
        across = a < 0.0 < b and (ia > 0.0 or ib < 0.0)
        if a * ia < 0.0 or b * ib < 0.0 or across or (a == 0.0 and ia != 0.0) or (b == 0.0 and ib != 0.0):
            reach = max(reach, abs(a), abs(b))
    # the straight ends: where they begin on the wrong side they deliver up to their zero, if they have one
    for v, i, slope, outward in ((v0, i0, left, -1.0), (v1, i1, right, 1.0)):
        if v * outward < 0.0:
            # the end passes 0 V on its way
            reach = max(reach, abs(v), abs(v - i / slope) if slope > 0.0 else (abs(v) if i == 0.0 else float("inf")))
        elif i * outward < 0.0:
            reach = max(reach, abs(v - i / slope) if slope > 0.0 else float("inf"))
    return None if reach == float("inf") else _Own(floating=reach)


_OTHERS: dict[str, Callable[[Device, Mapping[str, float]], _Own | None]] = {
    "supply": _supply,
    "current-source": _current_source,
    "unmodelled": _unmodelled,
    "opamp": _opamp,
    "converter": _converter,
    "curve": _curve,
}


def held_nets(circuit: Circuit) -> dict[str, float]:
    """Volts of the nets that chains of stiff supplies hold against a ground."""
    held = dict.fromkeys(circuit.grounds, 0.0)
    supplies = [d for d in circuit.devices if is_stiff(d) and len(d.pins) == 2]
    grown = True
    while grown:
        grown = False
        for supply in supplies:
            plus, minus = supply.pins["+"], supply.pins["-"]
            volts = supply.nominal("value")
            if minus in held and plus not in held:
                held[plus] = held[minus] + volts
            elif plus in held and minus not in held:
                held[minus] = held[plus] - volts
            else:
                continue
            grown = True
    return held


def _resistances(circuit: Circuit, held: Mapping[str, float]) -> dict[str, float]:
    """Ohms along the least resistive path of resistors and shorts from a held net, by net."""
    near: dict[str, list[tuple[str, float]]] = {}
    for device in circuit.devices:
        ohms = _ohms(device)
        if ohms is not None:
            a, b = device.pins.values()
            near.setdefault(a, []).append((b, ohms))
            near.setdefault(b, []).append((a, ohms))
    done: dict[str, float] = {}
    queue = [(0.0, net) for net in held]
    while queue:
        far, net = heapq.heappop(queue)
        if net in done:
            continue
        done[net] = far
        for other, ohms in near.get(net, []):
            heapq.heappush(queue, (far + ohms, other))
    return done


def _ohms(device: Device) -> float | None:
    if device.missing or len(device.pins) != 2:
        return None
    if device.kind == "resistor" and not {"alpha", "alpha_2"} & set(device.values):
        return device.nominal("value")
    if device.kind in ("link", "inductor", "fuse") and device.words.get("state") != "open":
        return device.nominal("R", 0.0) if "alpha" not in device.values else None
    if device.kind == "switch" and device.words.get("state") == "closed":
        return device.nominal("R_on", 0.0)
    return None
