"""Branch and prune: all boxes of branch values that can hold a solution, many boxes at once.

In a box every branch is enclosed by two parallel lines, phi(u) in alpha u + [b] with alpha the chord's slope (Kolev, IEEE
Trans. CAS 45(8) 849-859, 1998): the reduced form becomes y in M c - (M Q) [b] + (I - M L) Y with L = P + Q diag(alpha) and M close
to L^-1, a bound that is exact for straight pieces and shrinks with the square of the box.  Then the rows that single out
one branch current each bound that current, and slices that cannot carry it are cut off.  A box is done when it is empty
or when a proven point is the only solution in the hull of both; what is left is cut in two where that helps most.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from netaudit.devices.base import Array
from netaudit.solve.interval import Interval, product, total
from netaudit.solve.reduced import Reduced
from netaudit.solve.tighten import shaved, solved_for
from netaudit.solve.verify import Verified

Mask = NDArray[np.bool_]

#: boxes looked at together
_TOGETHER = 512
#: boxes are cut up to CUTS times in a round while they are fewer than this: a round costs about the same up to here
_FEW, _CUTS = 48, 3
#: a box that shrank by this factor in its widest entry is asked again before it is cut
_AGAIN = 0.5
#: boxes narrower than this (V, relative too) are not cut any more
_NARROW = 1e-10
#: in boxes narrower than this a solution is looked for, at most so many times in a search
_SMALL, _TRIES = 1e-6, 300
#: a cut lies at least this share of the width from both ends
_MARGIN = 1e-9

#: finds a solution near branch values u and proves it; None: none found, or not to be proven
Polish = Callable[[Array], Verified | None]


@dataclass
class Pruned:
    """``points``: every solution, each proven; ``undecided`` boxes: 0 when there is no other for certain."""

    points: list[Verified] = field(default_factory=list)
    undecided: int = 0
    boxes: int = 0
    tries: int = 0


def prune(
    reduced: Reduced, start: Sequence[Interval], points: Sequence[Verified], polish: Polish, budget: int
) -> Pruned:
    """All solutions within the boxes ``start`` (each (d,)), given those already proven; at most ``budget`` boxes are
    looked at."""
    out = Pruned(list(points))
    pile = [Interval(np.array([b.low for b in start]), np.array([b.high for b in start]))] if start else []
    while pile:
        boxes = pile.pop()
        if len(boxes.low) > _TOGETHER:
            pile.append(boxes[_TOGETHER:])
            boxes = boxes[:_TOGETHER]
        out.boxes += len(boxes.low)
        if out.boxes > budget:
            out.undecided += len(boxes.low) + sum(len(p.low) for p in pile)
            break
        left = _look(reduced, boxes, out, polish)
        if len(left.low):
            pile.append(left)
    return out


def _look(reduced: Reduced, boxes: Interval, out: Pruned, polish: Polish) -> Interval:
    """One round on many boxes: contracted, the decided ones dropped, the others cut or kept to be contracted again."""
    new, weight = contract(reduced, boxes)
    kept = ~new.empty().any(axis=-1)
    old, new, weight = boxes[kept], new[kept], weight[kept]
    for point in out.points:
        rest = ~point.alone_in(reduced, new)
        old, new, weight = old[rest], new[rest], weight[rest]
        if not len(new.low):
            return new
    old, new, weight = _found(reduced, old, new, weight, out, polish)
    if not len(new.low):
        return new
    was, now = old.high - old.low, new.high - new.low
    again = (now <= _AGAIN * was).any(axis=-1)
    narrow = _thin(new).all(axis=-1)
    out.undecided += int(narrow.sum())
    cut = ~again & ~narrow
    again &= ~narrow
    parts, weight = new[cut], weight[cut]
    for _ in range(_CUTS):
        parts, weight = _halves(reduced, parts, weight)
        if len(parts.low) >= _FEW:
            break
    return Interval(np.concatenate([new.low[again], parts.low]), np.concatenate([new.high[again], parts.high]))


def _found(
    reduced: Reduced, old: Interval, new: Interval, weight: Array, out: Pruned, polish: Polish
) -> tuple[Interval, Interval, Array]:
    """A solution is looked for in boxes that map into themselves or are narrow; all boxes that it decides are dropped."""
    inside: Mask = np.asarray((new.within(old) | _thin(new, _SMALL)).all(axis=-1))
    tried = np.zeros(len(new.low), dtype=bool)
    while True:
        ready = np.flatnonzero(inside & ~tried)
        if not len(ready) or out.tries >= _TRIES:
            return old, new, weight
        k = int(ready[0])
        tried[k] = True
        out.tries += 1
        u = reduced.spread(Interval.point(new[k].middle())).low
        point = polish(u)
        if point is None or any(_same(point, known) for known in out.points):
            continue
        out.points.append(point)
        rest = ~point.alone_in(reduced, new)
        old, new, weight, inside, tried = old[rest], new[rest], weight[rest], inside[rest], tried[rest]


def _thin(boxes: Interval, share: float = _NARROW) -> Mask:
    """Entries too narrow to be cut."""
    return np.asarray(boxes.high - boxes.low <= share * (1.0 + boxes.magnitude()))


def _same(a: Verified, b: Verified) -> bool:
    return bool(((a.u.low <= b.u.high) & (b.u.low <= a.u.high)).all())


def contract(reduced: Reduced, y: Interval) -> tuple[Interval, Array]:
    """Boxes (boxes, d) without what cannot hold a solution, and how much each branch's bend weighs: (boxes, m)."""
    u = reduced.spread(y)
    phi = Interval(*reduced.branches.bounds(u.low, u.high))
    slope = _chords(reduced, u)
    offset = Interval(*reduced.branches.offset_bounds(u.low, u.high, slope))
    with np.errstate(all="ignore"):
        new, weight = _lines(reduced, y, phi, slope, offset)
    new = y.meet(new)
    gone: Mask = np.asarray(new.empty().any(axis=-1))
    safe = Interval(np.where(gone[:, None], y.low, new.low), np.where(gone[:, None], y.high, new.high))
    cut = _currents(reduced, safe)
    return Interval(np.where(gone[:, None], np.inf, cut.low), np.where(gone[:, None], -np.inf, cut.high)), weight


