"""Uniqueness by structure: what can be said about the number of operating points without solving anything.

Strictly increasing two-pin branches that grow without bound to both sides, positive resistances and independent sources
have exactly one operating point (Duffin, Bull. AMS 53, 963-971, 1947; Minty, Proc. R. Soc. A 257, 194-212, 1960; Desoer
and Wu, SIAM J. Appl. Math. 26, 315-333, 1974), at fixed temperatures.  A branch that is only non-decreasing leaves
existence but not uniqueness; controlled sources leave neither.
"""

from __future__ import annotations

from netaudit.devices import KINDS
from netaudit.solve.system import System


def unique_by_structure(system: System) -> tuple[bool, str]:
    """Whether the operating point is the only one, and the sentence that says why or names what is in the way."""
    flat, other = [], []
    for device in system.devices:
        growth = KINDS[device.kind].growth(device)
        if growth == "nondecreasing":
            flat.append(device.name)
        elif growth == "other":
            other.append(device.name)
    if other:
        return False, f"{_listed(other)} can act as controlled sources or have falling characteristics"
    if flat:
        return False, f"{_listed(flat)} have a flat or vertical piece, which leaves existence but not uniqueness"
    return True, (
        "every branch is strictly increasing and the rest is passive: there is no other operating point at these "
        "temperatures (Duffin 1947; Desoer and Wu 1974)"
    )


def _listed(names: list[str]) -> str:
    shown = ", ".join(names[:5])
    return shown if len(names) <= 5 else f"{shown} and {len(names) - 5} more"
