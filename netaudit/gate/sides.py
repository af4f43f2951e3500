"""Both sides of a comparison audited by the head's settings."""

from __future__ import annotations

import datetime
import os
import tempfile
from collections.abc import Sequence
from contextlib import ExitStack
from dataclasses import dataclass

from netaudit.audit.batch import BoardResult
from netaudit.audit.statistics import Plan
from netaudit.failure import InputError
from netaudit.finding import Level
from netaudit.gate.cache import Cache
from netaudit.gate.compare import Sides
from netaudit.gate.job import Job, Verdict
from netaudit.gate.run import run_jobs
from netaudit.gate.side import Side
from netaudit.gate.waivers import read_waivers
from netaudit.workers import IN_PROCESS, Workers


@dataclass(frozen=True)
class Settings:
    """How both sides are audited; ``cache`` a folder or None."""

    policy: str = "none"
    nominal: bool = False
    plan: Plan | None = None
    fail_on: Level = "error"
    require_complete: bool = False
    cache: str | None = None


def audited(base: Side, head: Side, settings: Settings, workers: Workers = IN_PROCESS) -> Sides:
    """The boards of both sides.  A board that both have alike is solved once.

    Raises KeyboardInterrupt when the workers were told to stop: half a comparison says nothing.
    """
    with ExitStack() as stack:
        folder = settings.cache
        if folder is None:
            folder = stack.enter_context(tempfile.TemporaryDirectory(prefix="netaudit-"))
        cache = Cache(folder)
        heads = _results(head, base, settings, cache, workers)
        bases = _results(base, head, settings, cache, workers)
    return Sides(
        base.name, bases, head.name, heads, (*base.remarks, *head.remarks, *_other_policies(base, head, settings))
    )


def _results(side: Side, other: Side, settings: Settings, cache: Cache, workers: Workers) -> tuple[BoardResult, ...]:
    if side.saved is not None:
        return side.saved
    prefixes = (side.prefix, *([other.prefix] if other.saved is None else []))
    waivers = read_waivers(side.project)
    today = datetime.date.today()
    jobs = [
        Job(
            f"{side.prefix}{name}", side.folder, (), settings.policy, settings.nominal, (), settings.plan, side.tables,
            prefixes, Verdict(settings.fail_on, settings.require_complete, waivers, name, today),
        )
        for name in side.boards
    ]  # fmt: skip
    results = run_jobs([j for j in jobs if j.verdict.board not in side.broken], cache, workers=workers)
    every = tuple(_broken(job, side) if job.verdict.board in side.broken else next(results) for job in jobs)
    if any(r.interrupted or (r.audit is not None and r.audit.partial) for r in every):
        raise KeyboardInterrupt
    return every


def _broken(job: Job, side: Side) -> BoardResult:
    error: InputError = side.broken[job.verdict.board]
    return BoardResult(job.verdict.board, None, True, str(error), fail_on=job.verdict.fail_on)


def _other_policies(base: Side, head: Side, settings: Settings) -> Sequence[str]:
    """Ratios of different policies cannot be compared: said when a saved report was made by another one."""
    own = os.path.splitext(os.path.basename(settings.policy))[0]
    both = [r.audit.policy for side in (base, head) for r in side.saved or () if r.audit is not None]
    if base.saved is None or head.saved is None:
        both.append(own)
    found = list(dict.fromkeys(both))
    return [f"the sides were audited by different policies ({', '.join(found)})"] if len(found) > 1 else []
