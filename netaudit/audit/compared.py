"""Two revisions compared, as records: what became of findings, stresses, parts and nets."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from netaudit.audit.records import PartRow, Stress
from netaudit.finding import Finding

State = Literal["new", "worse", "better", "mended", "unchanged"]
STATES: tuple[State, ...] = ("new", "worse", "better", "mended", "unchanged")


@dataclass(frozen=True)
class Change:
    """What became of a finding of a board: ``finding`` as the head has it (a mended one as the base had it), ``before``
    as the base had it; ``blocks``: it counts against the head."""

    state: State
    board: str
    finding: Finding
    before: Finding | None
    blocks: bool = False


@dataclass(frozen=True)
class Risen:
    """A stress inside its limits whose ratio rose by more than the step."""

    board: str
    stress: Stress
    before: Stress
    blocks: bool = False


@dataclass(frozen=True)
class PartChange:
    """A part that came (``before`` None), went (``after`` None) or changed; ``items`` are what differs, old and new."""

    board: str
    before: PartRow | None
    after: PartRow | None
    items: tuple[tuple[str, str | None, str | None], ...] = ()


@dataclass(frozen=True)
class BoardNets:
    """The nets that a board has now and had not, and the other way round."""

    board: str
    added: tuple[str, ...]
    removed: tuple[str, ...]


@dataclass(frozen=True)
class Difference:
    """What became of one board."""

    changes: tuple[Change, ...] = ()
    risen: tuple[Risen, ...] = ()
    parts: tuple[PartChange, ...] = ()
    nets: tuple[BoardNets, ...] = ()


@dataclass(frozen=True)
class Comparison:
    """The head against the base, by their names; ``boards`` that came, went, or have another name now.

    ``findings`` are those of the gate (``gate/worse``), ``own`` those among them that no other finding stands behind;
    ``gaps`` boards that could be audited completely and no longer can, where that is required; ``step`` by how much of
    itself a ratio may rise.
    """

    base: str
    head: str
    step: float
    difference: Difference
    added: tuple[str, ...] = ()
    removed: tuple[str, ...] = ()
    renamed: tuple[tuple[str, str], ...] = ()
    findings: tuple[Finding, ...] = ()
    own: tuple[Finding, ...] = ()
    gaps: tuple[str, ...] = ()
    remarks: tuple[str, ...] = ()

    def of(self, state: State) -> tuple[Change, ...]:
        """The findings of one state, in the order of the head."""
        return tuple(c for c in self.difference.changes if c.state == state)
