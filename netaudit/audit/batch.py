"""Several boards audited together: what every machine-readable report is made from."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

from netaudit.audit.compared import Comparison
from netaudit.audit.records import Audit
from netaudit.finding import Finding, Level, rank
from netaudit.place import Place


@dataclass(frozen=True)
class BoardResult:
    """One board: its audit, or why it could not be read (``error``, with its place where it has one).

    ``interrupted``: it was not reached. ``failed`` is its verdict at the level ``fail_on``. An audit that comes
    from the cache has the results of its modes in outline only: points are counted, devices left out (a report that
    needs them says so in ``netaudit.report.formats``).
    """

    name: str
    audit: Audit | None
    failed: bool
    error: str = ""
    place: Place | None = None
    fail_on: Level = "error"
    interrupted: bool = False

    def counts(self, finding: Finding) -> bool:
        """Whether a finding makes the board fail."""
        return finding.waived is None and rank(finding.level) >= rank(self.fail_on)


@dataclass(frozen=True)
class Batch:
    """The boards in a fixed order and the version of netaudit; ``findings`` are those of the project as a whole.

    ``comparison``: the boards are the head of one, and only what it made worse counts.
    """

    boards: tuple[BoardResult, ...]
    version: str
    findings: tuple[Finding, ...] = ()
    comparison: Comparison | None = None

    @property
    def audited(self) -> Iterator[tuple[BoardResult, Audit]]:
        """Boards that could be read, with their audits."""
        for board in self.boards:
            if board.audit is not None:
                yield board, board.audit

    @property
    def failed(self) -> bool:
        """Whether a board fails or could not be read, or the project as a whole fails."""
        if self.comparison is not None and self.comparison.findings:
            return True
        level = rank(self.boards[0].fail_on) if self.boards else 0
        return any(self.fails(board) for board in self.boards) or any(rank(f.level) >= level for f in self.findings)

    def fails(self, board: BoardResult) -> bool:
        """Whether a board fails: in a comparison only if it cannot be read or what the change made worse is in it."""
        if self.comparison is None or board.audit is None:
            return board.failed
        changed = self.comparison.difference
        blocking = {c.board for c in changed.changes if c.blocks} | {r.board for r in changed.risen if r.blocks}
        return board.name in blocking or board.name in self.comparison.gaps

    def counts(self, board: BoardResult, finding: Finding) -> bool:
        """Whether a finding makes a board fail: in a comparison only if it is new or worse."""
        if self.comparison is None:
            return board.counts(finding)
        return id(finding) in self._blocking or finding.rule == "gate/worse"

    @cached_property
    def _blocking(self) -> frozenset[int]:
        """The findings of the head that count against it, by identity: equal ones may stand on two boards."""
        changes = self.comparison.difference.changes if self.comparison is not None else ()
        return frozenset(id(c.finding) for c in changes if c.blocks)

    @property
    def policies(self) -> tuple[str, ...]:
        """The policies by which boards were audited."""
        return tuple(dict.fromkeys(audit.policy for _, audit in self.audited))

    @property
    def files(self) -> dict[str, str]:
        """Every file that was read, with the SHA-256 of its content, in order of their names."""
        return dict(sorted((name, digest) for _, audit in self.audited for name, digest in audit.board.files.items()))