def _chords(reduced: Reduced, u: Interval) -> Array:
    """The chords' slopes over the boxes."""
    ends = [reduced.branches.value(end) for end in (u.low, u.high)]
    width = u.high - u.low
    with np.errstate(all="ignore"):
        chord = (ends[1][0] - ends[0][0]) / width
    flat = ~np.isfinite(chord) | (width <= 1e-7 * (1.0 + u.magnitude()))
    return np.where(flat, 0.5 * (ends[0][1] + ends[1][1]), chord)


def _lines(reduced: Reduced, y: Interval, phi: Interval, slope: Array, offset: Interval) -> tuple[Interval, Array]:
    """The bound from the enclosing lines, and the weight of every branch's bend in it."""
    q = reduced.q.middle()
    scaled, signs = q * slope[:, None, :], reduced.signs
    matrix = reduced.p + scaled @ signs
    # q alpha and its sums are rounded
    loose = (np.abs(reduced.p) + np.abs(scaled) @ np.abs(signs)) * ((slope.shape[-1] + 4) * np.finfo(float).eps)
    inverse = _inverse(matrix)
    mq = product(inverse, Interval.point(q))
    bent = mq * offset[:, None, :]
    new = _vector(inverse, reduced.c) - total(bent)
    rest = (Interval.point(np.eye(reduced.d)) - product(inverse, Interval(matrix - loose, matrix + loose))).magnitude()
    wide = (rest @ y.magnitude()[..., None])[..., 0]
    enclosed = reduced.q.radius(q) @ phi.magnitude()[..., None]
    wide = (wide + (np.abs(inverse) @ enclosed)[..., 0]) * (1 + 1e-12)
    low, high = new.low - wide, new.high + wide
    new = Interval(np.where(np.isnan(low), -np.inf, low), np.where(np.isnan(high), np.inf, high))
    width = np.maximum(y.high - y.low, 1e-300)
    weight = (np.abs(mq.middle()) * (offset.high - offset.low)[:, None, :] / width[..., None]).max(axis=1)
    return new, np.where(np.isfinite(weight), weight, 1e300)


