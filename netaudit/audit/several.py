"""``point/several``: in how many points a mode can settle, what tells them apart, and how the board gets into each."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np

from netaudit.devices import KINDS
from netaudit.devices.base import Device
from netaudit.finding import Finding
from netaudit.quantities.write import engineering
from netaudit.solve.operate import Operation
from netaudit.solve.point import ModeResult, Point
from netaudit.solve.ramp import Rise, rises

#: parts named to tell the points apart, points described one by one
_PARTS, _POINTS = 3, 6


def several(operation: Operation, result: ModeResult) -> Iterable[Finding]:
    """The finding, where more than one point can persist."""
    kept = [k for k, p in enumerate(result.points) if p.stable is not False]
    if len(kept) < 2:
        return
    place = result.circuit.devices[0].place
    found = rises(operation.solver, operation.boards)
    parts = _telling(result, kept)
    lines = [f"({n}) {_state(result.points[k], parts)}{_reached(k, found)}" for n, k in enumerate(kept[:_POINTS], 1)]
    more = f"; and {len(kept) - _POINTS} more" if len(kept) > _POINTS else ""
    balanced = [r.how for r in found if r.point is not None and r.point not in kept]
    unrest = f"; with {' or '.join(balanced)} it rises balanced into a point where it cannot rest: tolerances decide"
    yield Finding(
        "point/several",
        "warning",
        f"mode {result.mode} can settle in {len(kept)} operating points; each one is audited: {'; '.join(lines)}{more}"
        f"{unrest if balanced else ''} ({result.uniqueness}: {result.because}): make sure that it starts in the right one",
        mode=result.mode,
        value=float(len(kept)),
        unit="1",
        file=place.file,
        line=place.line,
    )


def _telling(result: ModeResult, kept: Sequence[int]) -> list[Device]:
    """The parts whose currents differ most between the points, those first that can have caused it."""
    points = [result.points[k] for k in kept]
    ranked = []
    for device in result.circuit.devices:
        if device.missing or not device.pins or device.kind == "supply":
            continue
        amperes = [_current(p, device) for p in points]
        spread, most = max(amperes) - min(amperes), max(map(abs, amperes))
        if most > 1e-9 and spread > 1e-3 * most:
            ranked.append((KINDS[device.kind].growth(device) != "other", -spread / most, -most, device.name, device))
    ranked.sort(key=lambda r: r[:-1])
    return [device for plain, *_, device in ranked[:_PARTS] if plain == ranked[0][0]]


def _current(point: Point, device: Device) -> float:
    """The largest of a part's pin currents, in magnitude."""
    view = point.view(device.name)
    return max(abs(float(np.asarray(view.i(pin)))) for pin in device.pins)


def _state(point: Point, parts: Sequence[Device]) -> str:
    """``Q1 4.93 mA, Q2 off``."""
    said = []
    for device in parts:
        amperes = _current(point, device)
        said.append(f"{device.name} {engineering(amperes, 'A')}" if amperes > 1e-9 else f"{device.name} off")
    return ", ".join(said) or "by temperatures alone"


def _reached(k: int, found: Sequence[Rise]) -> str:
    ways = [r.how for r in found if r.point == k]
    return f", reached with {' or '.join(ways)}" if ways else ", not reached by switching on"
