"""The parts of a board as rows: what a reviewer reads beside a stress, and what two revisions are compared by."""

from __future__ import annotations

import math

from netaudit.audit.records import PartRow
from netaudit.circuit.circuit import Board
from netaudit.devices.base import Device
from netaudit.parts.part import Rating
from netaudit.quantities.quantity import Quantity
from netaudit.quantities.units import UNITS


def part_rows(board: Board) -> tuple[PartRow, ...]:
    """Every part that is fitted in some mode, in the order of the netlist."""
    first: dict[str, Device] = {}
    for circuit in board.circuits:
        for device in circuit.devices:
            first.setdefault(device.name, device)
    return tuple(_row(device) for device in first.values())


def _row(device: Device) -> PartRow:
    items = {name: text(q) for name, q in device.values.items()} | dict(device.words)
    items |= {f"rating {symbol}": _rating(r) for symbol, r in device.ratings.items()}
    if device.covered:
        items["covered"] = device.covered
    pins = {pin: None if pin in device.open_pins else net for pin, net in device.pins.items()}
    part = device.part.name if device.part is not None else ""
    return PartRow(device.name, device.kind, part, items, pins, device.place.file, device.place.line)


def text(q: Quantity) -> str:
    """``330 ohm (313.5..346.5)``: a quantity for people, in SI units, so that equal texts mean equal values."""
    people = UNITS[q.unit].symbol if q.unit != "1" else ""
    said = f"{q.nominal:.9g} {people}".rstrip()
    return f"{said} ({q.low:.9g}..{q.high:.9g})" if q.varies else said


def _rating(rating: Rating) -> str:
    """``0.025 at 25, 0 at 100``: values in SI units, temperatures in degC."""
    return ", ".join(f"{v:.9g}" if math.isnan(t) else f"{v:.9g} at {t:.9g}" for t, v in rating.points)
