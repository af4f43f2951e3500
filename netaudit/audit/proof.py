"""Proofs that a corner is the worst: signs of derivatives enclosed over the whole box of values.

Where the derivative of a stress with respect to a value keeps its sign all over the box, the worst lies at that value's
end; on the face that is left the next signs are looked for.  When all signs are decided the vertex is the worst:
``proven``.  When some stay open, the stress over what is left of the box is enclosed: ``bounded``.  Everything else stays
``checked``.  The enclosures follow the operating point that the nominal values have; where a board has several, each is
proven for itself.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from netaudit.audit.stress import Watched
from netaudit.audit.worst import Explorer, Extreme
from netaudit.devices.base import Array
from netaudit.solve.box import Boxes
from netaudit.solve.enclosure import Outputs
from netaudit.solve.interval import Interval, total
from netaudit.solve.terms import Unsupported

#: unknowns and varying values up to which a proof is tried, and boxes enclosed at once
_UNKNOWNS, _VALUES, _AT_ONCE = 160, 64, 64
#: halvings of a box whose signs stay open; boxes enclosed for one operating point at most, and multiplications
_DEPTH, _BUDGET, _WORK = 2, 600, 8e7
#: stresses that share a box in one enclosure
_TOGETHER = 8
#: an influence or a gap below this share of the stress is none
_SAME = 1e-9
#: limits below this count as nothing
_NOTHING = 1e-12


class Unknown(Exception):  # noqa: N818 - nothing is wrong: there is no proof to be had
    """The stress is a function that cannot be enclosed."""


class Span:
    """An enclosed number with its enclosed derivatives: value (boxes,), slope (boxes, variables)."""

    def __init__(self, value: Interval, slope: Interval) -> None:
        self.value, self.slope = value, slope

    def __neg__(self) -> Span:
        return Span(-self.value, -self.slope)

    def __add__(self, other: Any) -> Span:
        if isinstance(other, Span):
            return Span(self.value + other.value, self.slope + other.slope)
        return Span(self.value + Interval.point(_number(other)), self.slope)

    def __sub__(self, other: Any) -> Span:
        negative: Any = -other
        out: Span = self + negative
        return out

    def __rsub__(self, other: Any) -> Span:
        out: Span = -self + other
        return out

    def __mul__(self, other: Any) -> Span:
        if isinstance(other, Span):
            slope = self.slope * other.value[:, None] + other.slope * self.value[:, None]
            return Span(self.value * other.value, slope)
        return Span(self.value.scaled(_number(other)), self.slope.scaled(_number(other)))

    def __radd__(self, other: Any) -> Span:
        return self.__add__(other)

    def __rmul__(self, other: Any) -> Span:
        return self.__mul__(other)

    # arrays leave arithmetic with a Span to the Span; anything else they try ends in a TypeError
    __array_ufunc__ = None


def _number(x: Any) -> float:
    x = np.asarray(x, dtype=float)
    if x.ndim:
        raise Unknown
    return float(x)


class _View:
    """A device over a batch of boxes (see ``netaudit.devices.base.View``): what cannot be enclosed raises Unknown."""

    def __init__(self, boxes: Boxes, found: Outputs, name: str, air: float) -> None:
        self._boxes, self._found, self._air = boxes, found, air
        self._number = boxes.system.index_of[name]
        self._pins = boxes.system.pin_numbers[self._number]

    def _output(self, block: int, pin: str) -> Span:
        at = int(np.flatnonzero(self._found.pins[0] == self._pins[pin])[0]) + block * self._found.pins.shape[1]
        return Span(self._found.value[:, at], self._found.slope[:, at])

    def v(self, pin: str) -> Span:
        return self._output(2, pin)

    def i(self, pin: str) -> Span:
        return self._output(1, pin)

    def between(self, p: str, q: str) -> Span:
        """v(p) - v(q), sharper than the difference of both where one of them is the first pin."""
        first = next(iter(self._boxes.system.devices[self._number].pins))
        if q == first:
            return self._output(0, p)
        if p == first:
            return -self._output(0, q)
        return self._output(0, p) - self._output(0, q)

    @property
    def power(self) -> Span:
        """The sum over the pins of the voltage against the first one times the current."""
        names = list(self._pins)
        out = self.between(names[1], names[0]) * self.i(names[1]) if len(names) > 1 else None
        for name in names[2:]:
            assert out is not None
            out = out + self.between(name, names[0]) * self.i(name)
        if out is None:
            raise Unknown
        return out

    @property
    def temperature(self) -> Span:
        """The ambient and what the powers of its heat path add: T = T_ambient + sum of R_th P."""
        heat, devices = self._boxes.solver.heat, self._boxes.system.devices
        out = 0.0 * self.i(next(iter(self._pins))) + self._air
        for mine in np.flatnonzero(heat.devices == self._number):
            for k in np.flatnonzero(heat.resistance[mine]):
                other = _View(self._boxes, self._found, devices[heat.devices[k]].name, self._air)
                out = out + float(heat.resistance[mine, k]) * other.power
        return out

    def __getattr__(self, name: str) -> Any:
        raise Unknown


class _Volts:
    """A pin's voltage that waits for the one it is measured against."""

    def __init__(self, view: _View, pin: str, sign: float = 1.0) -> None:
        self.view, self.pin, self.sign = view, pin, sign

    __array_ufunc__ = None

    def __neg__(self) -> _Volts:
        return _Volts(self.view, self.pin, -self.sign)

    def __sub__(self, other: Any) -> Span:
        if isinstance(other, _Volts) and other.sign == self.sign:
            return self.view.between(self.pin, other.pin) * self.sign
        return self.span() - (other.span() if isinstance(other, _Volts) else other)

    def span(self) -> Span:
        """Against the reference."""
        return self.view.v(self.pin) * self.sign

    def __mul__(self, other: Any) -> Span:
        return self.span().__mul__(other)

    __rmul__ = __mul__


