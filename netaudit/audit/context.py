"""What a rule about one mode must know of the whole board: which references regulate, what coils get when energised."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np

from netaudit.circuit.circuit import Board
from netaudit.devices.base import Device
from netaudit.solve.point import ModeResult

#: a junction conducts above this, A
CONDUCTS = 10e-6
#: a limit is reached at this share of it
REACHED = 0.999
#: below this a net counts as not powered, V
POWERED = 0.3


@dataclass(frozen=True)
class Context:
    """``regulating``: references at or above their knee in some mode, or with an ``expect`` across them; ``coils``: the
    largest coil voltage of each relay over all modes, V."""

    regulating: frozenset[str] = frozenset()
    coils: Mapping[str, float] = field(default_factory=dict)


def context(board: Board, results: Sequence[ModeResult]) -> Context:
    """The context of a board's solved modes at nominal values."""
    regulating: set[str] = set()
    coils: dict[str, float] = {}
    for result in results:
        for device in result.circuit.devices:
            if device.missing:
                continue
            if device.kind in ("zener", "shunt-reference") and _regulates(board, result, device):
                regulating.add(device.name)
            if device.kind == "relay":
                views = [p.view(device.name) for p in result.points]
                most = max((abs(float(v.v("C1") - v.v("C2"))) for v in views), default=0.0)
                coils[device.name] = max(most, coils.get(device.name, 0.0))
    return Context(frozenset(regulating), coils)


def knee(device: Device) -> float | None:
    """The least current at which a zener (I_ZK) or shunt reference (I_K_min) holds its voltage, A; None: not known."""
    symbol = "I_ZK" if device.kind == "zener" else "I_K_min"
    rating = device.ratings.get(symbol)
    known = rating.nominal if rating is not None else device.nominal(symbol)
    return None if np.isnan(known) else known


def _regulates(board: Board, result: ModeResult, device: Device) -> bool:
    least = knee(device)
    if any(float(p.view(device.name).i("K")) >= (CONDUCTS if least is None else least) for p in result.points):
        return True
    ends = {device.pins["A"], device.pins["K"]}
    grounds = set(result.circuit.grounds)
    for wanted in board.expectations:
        if wanted.quantity != "voltage" or wanted.mode not in (None, result.mode):
            continue
        if set(wanted.nets) == ends or (len(wanted.nets) == 1 and wanted.nets[0] in ends and ends & grounds):
            return True
    return False
