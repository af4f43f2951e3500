"""Uniqueness by structure: what can be said about the number of operating points without solving anything.

Strictly increasing two-pin branches that grow without bound to both sides, positive resistances and independent sources
have exactly one operating point (Duffin, Bull. AMS 53, 963-971, 1947; Minty, Proc. R. Soc. A 257, 194-212, 1960; Desoer
and Wu, SIAM J. Appl. Math. 26, 315-333, 1974), at fixed temperatures.  A branch that is only non-decreasing leaves
existence but not uniqueness; controlled sources leave neither.

Where all branches are at least non-decreasing the operating points form a convex set (the zeros of a maximal monotone
operator; Minty 1960).  A point that is isolated, because no branch stands at a corner and the Jacobian is regular there,
is then the only one.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.devices import KINDS
from netaudit.devices.base import Array
from netaudit.devices.families import Ramp
from netaudit.solve.solved import Solved
from netaudit.solve.system import System

#: distance from the corner of a ramp that counts as being on one side of it, relative to the ramp's own scale
_CORNER = 1e-9
#: condition number, rows and columns scaled, up to which a Jacobian counts as regular
_REGULAR = 1e12
#: unknowns up to which the condition number is looked at
_LARGEST = 600


@dataclass(frozen=True)
class Structure:
    """``unique``: exactly one operating point; ``monotone``: at least their set is convex; ``because`` in a sentence."""

    unique: bool
    monotone: bool
    because: str


def structure(system: System) -> Structure:
    """What the structure alone says, and the sentence that says why or names what is in the way."""
    flat, other = [], []
    for device in system.devices:
        growth = KINDS[device.kind].growth(device)
        if growth == "nondecreasing":
            flat.append(device.name)
        elif growth == "other":
            other.append(device.name)
    if other:
        return Structure(
            False, False, f"a controlled source or a falling characteristic is possible at {_listed(other)}"
        )
    if flat:
        said = f"a flat or vertical piece in the characteristic of {_listed(flat)} leaves existence but not uniqueness"
        return Structure(False, True, said)
    return Structure(
        True,
        True,
        "every branch is strictly increasing and the rest is passive: there is no other operating point at these "
        "temperatures (Duffin 1947; Desoer and Wu 1974)",
    )


def isolated(board: Solved) -> bool:
    """Whether no other point lies near a solved one (a batch of one): no ramp at its corner, the Jacobian regular."""
    system, num = board.system, board.num
    if system.n > _LARGEST:
        return False
    for family, index, parameters in num.branches.groups:
        if isinstance(family, Ramp):
            offset = parameters["offset"]
            distance = np.abs(board.u[..., index] - offset)
            if (distance <= _CORNER * (1.0 + np.abs(offset))).any():
                return False
    slope = num.branches.value(board.u)[1]
    return _regular(system.jacobian(num, slope)[0])


def _regular(jac: Array) -> bool:
    scaled = jac
    for _ in range(3):
        for axis in (1, 0):
            size = np.abs(scaled).max(axis=axis, keepdims=True)
            if not (size > 0).all():
                return False
            scaled = scaled / size
    return bool(np.linalg.cond(scaled) < _REGULAR)


ALONE = (
    "every branch is non-decreasing, so that the operating points form a convex set, and this one is isolated: there is "
    "no other at these temperatures (Minty 1960)"
)


def _listed(names: list[str]) -> str:
    shown = ", ".join(names[:5])
    return shown if len(names) <= 5 else f"{shown} and {len(names) - 5} more"
