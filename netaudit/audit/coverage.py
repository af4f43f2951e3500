"""Coverage: what was audited, what was not, which checks lacked a rating, which values a spread."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from netaudit.audit.records import Coverage
from netaudit.audit.rules.part_no_rating import rating_note
from netaudit.audit.rules.part_no_spread import spread_note as held_at_nominal
from netaudit.audit.rules.part_no_spread import without_spread
from netaudit.audit.stress import Watched
from netaudit.circuit.circuit import Board
from netaudit.devices.base import Device
from netaudit.finding import Finding


def fitted(board: Board) -> dict[str, Device]:
    """Every device that is fitted in some mode, by designator."""
    out: dict[str, Device] = {}
    for circuit in board.circuits:
        for device in circuit.devices:
            out.setdefault(device.name, device)
    return out


def missing_ratings(items: Sequence[Watched]) -> dict[str, list[Watched]]:
    """Checks that could not be made, by device."""
    out: dict[str, list[Watched]] = {}
    for item in items:
        if item.limit.missing:
            out.setdefault(item.device.name, []).append(item)
    return out


def rating_notes(items: Sequence[Watched]) -> Iterable[Finding]:
    """``part/no-rating``: one note a device."""
    for checks in missing_ratings(items).values():
        yield rating_note(checks[0].device, [(c.check, c.limit.missing) for c in checks])


def spread_note(board: Board, nominal: bool) -> Iterable[Finding]:
    """``part/no-spread``: one note a board."""
    return () if nominal else held_at_nominal(board.name, without_spread(fitted(board).values()))


def coverage(board: Board, items: Sequence[Watched]) -> Coverage:
    """The coverage of a board; ``items`` are the checks of all modes, one for each device and quantity."""
    devices = fitted(board)
    lacking = {name: [c for c in checks if c.check.required] for name, checks in missing_ratings(items).items()}
    reasons: dict[str, str] = {}
    unmodelled = []
    for name, device in devices.items():
        if device.covered:
            continue
        if device.kind == "unmodelled" or device.missing:
            unmodelled.append(name)
            reasons[name] = device.missing or "no model"
        elif lacking.get(name):
            reasons[name] = "needs " + ", ".join(c.limit.missing for c in lacking[name])
    missing = sum(1 for item in items if item.limit.missing)
    return Coverage(
        len(devices),
        sum(1 for name, d in devices.items() if name not in reasons and not d.covered),
        sum(1 for d in devices.values() if d.covered),
        tuple(unmodelled),
        len(items) - missing,
        missing,
        len(without_spread(devices.values())),
        reasons,
    )