class _Measured(_View):
    """What ``Check.measure`` sees: voltages wait for their partner."""

    def v(self, pin: str) -> Any:
        return _Volts(self._own, pin)

    @property
    def _own(self) -> _View:
        return _View(self._boxes, self._found, self._boxes.system.devices[self._number].name, self._air)


@dataclass
class _Claim:
    """One objective being proven: its measure, its box so far, whether it can be enclosed, and a bound of it."""

    measure: Callable[[Boxes, Outputs], Span]
    low: Array
    high: Array
    limit: float
    decided: np.ndarray
    pins: tuple[int, ...]
    alive: bool = True
    bound: float = np.inf
    enough: float = -np.inf

    @property
    def open(self) -> bool:
        """Whether there is something left to find out."""
        return self.alive and not self.decided.all() and self.bound / self.limit > self.enough


def prove(explorer: Explorer, items: Sequence[Watched], extremes: list[list[Extreme]]) -> list[list[Extreme]]:
    """The extremes of the watched stresses (one list an item, as its objectives) with what can be proven of them."""
    solver = explorer.solver
    if not explorer.spans or explorer.cut or explorer.failures:
        return extremes
    if solver.system.n > _UNKNOWNS or len(explorer.spans) > _VALUES or not solver.system.n:
        return extremes
    try:
        boxes = Boxes(solver, explorer.boards[0], explorer.spans)
    except Unsupported:
        return extremes
    claims = [[_claim(explorer, item, k) for k in range(len(some))] for item, some in zip(items, extremes, strict=True)]
    every = [c for some in claims for c in some]
    for some, found in zip(claims, extremes, strict=True):
        for claim in some:
            # of two directions only the larger counts, if the other cannot reach it
            claim.enough = max((e.value for e in found), default=0.0) if len(some) > 1 else -np.inf
    _narrow(boxes, [c for c in every if c.alive])
    explorer.visit([c.low for c in every if c.alive and c.decided.all()])
    out = []
    for item, some, found in zip(items, claims, extremes, strict=True):
        objectives = item.objectives()
        out.append(
            _together([_judged(explorer, c, o, e) for c, o, e in zip(some, objectives, found, strict=True)], some)
        )
    return out


