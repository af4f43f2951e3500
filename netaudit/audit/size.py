"""Sizing: for which values of one part every check of the whole board passes at its worst case.

Ratios of stress to limit, and expectations as margins, are functions of the part's nominal value (its own tolerance
moves with it).  They are sampled on a logarithmic grid, the ends of the passing stretches are found by bisection, and
each end names the check that limits there.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

from netaudit.audit.audit import audit
from netaudit.circuit.circuit import Board, Circuit
from netaudit.devices.base import Device
from netaudit.failure import InputError
from netaudit.finding import rank
from netaudit.parts.policy import Policy, load_policy
from netaudit.quantities.quantity import Quantity
from netaudit.workers import IN_PROCESS, Interrupted, Workers

#: how far from the present value is looked, and in how many steps a decade
_DECADES, _STEPS = 2, 12
_BISECTIONS = 18
SERIES = {"E12": 12, "E24": 24, "E96": 96}
_E24 = (10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91)


@dataclass(frozen=True)
class Sizing:
    """``passes``: intervals of the nominal value (SI) in which everything passes; ``limited_by``: for each interval what
    stops at its lower and upper end (empty at the end of the range that was looked at)."""

    device: str
    unit: str
    looked: tuple[float, float]
    passes: tuple[tuple[float, float], ...]
    limited_by: tuple[tuple[str, str], ...]
    preferred: dict[str, tuple[float, ...]]


@dataclass(frozen=True)
class _Trial:
    board: Board
    device: str
    nominal: float
    policy: Policy


def size(
    board: Board,
    device: str,
    policy: str | Policy = "none",
    series: tuple[str, ...] = ("E24",),
    workers: Workers = IN_PROCESS,
) -> Sizing:
    """The values of a device for which the board passes.

    InputError for a device that has no value to choose; Interrupted where the workers are told to stop: without all of
    its grid a stretch that passes cannot be told from one that was not looked at.
    """
    loaded = load_policy(policy) if isinstance(policy, str) else policy
    found = next((d for c in board.circuits for d in c.devices if d.name == device), None)
    if found is None:
        raise InputError(f"there is no device {device}", mend="check the designator")
    if "value" not in found.values or found.values["value"].nominal <= 0:
        raise InputError(
            f"{device} is a {found.kind}: it has no value to choose", mend="name a resistor, supply or source"
        )
    value = found.values["value"]

    def trials(nominals: Sequence[float]) -> list[_Trial]:
        return [_Trial(board, device, nominal, loaded) for nominal in nominals]

    def verdict(nominal: float) -> str:
        return next(workers.each(_verdict, trials([nominal]), device))

    low, high = value.nominal * 10.0**-_DECADES, value.nominal * 10.0**_DECADES
    count = 2 * _DECADES * _STEPS
    grid = [low * (high / low) ** (k / count) for k in range(count + 1)]
    said = list(workers.each(_verdict, trials(grid), f"values of {device}"))
    passes, reasons = _stretches(grid, said, verdict)
    preferred = {
        name: tuple(v for v in preferred_values(name, low, high) if any(a <= v <= b for a, b in passes))
        for name in series
    }
    return Sizing(device, value.unit, (low, high), passes, reasons, preferred)


def _verdict(trial: _Trial, workers: Workers) -> str:
    return first_failure(with_value(trial.board, trial.device, trial.nominal), trial.policy, workers)


def _stretches(
    grid: list[float], said: list[str], verdict: Callable[[float], str]
) -> tuple[tuple[tuple[float, float], ...], tuple[tuple[str, str], ...]]:
    """Passing intervals of the grid with their ends refined, and what limits each end."""
    passes, reasons = [], []
    start: tuple[float, str] | None = (grid[0], "") if not said[0] else None
    for (a, before), (b, after) in zip(
        zip(grid, said, strict=True), list(zip(grid, said, strict=True))[1:], strict=False
    ):
        if before and not after:
            edge, why = _edge(a, b, before, verdict)
            start = (edge, why)
        elif not before and after:
            edge, why = _edge(b, a, after, verdict)
            assert start is not None
            passes.append((start[0], edge))
            reasons.append((start[1], why))
            start = None
    if start is not None:
        passes.append((start[0], grid[-1]))
        reasons.append((start[1], ""))
    return tuple(passes), tuple(reasons)


def _edge(failing: float, passing: float, why: str, verdict: Callable[[float], str]) -> tuple[float, str]:
    """The last passing value between a failing and a passing one, and what fails just beyond it."""
    for _ in range(_BISECTIONS):
        middle = math.sqrt(failing * passing)
        said = verdict(middle)
        if said:
            failing, why = middle, said
        else:
            passing = middle
    return passing, why


def first_failure(board: Board, policy: str | Policy, workers: Workers = IN_PROCESS) -> str:
    """The worst finding of level error as ``rule device``; empty when everything passes."""
    found = audit(board, policy, workers=workers)
    if found.partial:
        raise Interrupted
    for finding in found.findings:
        if rank(finding.level) >= rank("error"):
            return f"{finding.rule} {finding.device or finding.net or ''}".strip()
    return ""


def with_value(board: Board, device: str, nominal: float) -> Board:
    """The board with another nominal value of a device in every mode, its spread in proportion."""

    def changed(d: Device) -> Device:
        if d.name != device or "value" not in d.values:
            return d
        old = d.values["value"]
        share = nominal / old.nominal
        return replace(
            d, values={**d.values, "value": Quantity(nominal, old.unit, old.low * share, old.high * share, old.spread)}
        )

    def circuit(c: Circuit) -> Circuit:
        return replace(c, devices=tuple(changed(d) for d in c.devices))

    return replace(board, circuits=tuple(circuit(c) for c in board.circuits))


def preferred_values(series: str, low: float, high: float) -> list[float]:
    """The preferred values (IEC 60063) of a series between two values."""
    if series not in SERIES:
        raise InputError(f"there is no series {series}", mend=f"one of {', '.join(SERIES)}")
    count = SERIES[series]
    wide = count <= len(_E24)
    decade = (
        [v / 10 for v in _E24[:: 24 // count]] if wide else [round(100 * 10 ** (k / count)) / 100 for k in range(count)]
    )
    first, last = math.floor(math.log10(low)), math.ceil(math.log10(high))
    values = [float(f"{v * 10.0**e:.4g}") for e in range(first, last + 1) for v in decade]
    return [v for v in values if low <= v <= high]
