"""One board to audit, with everything that its audit depends on besides the files."""

from __future__ import annotations

from dataclasses import dataclass

from netaudit.audit.batch import BoardResult
from netaudit.audit.records import Audit
from netaudit.audit.statistics import Plan
from netaudit.circuit.load import load_board
from netaudit.failure import InputError
from netaudit.finding import Level


@dataclass(frozen=True)
class Job:
    """A netlist and how to audit it; ``policy`` is a name or a file, ``modes`` empty for all.

    ``fail_on`` and ``require_complete`` decide the verdict, not the audit.
    """

    path: str
    root: str | None = None
    changes: tuple[str, ...] = ()
    policy: str = "none"
    nominal: bool = False
    modes: tuple[str, ...] = ()
    plan: Plan | None = None
    fail_on: Level = "error"
    require_complete: bool = False


def solve(job: Job) -> Audit:
    """The audit of a job's board.  Raises InputError for a board, policy or mode that cannot be used."""
    from netaudit.interface import LoadedBoard

    board = load_board(job.path, job.root, job.changes)
    return LoadedBoard(board).audit(job.policy, job.nominal, job.modes, job.plan)


def judged(job: Job, found: Audit) -> BoardResult:
    """The result with its verdict."""
    return BoardResult(job.path, found, found.fails(job.fail_on, job.require_complete), fail_on=job.fail_on)


def refused(job: Job, error: InputError) -> BoardResult:
    """What stands for a board that could not be read."""
    return BoardResult(job.path, None, True, str(error), error.place, job.fail_on)
