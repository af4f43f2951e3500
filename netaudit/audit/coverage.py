"""Coverage: what was audited, what was not, which checks lacked a rating, which values a spread."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from netaudit.audit.records import Coverage
from netaudit.audit.rule import listed
from netaudit.audit.stress import Watched
from netaudit.circuit.circuit import Board
from netaudit.devices.base import Device
from netaudit.finding import Finding

#: values that decide a stress, by kind: held at nominal they are worth a remark
_DECIDING = {
    "resistor": ("value",),
    "trimmer": ("value",),
    "thermistor": ("value",),
    "diode": ("V_F",),
    "led": ("V_F",),
    "bridge": ("V_F",),
    "zener": ("V_Z",),
    "suppressor": ("V_Z",),
    "npn": ("h_FE", "beta_F"),
    "pnp": ("h_FE", "beta_F"),
    "nmos": ("V_th", "V_GS_th"),
    "pmos": ("V_th", "V_GS_th"),
    "optocoupler": ("CTR",),
}


def fitted(board: Board) -> dict[str, Device]:
    """Every device that is fitted in some mode, by designator."""
    out: dict[str, Device] = {}
    for circuit in board.circuits:
        for device in circuit.devices:
            out.setdefault(device.name, device)
    return out


def without_spread(devices: Iterable[Device]) -> list[str]:
    """Designators whose deciding value has no tolerance."""
    names = []
    for device in devices:
        deciding = _DECIDING.get(device.kind, ())
        if device.missing or device.points or not deciding:
            continue
        if not any(name in device.values and device.values[name].varies for name in deciding):
            names.append(device.name)
    return names


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
        device = checks[0].device
        said = ", ".join(f"{c.check.quantity.replace('-', ' ')} ({c.limit.missing})" for c in checks)
        needed = [c for c in checks if c.check.required]
        tail = ": it counts as not audited until that is stated" if needed else ""
        yield Finding(
            "part/no-rating",
            "note",
            f"{device.name}: not checked for lack of a rating: {said}{tail}",
            device=device.name,
            file=device.place.file,
            line=device.place.line,
        )


def spread_note(board: Board, nominal: bool) -> Iterable[Finding]:
    """``part/no-spread``: one note a board."""
    names = without_spread(fitted(board).values())
    if names and not nominal:
        yield Finding(
            "part/no-spread",
            "note",
            f"held at nominal for lack of a tolerance: {listed(names, 12)}",
            file=board.name,
            line=1,
            value=float(len(names)),
            unit="1",
        )


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