def _together(found: list[Extreme], claims: Sequence[_Claim]) -> list[Extreme]:
    """Where both directions count, the larger is proven only if the other cannot be larger still."""
    top = max(found, key=lambda e: e.value)
    for extreme, claim in zip(found, claims, strict=True):
        if extreme is top or extreme.proof == "proven":
            continue
        bound = claim.bound / claim.limit if claim.alive else np.inf
        if bound <= top.value:
            continue
        if not np.isfinite(bound) or top.proof == "checked":
            return [replace(e, proof="checked", bound=None) if e is top else e for e in found]
        worse = max(bound, top.bound or top.value)
        return [replace(e, proof="bounded", bound=worse) if e is top else e for e in found]
    return found


def _claim(explorer: Explorer, item: Watched, k: int) -> _Claim:
    """The claim of one objective before anything is known."""
    sign = (1.0, -1.0)[k]
    name = item.device.name

    def measure(boxes: Boxes, found: Outputs) -> Span:
        view: Any = _Measured(boxes, found, name, air)
        out: Any = item.check.measure(view)
        if isinstance(out, np.ndarray):
            out = out.item()
        if isinstance(out, _Volts):
            out = out.span()
        if not isinstance(out, Span):
            raise Unknown
        return out * sign

    decided = np.array([not v.device for v in explorer.spans])
    least, air = _limit(explorer, item)
    low, high = np.where(decided, air, explorer.low), np.where(decided, air, explorer.high)
    return _Claim(measure, low, high, least, decided, _pins(explorer, name), alive=least > _NOTHING)


def _pins(explorer: Explorer, name: str) -> tuple[int, ...]:
    """The pins of a device and of those on its heat path."""
    system, heat = explorer.solver.system, explorer.solver.heat
    number = system.index_of[name]
    warm = {
        int(heat.devices[k]) for m in np.flatnonzero(heat.devices == number) for k in np.flatnonzero(heat.resistance[m])
    }
    return tuple(p for k in sorted(warm | {number}) for p in system.pin_numbers[k].values())


def _limit(explorer: Explorer, item: Watched) -> tuple[float, float]:
    """The least limit over the ambient's range and the ambient at which the ratio is worst; 0 where it depends on more.

    A limit of nothing is exceeded by anything: no ratio can be bounded then either.
    """
    ambient = explorer.solver.system.circuit.ambient
    hot = item.check.quantity == "junction-temperature"
    if item.limit.missing or item.check.quantity == "reverse-polarity":
        return 1.0, ambient.high if hot else ambient.nominal
    if item.check.derated and "R_th_jc" in item.device.ratings and "R_th_ja" not in item.device.ratings:
        return 0.0, ambient.nominal
    board = explorer.boards[0].pick(0)
    turns = {t for r in item.device.ratings.values() for t, _ in r.points if np.isfinite(t)}
    turns |= {r.nominal for s, r in item.device.ratings.items() if s.startswith("T_")} | {25.0, 70.0, 155.0}
    airs = [ambient.high, ambient.low, *(t for t in sorted(turns) if ambient.low < t < ambient.high)]
    views = [replace(board, ambient=np.asarray(air)).view(item.device.name) for air in airs]
    limits = [float(item.limit.limit(view)) for view in views]
    if hot and len(set(limits)) > 1:
        return 0.0, ambient.nominal
    least = int(np.argmin(limits))
    return limits[least], airs[least]


