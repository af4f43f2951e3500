"""Stresses of one mode: every check of every device, at its worst corner, against rating and limit."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from netaudit.audit.limits import Limit, value
from netaudit.audit.records import Stress
from netaudit.audit.rule import about
from netaudit.audit.worst import Extreme, Objective
from netaudit.devices import KINDS
from netaudit.devices.base import Array, Check, Device
from netaudit.finding import Finding
from netaudit.parts.policy import Policy
from netaudit.quantities.write import engineering
from netaudit.solve.settle import Solver
from netaudit.solve.solved import Solved

#: rounding that still counts as being exactly at a rating
_EXACT = 1e-9
#: reverse voltage that a polarised capacitor may see beyond what it allows, V
_REVERSE = 0.01


@dataclass(frozen=True)
class Watched:
    """One check of one device in a mode."""

    device: Device
    check: Check
    limit: Limit

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
    return [
        Watched(d, c, Limit(d, c, policy, d.name in heated, d.name in on_path))
        for d in solver.system.devices
        for c in KINDS[d.kind].checks(d)
    ]


def stress_of(item: Watched, extremes: Sequence[Extreme], nominal: Solved, mode: str, variant: str | None) -> Stress:
    """The record of the worse of a check's extremes."""
    worst = max(extremes, key=lambda e: e.value)
    view = worst.board.view(item.device.name)
    at_worst = max(float(value(item.check, view)), 0.0) if item.check.unit != "degC" else float(value(item.check, view))
    now = float(value(item.check, nominal.view(item.device.name)))
    now = max(now, 0.0) if item.check.unit != "degC" else now
    rating = limit = ratio = None
    row, document, symbol = "", "", ""
    if not item.limit.missing:
        rating, limit = float(item.limit.rating(view)), float(item.limit.limit(view))
        ratio = at_worst / limit if limit > 0 else None
        found = item.limit.row
        row, document = (str(found), found.document) if found is not None else ("", "")
        symbol = next(iter(item.limit.symbols), item.check.symbols[0])
    rated = item.device.ratings.get(symbol)
    return Stress(
        item.device.name, item.check.quantity, item.check.unit, now, at_worst, rating, limit, ratio, mode,
        worst.corner, worst.proof, worst.bound, False, variant, symbol, row, document,
        rated.origin if rated is not None else "",
    )  # fmt: skip


def findings_of(stress: Stress, device: Device) -> Iterable[Finding]:
    """``stress/…``: an error above the rating, a warning above the policy's share of it."""
    if stress.rating is None or stress.limit is None:
        return
    slack = _REVERSE if stress.quantity == "reverse-polarity" else _EXACT * abs(stress.rating)
    if stress.worst > stress.rating + slack:
        level, bound, whose = "error", stress.rating, "its rating"
    elif stress.worst > stress.limit + _EXACT * abs(stress.limit) and stress.quantity != "reverse-polarity":
        level, bound, whose = "warning", stress.limit, f"the policy's limit ({stress.row or 'no row'})"
    else:
        return
    said = engineering(stress.worst, stress.unit)
    allowed = engineering(bound, stress.unit)
    where = corner_text(stress)
    yield Finding(
        f"stress/{stress.quantity}",
        "error" if level == "error" else "warning",
        f"{device.name}: {stress.quantity.replace('-', ' ')} of {said} exceeds {whose} of {allowed}{where}: "
        f"{_MENDS.get(stress.quantity, 'choose a part with a higher rating or lower the stress')}",
        quantity=stress.quantity,
        value=stress.worst,
        limit=stress.limit,
        rating=stress.rating,
        unit=stress.unit,
        mode=stress.mode,
        corner=stress.corner,
        ratio=stress.ratio,
        variant=stress.variant,
        **about(device),  # type: ignore[arg-type]  # the mapping's keys are the field names
    )


def corner_text(stress: Stress) -> str:
    """`` at PS1 = 13.2, R1 = 95`` for a sentence, with the variant."""
    parts = [f"{key} = {v:.5g}" for key, v in list(stress.corner.items())[:4]]
    if len(stress.corner) > 4:
        parts.append("...")
    where = f" at {', '.join(parts)}" if parts else ""
    return where + (f" with {stress.variant}" if stress.variant else "")


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
