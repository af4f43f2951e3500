"""Several boards audited together: what every machine-readable report is made from."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

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
    """The boards in a fixed order and the version of netaudit; ``findings`` are those of the project as a whole."""

    boards: tuple[BoardResult, ...]
    version: str
    findings: tuple[Finding, ...] = ()

    @property
    def audited(self) -> Iterator[tuple[BoardResult, Audit]]:
        """Boards that could be read, with their audits."""
        for board in self.boards:
            if board.audit is not None:
                yield board, board.audit

    @property
    def failed(self) -> bool:
        """Whether a board fails or could not be read, or the project as a whole fails."""
        level = rank(self.boards[0].fail_on) if self.boards else 0
        return any(board.failed for board in self.boards) or any(rank(f.level) >= level for f in self.findings)

    @property
    def policies(self) -> tuple[str, ...]:
        """The policies by which boards were audited."""
        return tuple(dict.fromkeys(audit.policy for _, audit in self.audited))

    @property
    def files(self) -> dict[str, str]:
        """Every file that was read, with the SHA-256 of its content, in order of their names."""
        return dict(sorted((name, digest) for _, audit in self.audited for name, digest in audit.board.files.items()))