def _vector(a: Array, x: Interval) -> Interval:
    """a x for one interval vector x."""
    return product(a, x[..., None])[..., 0]


def _inverse(matrix: Array) -> Array:
    """Approximate inverses; zero where there is none (which leaves the box as it is)."""
    usable: Mask = np.asarray(np.isfinite(matrix).all(axis=(-1, -2)))
    safe = np.where(usable[:, None, None], matrix, np.eye(matrix.shape[-1]))
    try:
        inverse = np.linalg.inv(safe)
    except np.linalg.LinAlgError:
        inverse = np.zeros_like(safe)
        for k, one in enumerate(safe):
            try:
                inverse[k] = np.linalg.inv(one)
            except np.linalg.LinAlgError:
                continue
    good: Mask = np.asarray(usable & np.isfinite(inverse).all(axis=(-1, -2)))
    return np.where(good[:, None, None], inverse, 0.0)


def _currents(reduced: Reduced, y: Interval) -> Interval:
    """Boxes cut by the rows that single out one branch current each."""
    u = reduced.spread(y)
    phi = Interval(*reduced.branches.bounds(u.low, u.high))
    known = Interval(np.concatenate([y.low, phi.low], axis=-1), np.concatenate([y.high, phi.high], axis=-1))
    found = solved_for(reduced.rows, known, reduced.right)
    new = y.meet(found[..., : reduced.d])
    narrowed = found[..., reduced.d :]
    bad = new.empty() | np.isnan(new.low) | np.isnan(new.high)
    base = Interval(np.where(bad, y.low, new.low), np.where(bad, y.high, new.high))
    less = reduced.gather(shaved(reduced.branches, reduced.spread(base), narrowed))
    return new.meet(less)


def _halves(reduced: Reduced, boxes: Interval, weight: Array) -> tuple[Interval, Array]:
    """Every box cut in two across the variable of the branch whose bend weighs most, and the halves' weights."""
    if not len(boxes.low):
        return boxes, weight
    width = boxes.high - boxes.low
    # a variable that is as good as a point is not cut
    score = np.where(_thin(boxes)[:, reduced.variable], -1.0, weight)
    k = score.argmax(axis=-1)
    rows = np.arange(len(k))
    v = reduced.variable[k]
    hopeless = score[rows, k] <= 0.0
    v = np.where(hopeless, width.argmax(axis=-1), v)
    low, high = boxes.low[rows, v], boxes.high[rows, v]
    at = _cut(reduced, boxes, k)[rows, v]
    margin = _MARGIN * (high - low)
    at = np.where(np.isfinite(at) & (at > low + margin) & (at < high - margin), at, 0.5 * low + 0.5 * high)
    lower_high, upper_low = boxes.high.copy(), boxes.low.copy()
    lower_high[rows, v] = at
    upper_low[rows, v] = at
    # the bend of what was cut shrinks with the square
    less = np.where(reduced.variable == v[:, None], 0.25 * weight, weight)
    halves = Interval(np.concatenate([boxes.low, upper_low]), np.concatenate([lower_high, boxes.high]))
    return halves, np.concatenate([less, less])


def _cut(reduced: Reduced, boxes: Interval, k: Array) -> Array:
    """Where each variable would best be cut for branch k of each box: where the curve is farthest from its chord."""
    u = reduced.spread(boxes)
    slope = _chords(reduced, u)
    at = reduced.branches.touch(slope)
    chosen = np.full(boxes.low.shape, np.nan)
    rows = np.arange(len(k))
    chosen[rows, reduced.variable[k]] = at[rows, k] * reduced.sign[k]
    return chosen