def _narrow(boxes: Boxes, claims: Sequence[_Claim]) -> None:
    """Rounds of: enclose over each claim's box, send the values with a decided sign to their end.  Where nothing moves
    any more, boxes are taken in parts, as far as the budget allows."""
    size = boxes.system.n**2 * (boxes.system.n + boxes.system.m)
    depth, budget, first = 0, min(_BUDGET, int(_WORK / size)), True
    while depth <= _DEPTH:
        groups: dict[bytes, list[_Claim]] = {}
        for c in claims:
            if c.open or (first and c.alive):
                groups.setdefault(c.low.tobytes() + c.high.tobytes(), []).append(c)
        # the first box serves all; later ones few devices each, so that each has few outputs
        parts = (
            list(groups.values())
            if first
            else [g[k : k + _TOGETHER] for g in groups.values() for k in range(0, len(g), _TOGETHER)]
        )
        budget -= len(parts) * 2**depth
        if not parts or budget < 0:
            return
        moved = [_enclosed(boxes, parts[k : k + _AT_ONCE], depth) for k in range(0, len(parts), _AT_ONCE)]
        depth += not any(moved)
        first = False


def _enclosed(boxes: Boxes, parts: Sequence[list[_Claim]], depth: int) -> bool:
    """One enclosure for each group of claims with one box; True when a value found its end."""
    wanted = [sorted({pin for c in p for pin in c.pins}) for p in parts]
    most = max(len(w) for w in wanted)
    pins = np.array([w + w[-1:] * (most - len(w)) for w in wanted], dtype=np.intp)
    found = boxes.enclose(np.array([p[0].low for p in parts]), np.array([p[0].high for p in parts]), pins, depth)
    moved = [_decide(boxes, c, found.pick(box)) for box, group in enumerate(parts) for c in group]
    return any(moved)


def _decide(boxes: Boxes, claim: _Claim, found: Outputs) -> bool:
    """Takes over what an enclosure over the claim's box says; True when a value found its end."""
    if not found.good[0]:
        return False
    try:
        span = claim.measure(boxes, found)
    except (Unknown, TypeError, ValueError, AttributeError):
        claim.alive = False
        return False
    slope, value = span.slope[0], span.value[0]
    size = max(abs(float(value.low)), abs(float(value.high)))
    gain = slope * found.reach[0]
    known = boxes.terms.known
    claim.bound = min(claim.bound, float(value.high))
    if (known | (claim.low == claim.high)).all():
        # mean value form: the stress at the centre and what each value can add
        still = replace(found, value=found.centre)
        claim.bound = min(claim.bound, float((claim.measure(boxes, still).value + total(gain)).high[0]))
    up, down = (slope.low >= 0.0) & known, (slope.high <= 0.0) & known
    way = boxes.terms.direction
    rising = (up & (way >= 0)) | (down & (way < 0))
    falling = (down & (way >= 0)) | (up & (way < 0))
    small = known & (gain.magnitude() <= _SAME * 1e-2 * size / max(len(known), 1))
    fresh = ~claim.decided & (rising | falling | small)
    at = np.where(rising, claim.high, np.where(falling, claim.low, 0.5 * (claim.low + claim.high)))
    claim.low = np.where(fresh, at, claim.low)
    claim.high = np.where(fresh, at, claim.high)
    claim.decided = claim.decided | fresh
    return bool(fresh.any())


def _judged(explorer: Explorer, claim: _Claim, objective: Callable[[Any], Array], found: Extreme) -> Extreme:
    """The extreme with its proof; where the proven vertex is better than what was found, that one."""
    if not claim.alive:
        return found
    row = explorer.known.get(claim.low.tobytes())
    if claim.decided.all() and row is not None:
        board = explorer.board(row)
        value = float(objective(board))
        room = _SAME * abs(value) + _NOTHING
        if found.value <= value + room:
            if value > found.value:
                corner = {
                    v.key: float(explorer.rows[row][c]) for c, v in enumerate(explorer.spans) if v.key in found.corner
                }
                return Extreme(value, board, corner, "proven")
            return replace(found, proof="proven")
        return found
    bound = claim.bound / claim.limit
    if not np.isfinite(bound) or bound < found.value * (1 - np.sign(found.value) * _SAME):
        return found
    if bound <= found.value + _SAME * abs(found.value) + _NOTHING:
        return replace(found, proof="proven")
    return replace(found, proof="bounded", bound=bound)
