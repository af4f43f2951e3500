"""Random circuits whose number of operating points is known by another way than solving them.

- Chains: a supply, a resistor and k measured curves in series.  All carry one current i; on each monotone stretch of a curve
  its voltage is a function of i, so for every choice of stretches the points are the zeros of one function of i.
- Pairs: two chains on one stiff supply multiply.
- A constant-power load behind a resistor: the zeros of a quadratic above V_min and of a line below.

Circuits in which two points nearly meet are drawn again.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise, product

import numpy as np

from netaudit.devices.table import Table

HEAD = "netlist 1\nground GND\nambient 25degC\n"
#: volts by which a function of the current must stay away from zero where it turns
_CLEAR = 2e-3
_SAMPLES = 1500


@dataclass(frozen=True)
class Known:
    """A netlist, the text of its curve files by name, its count and how many branches interact."""

    text: str
    files: dict[str, str]
    count: int
    branches: int


def circuits(seed: int) -> Iterator[Known]:
    """Without end: chains of one to six curves, pairs of chains, constant-power loads."""
    rng = np.random.default_rng(seed)
    while True:
        kind = rng.integers(10)
        if kind < 6:
            found = _chain(rng, int(rng.integers(1, 7)), "a")
        elif kind < 8:
            found = _pair(rng)
        else:
            found = _power(rng)
        if found is not None:
            yield found


def _curve(rng: np.random.Generator) -> Table:
    """A curve through the origin with one falling stretch, a monotone one at times."""
    peak, valley = rng.uniform(0.1, 0.5), rng.uniform(0.6, 1.4)
    top = rng.uniform(1.0, 3.0)
    bottom = top * (rng.uniform(0.1, 0.8) if rng.random() < 0.8 else rng.uniform(1.05, 1.3))
    volts = [-0.5, 0.0, peak, valley, valley + rng.uniform(0.3, 0.8), 3.0]
    amperes = [-2.0 * top, 0.0, top, bottom, top * rng.uniform(1.2, 1.8), 6.0 * top]
    return Table(tuple((round(v, 4), round(i * 1e-3, 8)) for v, i in zip(volts, amperes, strict=True)))


def _chain(rng: np.random.Generator, k: int, tag: str, volts: float | None = None) -> Known | None:
    curves = [_curve(rng) for _ in range(k)]
    e = float(f"{rng.uniform(0.2, 1.2) * k:.4g}") if volts is None else volts
    ohms = float(f"{10 ** rng.uniform(0, 2.5):.3g}")
    count = chain_count(curves, e, ohms)
    if count is None:
        return None
    nets = ["V", *(f"N{tag}{j}" for j in range(k)), "GND"]
    lines = [f"R{tag} resistor {ohms!r}ohm 1:V 2:{nets[1]}"]
    lines += [f"X{tag}{j} curve points={tag}{j}.csv +:{nets[j + 1]} -:{nets[j + 2]}" for j in range(k)]
    files = {
        f"{tag}{j}.csv": "voltage,current\n" + "".join(f"{v!r},{i!r}\n" for v, i in c.points)
        for j, c in enumerate(curves)
    }
    return Known(f"{HEAD}PS1 supply {e!r}V +:V -:GND\n" + "\n".join(lines) + "\n", files, count, k)


def _pair(rng: np.random.Generator) -> Known | None:
    first = _chain(rng, int(rng.integers(1, 3)), "a")
    if first is None:
        return None
    volts = float(first.text.split("supply ")[1].split("V")[0])
    second = _chain(rng, int(rng.integers(1, 3)), "b", volts)
    if second is None:
        return None
    more = second.text.split("\n", 4)[4]
    return Known(
        first.text + more, first.files | second.files, first.count * second.count, max(first.branches, second.branches)
    )


def _power(rng: np.random.Generator) -> Known | None:
    """u = E - R P / u above V_min: u^2 - E u + R P = 0; below: u (1 + R P / V_min^2) = E."""
    e, r = float(f"{rng.uniform(5, 30):.3g}"), float(f"{10 ** rng.uniform(0, 2):.3g}")
    p, least = float(f"{rng.uniform(0.2, 1.3) * e * e / 4 / r:.3g}"), float(f"{rng.uniform(0.05, 0.6) * e:.3g}")
    disc = e * e - 4 * r * p
    above = [0.5 * (e + s * np.sqrt(disc)) for s in (1.0, -1.0)] if disc > 0 else []
    below = e / (1 + r * p / least**2)
    if abs(disc) < 1e-2 * e * e or any(abs(u - least) < 1e-2 * e for u in (*above, below)):
        return None
    count = int(sum(u > least for u in above)) + int(below < least)
    text = (
        f"{HEAD}PS1 supply {e!r}V +:V -:GND\nR1 resistor {r!r}ohm 1:V 2:X\nP1 load {p!r}W V_min={least!r}V +:X -:GND\n"
    )
    return Known(text, {}, count, 1)


def chain_count(curves: list[Table], e: float, ohms: float) -> int | None:
    """Points of a chain; None where two of them nearly meet or a stretch ends nearly in one."""
    total = 0
    for stretches in product(*(_stretches(c) for c in curves)):
        low, high = max(i[0] for i, _ in stretches), min(i[-1] for i, _ in stretches)
        if low >= high:
            continue
        # closer together towards the ends, where the voltages turn steeply
        at = low + (high - low) * 0.5 * (1 - np.cos(np.linspace(0, np.pi, _SAMPLES)))
        g = e - ohms * at - sum(np.interp(at, i, v) for i, v in stretches)
        turns = np.flatnonzero(np.diff(np.sign(np.diff(g)))) + 1
        if (np.abs(g[[0, -1, *turns]]) < _CLEAR).any():
            return None
        total += int((np.diff(np.sign(g)) != 0).sum())
    return total


def _stretches(curve: Table) -> list[tuple[np.ndarray, np.ndarray]]:
    """The monotone stretches as volts over rising amperes; the ends reach far out on their straight lines."""
    v = np.array([p[0] for p in curve.points])
    i = np.array([p[1] for p in curve.points])
    turning = np.flatnonzero(np.diff(np.sign(np.diff(i)))) + 1
    out = []
    for a, b in pairwise([v[0] - 40.0, *v[turning], v[-1] + 40.0]):
        inner = v[(v > a) & (v < b)]
        ends = [a, *inner, b]
        parts = [c + (d - c) * 0.5 * (1 - np.cos(np.linspace(0, np.pi, 400))) for c, d in pairwise(ends)]
        volts = np.concatenate(parts)
        amperes = curve.value(volts, {})[0]
        rising = amperes[-1] > amperes[0]
        out.append((amperes, volts) if rising else (amperes[::-1], volts[::-1]))
    return out
