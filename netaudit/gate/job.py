"""One board to audit, with everything that its audit depends on besides the files that it reads."""

from __future__ import annotations

import datetime
from dataclasses import dataclass, field, replace

from netaudit.audit.batch import BoardResult
from netaudit.audit.records import Audit
from netaudit.audit.statistics import Plan
from netaudit.circuit.load import load_board
from netaudit.failure import InputError
from netaudit.finding import Level
from netaudit.gate.waive import waived_audit
from netaudit.gate.waivers import Waivers
from netaudit.workers import IN_PROCESS, Workers


@dataclass(frozen=True)
class Verdict:
    """What decides a verdict, not the audit: the level at which a board fails, and the project's waivers.

    ``board`` is the netlist's name in waivers: its path from the project's folder.
    """

    fail_on: Level = "error"
    require_complete: bool = False
    waivers: Waivers = field(default_factory=Waivers)
    board: str = ""
    today: datetime.date = field(default_factory=datetime.date.today)


@dataclass(frozen=True)
class Job:
    """A netlist and how to audit it; ``policy`` is a name or a file, ``modes`` empty for all.

    ``tables`` are the project's part tables.  ``prefixes`` are folders that no report shall name (those into which a
    revision's files were put, each with a separator at its end): names begin behind them.  The first is that of the job's
    own folder, empty for the current one.
    """

    path: str
    root: str | None = None
    changes: tuple[str, ...] = ()
    policy: str = "none"
    nominal: bool = False
    modes: tuple[str, ...] = ()
    plan: Plan | None = None
    tables: tuple[str, ...] = ()
    prefixes: tuple[str, ...] = ()
    verdict: Verdict = field(default_factory=Verdict)

    def shown(self, text: str) -> str:
        """A text without the prefixes."""
        for prefix in filter(None, self.prefixes):
            text = text.replace(prefix, "")
        return text

    @property
    def name(self) -> str:
        """The netlist's name in reports."""
        return self.shown(self.path)


def solve(job: Job, workers: Workers = IN_PROCESS) -> Audit:
    """The audit of a job's board.  Raises InputError for a board, policy or mode that cannot be used."""
    from netaudit.interface import LoadedBoard

    board = load_board(job.path, job.root, job.changes)
    return LoadedBoard(board).audit(job.policy, job.nominal, job.modes, job.plan, workers)


def judged(job: Job, found: Audit) -> BoardResult:
    """The result with its waivers applied and its verdict."""
    verdict = job.verdict
    whole = not job.modes and not job.changes and not job.nominal
    audit = waived_audit(found, verdict.waivers, verdict.board, verdict.today, whole)
    failed = audit.fails(verdict.fail_on, verdict.require_complete)
    return BoardResult(job.name, audit, failed, fail_on=verdict.fail_on)


def refused(job: Job, error: InputError) -> BoardResult:
    """What stands for a board that could not be read."""
    place = replace(error.place, file=job.shown(error.place.file)) if error.place is not None else None
    return BoardResult(job.name, None, True, job.shown(str(error)), place, job.verdict.fail_on)


def unreached(job: Job) -> BoardResult:
    """What stands for a board that an interruption left unaudited."""
    said = f"{job.name}: not audited: interrupted before its turn"
    return BoardResult(job.name, None, True, said, None, job.verdict.fail_on, True)
