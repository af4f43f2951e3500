"""The finding: one thing that the audit has to say about a board."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

Level = Literal["note", "warning", "error"]
LEVELS: tuple[Level, ...] = ("note", "warning", "error")


def rank(level: Level) -> int:
    """Order of the levels (those of SARIF 2.1.0): note 0, warning 1, error 2."""
    return LEVELS.index(level)


@dataclass(frozen=True)
class Waived:
    """That a reviewed waiver covers a finding: why, and what the waiver refers to."""

    reason: str
    reference: str = ""
    until: str = ""


@dataclass(frozen=True)
class Finding:
    """A rule that spoke, with everything needed to understand it without the netlist at hand.

    ``value``, ``limit`` and ``rating`` are in ``unit`` (SI; temperatures in degC); ``corner`` maps designators,
    ``ambient`` and names like ``D2.V_Z`` to the values (user's units, SI) at which the finding is worst.
    ``ratio`` is value / limit where that has a meaning.  A finding that is ``waived`` stays visible and does not count.
    """

    rule: str
    level: Level
    message: str
    device: str | None = None
    net: str | None = None
    pin: str | None = None
    quantity: str | None = None
    value: float | None = None
    limit: float | None = None
    rating: float | None = None
    unit: str | None = None
    mode: str | None = None
    corner: Mapping[str, float] = field(default_factory=dict)
    file: str | None = None
    line: int | None = None
    ratio: float | None = None
    variant: str | None = None
    waived: Waived | None = None
