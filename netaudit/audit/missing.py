"""Which rows a board's part tables lack: unknown parts, parts without a model, ratings without which nothing is audited."""

from __future__ import annotations

from dataclasses import dataclass

from netaudit.audit.coverage import fitted
from netaudit.circuit.circuit import Board
from netaudit.devices import KINDS
from netaudit.devices.base import Device


@dataclass(frozen=True)
class MissingRow:
    """One row to be written: a name, the kind, who needs it, the ratings and pins that lack, the checks it opens,
    and what an export says of those who need it."""

    name: str
    kind: str
    devices: tuple[str, ...]
    ratings: tuple[str, ...]
    needs_model: bool
    pins: tuple[str, ...]
    checks: tuple[str, ...]
    known: tuple[str, ...] = ()


def missing_rows(board: Board) -> tuple[MissingRow, ...]:
    """Rows most used first, then by name."""
    unmapped = {f.device for f in board.findings if f.rule == "part/no-pin-map"}
    groups: dict[tuple[str, str], list[Device]] = {}
    for device in fitted(board).values():
        if device.covered or not _lacks(device, unmapped):
            continue
        called, _ = board.known.get(device.name, ("", ""))
        name = device.part.name if device.part is not None else called or f"{device.kind.upper()}-{device.name}"
        groups.setdefault((name, device.kind), []).append(device)
    rows = [_row(name, kind, devices, unmapped, board) for (name, kind), devices in groups.items()]
    return tuple(sorted(rows, key=lambda r: (-len(r.devices), r.name)))


def _ratings(device: Device) -> list[tuple[str, str]]:
    """(symbol, check) of required ratings that are not stated."""
    if device.kind == "unmodelled":
        return []
    return [
        (c.symbols[0], c.quantity)
        for c in KINDS[device.kind].checks(device)
        if c.required and not set(c.symbols) & set(device.ratings)
    ]


def _lacks(device: Device, unmapped: set[str | None]) -> bool:
    return device.kind == "unmodelled" or bool(device.missing) or device.name in unmapped or bool(_ratings(device))


def _row(name: str, kind: str, devices: list[Device], unmapped: set[str | None], board: Board) -> MissingRow:
    lacking = [pair for d in devices for pair in _ratings(d)]
    first = devices[0]
    pins = tuple(first.pins) if kind == "unmodelled" or first.name in unmapped else ()
    return MissingRow(
        name,
        kind,
        tuple(d.name for d in devices),
        tuple(dict.fromkeys(symbol for symbol, _ in lacking)),
        bool(first.missing) or kind == "unmodelled",
        pins,
        tuple(dict.fromkeys(check for _, check in lacking)),
        tuple(dict.fromkeys(said for d in devices if (said := board.known.get(d.name, ("", ""))[1]))),
    )
