"""What an audit says, as records: stresses, coverage, findings, verdict."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from netaudit.circuit.circuit import Board
from netaudit.finding import Finding, Level, rank

if TYPE_CHECKING:
    from netaudit.audit.statistics import Plan, Sampled
    from netaudit.audit.worst import Proof
    from netaudit.solve.point import ModeResult


@dataclass(frozen=True)
class Stress:
    """A part's stress against its rating at the worst corner (SI units, temperatures in degC).

    ``rating`` is the maker's value at the actual temperature, ``limit`` the policy's share of it, ``ratio`` value over
    limit (None where there is no limit, or where it is 0).  ``variant`` names the second solution after a back-feed.
    ``row`` and ``document`` say which policy row made the limit.  ``pin`` is named where a pin has limits of its own,
    ``direction`` is -1 for its lower one (the value is then signed).
    """

    device: str
    quantity: str
    unit: str
    nominal: float
    worst: float
    rating: float | None
    limit: float | None
    ratio: float | None
    mode: str
    corner: Mapping[str, float]
    proof: Proof
    bound: float | None = None
    lower_bound: bool = False
    variant: str | None = None
    symbol: str = ""
    row: str = ""
    document: str = ""
    origin: str = ""
    pin: str | None = None
    direction: float = 1.0


@dataclass(frozen=True)
class Coverage:
    """What was looked at and what was not."""

    parts: int
    audited: int
    covered: int
    unmodelled: tuple[str, ...]
    checks: int
    checks_missing_rating: int
    values_without_spread: int
    not_audited: Mapping[str, str] = field(default_factory=dict)


@dataclass(frozen=True)
class SampledStress:
    """What drawn boards say of one stress in one mode: statistics of its ratio to the limit."""

    device: str
    quantity: str
    mode: str
    statistics: Sampled


@dataclass(frozen=True)
class PartRow:
    """A part as reports and comparisons need it, from the first mode in which it is fitted.

    ``part`` is the part number (empty when none is named), ``items`` its value, state, keys and ratings as text,
    ``pins`` its nets (None where a pin is left open).
    """

    name: str
    kind: str
    part: str
    items: Mapping[str, str]
    pins: Mapping[str, str | None]
    file: str
    line: int


@dataclass(frozen=True)
class Audit:
    """The audit of one board.

    ``generic``: parts whose rows are generic classes; ``without_row``: quantities of which the policy does not speak
    (their factor is 1); ``units`` of the keys that stand in corners; ``partial``: what an interruption left undone.
    """

    board: Board
    policy: str
    results: tuple[ModeResult, ...]
    findings: tuple[Finding, ...]
    stresses: tuple[Stress, ...]
    coverage: Coverage
    complete: bool
    nominal: bool = False
    generic: tuple[str, ...] = ()
    without_row: tuple[str, ...] = ()
    units: Mapping[str, str] = field(default_factory=dict)
    plan: Plan | None = None
    samples: tuple[SampledStress, ...] = ()
    parts: tuple[PartRow, ...] = ()
    partial: str = ""

    def fails(self, level: Level = "error", require_complete: bool = False) -> bool:
        """Whether something stands at or above the level, or is missing where completeness is required; an interrupted
        audit always fails."""
        if self.partial:
            return True
        worst = max((rank(f.level) for f in self.findings if f.waived is None), default=-1)
        return worst >= rank(level) or (require_complete and not self.complete)
