"""Stresses of one mode: every check of every device, at its worst corner, against rating and limit."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from netaudit.audit.limits import Limit, PinLimit, pin_checks, value
from netaudit.audit.records import Stress
from netaudit.audit.tasks import made
from netaudit.audit.worst import Extreme, Objective
from netaudit.devices import KINDS
from netaudit.devices.base import Array, Check, Device
from netaudit.finding import Finding, Level
from netaudit.parts.policy import Policy
from netaudit.quantities.write import engineering
from netaudit.solve.settle import Solver
from netaudit.solve.solved import Solved

#: rounding that still counts as being exactly at a rating, relative and in SI units
_EXACT = 1e-9
_FLOOR = 1e-12
#: reverse voltage that a polarised capacitor may see beyond what it allows, V
_REVERSE = 0.01


@dataclass(frozen=True)
class Watched:
    """One check of one device in a mode; ``pin`` and ``direction`` (-1: the lower limit) for limits of a pin."""

    device: Device
    check: Check
    limit: Limit | PinLimit
    pin: str | None = None
    direction: float = 1.0

    @property
    def key(self) -> tuple[str, str, str | None, float]:
        """What tells this check from the others of a board."""
        return (self.device.name, self.check.quantity, self.pin, self.direction)

    def objectives(self) -> list[Objective]:
        """What is maximised: value over limit where there is one, else the value; both directions where both count."""
        signs = (1.0, -1.0) if self.check.both else (1.0,)
        return [self._objective(sign) for sign in signs]

    def _objective(self, sign: float) -> Objective:
        def objective(board: Solved) -> Array:
            view = board.view(self.device.name)
            measured = sign * self.check.measure(view)
            if self.limit.missing or self.check.quantity == "reverse-polarity":
                return measured
            limit = self.limit.limit(view)
            # a limit of zero is exceeded by anything above zero: a large finite slope keeps the ordering
            return np.asarray(measured / np.maximum(limit, 1e-12))

        return objective


def watched(solver: Solver, policy: Policy) -> list[Watched]:
    """Every check of a mode's devices, in the order of the netlist."""
    heated = {solver.system.devices[k].name for k in solver.heat.devices}
    on_path = {name for path in solver.system.circuit.heat_paths for name in path.devices}
    out = []
    for d in solver.system.devices:
        checks = KINDS[d.kind].checks(d)
        out += [Watched(d, c, Limit(d, c, policy, d.name in heated, d.name in on_path), c.pin) for c in checks]
        out += [Watched(d, *rest) for rest in pin_checks(d)]
    return out


def stress_of(item: Watched, extremes: Sequence[Extreme], nominal: Solved, mode: str, variant: str | None) -> Stress:
    """The record of the worse of a check's extremes."""
    worst = max(extremes, key=lambda e: e.value)
    view = worst.board.view(item.device.name)
    at_worst = max(float(value(item.check, view)), 0.0) if item.check.unit != "degC" else float(value(item.check, view))
    now = float(value(item.check, nominal.view(item.device.name)))
    now = max(now, 0.0) if item.check.unit != "degC" else now
    rating = limit = ratio = None
    row, document, symbol = "", "", ""
    # the bound of a ratio, as a stress at the limit of the worst corner
    bound = worst.bound
    if not item.limit.missing:
        rating, limit = float(item.limit.rating(view)), float(item.limit.limit(view))
        ratio = at_worst / limit if limit > 0 else None
        if bound is not None and item.check.quantity != "reverse-polarity":
            bound *= limit
        found = item.limit.row
        row, document = (str(found), found.document) if found is not None else ("", "")
        symbol = next(iter((*item.limit.symbols, *item.check.symbols)), "")
    proof = worst.proof
    if proof == "bounded" and bound is not None and bound <= at_worst:
        # what is bounded below zero is no stress at all
        proof, bound = "proven", None
    rated = item.device.ratings.get(symbol)
    way = item.direction
    return Stress(
        item.device.name, item.check.quantity, item.check.unit, way * now, way * at_worst, _times(rating, way),
        _times(limit, way), ratio, mode, worst.corner, proof, _times(bound, way), False, variant, symbol, row, document,
        rated.origin if rated is not None else "", item.pin, way,
    )  # fmt: skip


def _times(number: float | None, way: float) -> float | None:
    return None if number is None else way * number


def beyond(stress: Stress) -> Level | None:
    """``error`` above the rating, ``warning`` above the policy's limit, None within; exactly at either is within."""
    if stress.rating is None or stress.limit is None:
        return None
    worst, rating, limit = (stress.direction * x for x in (stress.worst, stress.rating, stress.limit))
    polarity = stress.quantity == "reverse-polarity"
    if worst > rating + (_REVERSE if polarity else _EXACT * abs(rating) + _FLOOR):
        return "error"
    if worst > limit + _EXACT * abs(limit) + _FLOOR and not polarity:
        return "warning"
    return None


def findings_of(stress: Stress, device: Device, units: Mapping[str, str]) -> Iterable[Finding]:
    """``stress/…``: an error above the rating, a warning above the policy's share of it; ``units`` of corner keys."""
    level = beyond(stress)
    if level is None or stress.rating is None or stress.limit is None:
        return
    bound = stress.rating if level == "error" else stress.limit
    whose = "its rating" if level == "error" else f"the policy's limit ({stress.row or 'no row'})"
    said = engineering(stress.worst, stress.unit, 4)
    where = corner_text(stress.corner, units)
    at = (f" at {where}" if where else "") + (f" with {stress.variant}" if stress.variant else "")
    what = stress.quantity.replace("-", " ") + (f" of {stress.pin}" if stress.pin else "")
    # one quantity of a transistor has two ratings, each of its own pair of pins
    what = "collector base voltage" if stress.symbol == "V_CBO" else what
    yield made(
        f"stress/{stress.quantity}", level, device, stress.mode,
        f"{what} reaches {said}{at}, beyond {whose} of {engineering(bound, stress.unit, 4)}: "
        f"{_MENDS.get(stress.quantity, 'choose a part with a higher rating or lower the stress')}",
        stress.corner, pin=stress.pin, quantity=stress.quantity, value=stress.worst, limit=stress.limit,
        rating=stress.rating, unit=stress.unit, ratio=stress.ratio, variant=stress.variant,
    )  # fmt: skip


def corner_text(corner: Mapping[str, float], units: Mapping[str, str], most: int = 4) -> str:
    """``PS1 = 13.2 V, R1 = 95 ohm`` for a sentence; ``units`` of the corner's keys."""
    parts = [
        f"{key} = {engineering(v, units[key], 4) if key in units else f'{v:.4g}'}"
        for key, v in list(corner.items())[:most]
    ]
    return ", ".join(parts) + (", ..." if len(corner) > most else "")


_MENDS = {
    "power": "choose a larger power rating or lower the current through it",
    "forward-current": "raise the series resistance or choose a part with a higher I_F",
    "reverse-voltage": "choose a part with a higher V_R, or check its direction",
    "stand-off-voltage": "choose a suppressor with a higher V_RWM",
    "zener-current": "raise the series resistance",
    "junction-temperature": "lower its power or its thermal resistance",
    "voltage": "choose a part with a higher rated voltage",
    "reverse-polarity": "turn the capacitor round or use one without polarity",
    "gate-source-voltage": "limit the gate voltage (a divider or a zener clamp)",
    "emitter-base-voltage": "add a diode across the junction or in series with the base",
    "base-current": "raise the base resistance",
}
